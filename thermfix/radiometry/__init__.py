"""Planck, bands, air, calibration and optical laws: arrays in, arrays out."""
