"""Masks, views, view factors and point spread: arrays in, arrays out."""
