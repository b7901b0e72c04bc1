"""A sheet or a plan written as the bytes of one format, and stored safely."""
