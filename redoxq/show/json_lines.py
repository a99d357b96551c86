"""Answers and errors as JSON objects, one a line."""

from __future__ import annotations

import json
from typing import Any

from redoxq.errors import RedoxqError
from redoxq.jobs.answers import Answer


def answer_line(sentence: str, answer: Answer) -> str:
    """One line of JSON; `statement` is the sentence as it was typed, `understood` the one that was answered."""
    return _line({**answer.to_dict(), "statement": sentence, "understood": answer.statement})


def error_line(sentence: str, error: RedoxqError) -> str:
    """One line of JSON with the error in place of an answer."""
    return _line({"statement": sentence, "error": error.to_dict()})


def _line(value: dict[str, Any]) -> str:
    return json.dumps(value, ensure_ascii=False, allow_nan=False)
