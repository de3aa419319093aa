"""The run to explore: one page in which a reader moves through time himself."""
