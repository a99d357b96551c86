"""Substances: elements, formulas, species, names and recipes."""
