"""stopwright: where every stop lies on a real string, and the files to cut it."""

__version__ = "0.1.0"
