"""The run, moment by moment: log, well and friction in, load history out."""
