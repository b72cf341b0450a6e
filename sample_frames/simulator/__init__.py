"""Forward simulation of thermal frames, wavelength by wavelength. Knows nothing of the correction code."""
