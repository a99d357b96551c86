"""The errors a user can meet: each says what, where and what to do."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any


@dataclass(frozen=True, slots=True)
class Place:
    """Half-open range of characters, `[start, end)`, in the text that was read."""

    start: int
    end: int


class RedoxqError(Exception):
    """Base of all errors that redoxq raises on purpose.

    Parameters
    ----------
    message : str
        What is wrong, in the user's words.
    at : Place, optional
        Where in the sentence.
    hint : str, optional
        What to do about it, such as the nearest known names.
    """

    code = "error"

    def __init__(self, message: str, at: Place | None = None, hint: str | None = None) -> None:
        super().__init__(message)
        self.message = message
        self.at = at
        self.hint = hint

    def placed(self, at: Place) -> RedoxqError:
        """Return this error with a place, unless it has one already."""
        if self.at is None:
            self.at = at
        return self

    def to_dict(self) -> dict[str, Any]:
        """Return the `error` object of the JSON contract."""
        at = None if self.at is None else [self.at.start, self.at.end]
        return {"code": self.code, "message": self.message, "at": at, "hint": self.hint}


class SentenceError(RedoxqError):
    """The sentence is not one of the grammar."""

    code = "sentence"


class FormulaError(RedoxqError):
    """A chemical formula cannot be read."""

    code = "formula"


class UnknownNameError(RedoxqError):
    """A name that is in no table."""

    code = "unknown-name"


class RecipeError(RedoxqError):
    """A liquor that cannot be made: impossible strength, charge or pH."""

    code = "recipe"


class RangeError(RedoxqError):
    """A condition outside the reach of the data or the model."""

    code = "range"


class ReactionError(RedoxqError):
    """A reaction that cannot be balanced or computed."""

    code = "reaction"


class DataError(RedoxqError):
    """A table or a rule file that breaks its own rules; the message gives file, row and column."""

    code = "data"


class RuleError(RedoxqError):
    """A practice rule that cannot be read or used."""

    code = "rule"


class NotConvergedError(RedoxqError):
    """The equilibrium solver could not certify a solution."""

    code = "not-converged"
