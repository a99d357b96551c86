"""redoxq: what happens when a metal meets a solution."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"

if TYPE_CHECKING:
    from redoxq.asking import ask, contact
    from redoxq.errors import RedoxqError
    from redoxq.jobs.answers import Answer, ContactAnswer
    from redoxq.talk.session import Session

__all__ = ["Answer", "ContactAnswer", "RedoxqError", "Session", "__version__", "ask", "contact"]

_HOMES = {
    "Answer": "redoxq.jobs.answers",
    "ContactAnswer": "redoxq.jobs.answers",
    "RedoxqError": "redoxq.errors",
    "Session": "redoxq.talk.session",
    "ask": "redoxq.asking",
    "contact": "redoxq.asking",
}


def __getattr__(name: str) -> Any:
    """Import a public name when it is first used, so that importing redoxq stays cheap."""
    if name not in _HOMES:
        raise AttributeError(f"module 'redoxq' has no attribute {name!r}")
    from importlib import import_module

    return getattr(import_module(_HOMES[name]), name)
