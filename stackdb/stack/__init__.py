"""A stack of layers: its text, its file, its numbers from the catalogue, and the series sum."""
