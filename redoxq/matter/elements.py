"""The chemical elements and their standard atomic weights."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from redoxq.matter.tables import read_table


@dataclass(frozen=True, slots=True)
class Element:
    """An element: weight in g/mol, with its uncertainty."""

    symbol: str
    name: str
    number: int
    weight: float
    uncertainty: float
    source: str


@cache
def elements() -> Mapping[str, Element]:
    """All elements by symbol."""
    return {
        row["symbol"]: Element(
            row["symbol"],
            row["name"],
            int(row["atomic_number"]),
            float(row["atomic_weight"]),
            float(row["uncertainty"]),
            row["source"],
        )
        for row in read_table("elements.csv")
    }


def nearest_symbol(symbol: str) -> str | None:
    """A hint for a symbol that is none: the same letters in other case, or the first letter alone."""
    known = elements()
    near = [text for text in (symbol.capitalize(), symbol[0].upper()) if text in known]
    return f"Nearest: {', '.join(dict.fromkeys(near))}." if near else None
