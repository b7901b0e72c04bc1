"""One neutral drawing: shapes on named layers that every file format is written from."""
