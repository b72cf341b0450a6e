"""Result files out, written atomically."""
