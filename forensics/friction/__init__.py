"""Friction: steady readings, calibration, and what the data can tell."""
