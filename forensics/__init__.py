"""Tallyback's library: what a drilling run's logs say about how its string was loaded."""

__version__ = "0.1.0"
