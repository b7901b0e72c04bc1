"""Files read back from their bytes, and measured against the sheets they should be."""
