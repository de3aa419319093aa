"""Loads along the string and the limits they are judged by: pure functions of arrays."""
