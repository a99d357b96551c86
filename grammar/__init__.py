"""Installed as redoxq.grammar: files read by the program, no code."""
