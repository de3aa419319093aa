"""Logs: any file to one SI table with its history."""
