"""Episodes: thresholds passed, spans of time, groups, causes, and the finding in words."""
