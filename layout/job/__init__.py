"""The job reader: YAML text to an Instrument, every fault with its place."""
