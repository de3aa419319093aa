"""Figures of the report: functions that return a matplotlib Figure."""
