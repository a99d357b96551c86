"""What a rule of practice is: a condition, its effects, why, and who says so."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from redoxq.rules.conditions import Condition

HAPPENINGS: Final = ("dissolves", "plates", "gas", "film", "precipitate", "pitting", "dealloys", "embrittles")
PACES: Final = ("slow", "supply-limited", "fast")
SETTLING: Final = ("oxidant idle", "oxidant acts", "film holds", "film breaks")
"""Effects that decide whether a metal is attacked; the others only tell more about it."""


@dataclass(frozen=True, slots=True)
class Effect:
    """What a rule does.

    Attributes
    ----------
    kind : str
        oxidant, film, happening, pace, caution or hazard.
    subject : str
        idle or acts; holds or breaks; the happening; the pace; the topic; the gas.
    text : str
        What a caution or hazard says; the species of a happening, where the metal itself is not meant.
    topic : str
        Of a hazard: fire, poison, explosion, pressure.
    """

    kind: str
    subject: str
    text: str = ""
    topic: str = ""

    @property
    def settles(self) -> bool:
        """Whether it bears on the verdict."""
        return f"{self.kind} {self.subject}" in SETTLING


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule of practice, and where it stands."""

    id: str
    condition: Condition
    effects: tuple[Effect, ...]
    because: str
    source: str
    file: str
    line: int
