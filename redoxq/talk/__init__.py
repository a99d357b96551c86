"""Sentences: read, resolved against the tables, turned into questions."""
