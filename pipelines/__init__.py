"""The jobs a user runs, built from the library."""
