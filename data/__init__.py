"""Installed as redoxq.data: files read by the program, no code."""
