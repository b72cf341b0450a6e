"""Frame files in."""
