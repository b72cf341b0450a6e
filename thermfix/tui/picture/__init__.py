"""The picture of a frame on the terminal: colour scales and ranges, dots, overlays, and two widgets."""
