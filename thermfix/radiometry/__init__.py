"""Planck, bands, air, calibration and optical laws: arrays in, arrays out."""

from thermfix.radiometry.band import Band

__all__ = ["Band"]
