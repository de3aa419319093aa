"""Sections of the report: each module turns findings into content elements."""
