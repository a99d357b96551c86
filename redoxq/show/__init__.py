"""Answers for people and for programs."""
