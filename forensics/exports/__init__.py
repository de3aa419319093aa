"""Results as files: Parquet, CSV, and JSON with its schema."""
