"""How large a frame file may be. Checked from headers, before memory is taken."""

MOST_PIXELS = 64 * 2**20
"""Pixels of one frame."""

MOST_PAGES = 10_000_000
"""Pages of one file."""

MOST_TEXT_BYTES = 512 * 2**20
"""Size of a text grid."""

MOST_LINE_BYTES = 16 * 2**20
"""Length of one line of a text grid."""
