"""redoxq: what happens when a metal meets a solution."""

__version__ = "0.1.0"
