"""Inspection files in and out."""
