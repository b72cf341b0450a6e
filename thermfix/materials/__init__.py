"""The library of materials: data, look-up and search."""
