"""The facts that rules may name, and their values over many contacts at once."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from redoxq.errors import RuleError
from redoxq.matter.tables import read_table

Booleans = NDArray[np.bool_]
Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

WORD, FLAG, NUMBER = "word", "flag", "number"
TOTAL, ACTIVITY = "total of ", "activity of "


@dataclass(frozen=True, slots=True)
class Fact:
    """One thing that a rule may ask about.

    Attributes
    ----------
    name : str
        As the code writes it: `metal_potential`. A rule says `metal potential`.
    kind : str
        word, flag or number.
    unit : str
        Of a number: K, V, mol/kg or nothing.
    least : float
        Of a number: it is never below.
    default : float or bool, optional
        Value where a contact does not give one; without it the fact must be given.
    """

    name: str
    kind: str
    unit: str = ""
    least: float = -math.inf
    default: float | bool | None = None


FACTS: Mapping[str, Fact] = MappingProxyType({fact.name: fact for fact in (
    Fact("metal", WORD),
    Fact("oxidant", WORD),
    Fact("oxidant_kind", WORD),
    Fact("plated", WORD),
    Fact("product", WORD),
    Fact("film", WORD),
    Fact("solid_product", FLAG),
    Fact("air", FLAG),
    Fact("powder", FLAG, default=False),
    Fact("attacked", FLAG),
    Fact("driving", NUMBER, "V"),
    Fact("driving_uncertainty", NUMBER, "V", 0.0, default=0.0),
    Fact("metal_potential", NUMBER, "V"),
    Fact("oxidant_potential", NUMBER, "V"),
    Fact("pH", NUMBER),
    Fact("temperature", NUMBER, "K", 0.0),
    Fact("water_activity", NUMBER, "", 0.0),
    Fact("ionic_strength", NUMBER, "mol/kg", 0.0),
)})
"""`attacked` is the engine's own finding: the oxidant goes and nothing holds the metal."""


@cache
def everyday_words() -> Mapping[str, str]:
    """Everyday words for what a liquor holds, each with its fact: chloride -> total of Cl(-I)."""
    return MappingProxyType({row["word"]: TOTAL + row["components"] for row in read_table("rule_words.csv")})


def find_fact(phrase: str) -> Fact | None:
    """The fact that a rule's phrase names, such as `metal potential`, `chloride` or `activity of H+`."""
    words = everyday_words()
    if phrase in words:
        return Fact(words[phrase], NUMBER, "mol/kg", 0.0, default=0.0)
    if phrase.startswith(TOTAL):
        return Fact(phrase, NUMBER, "mol/kg", 0.0, default=0.0)
    if phrase.startswith(ACTIVITY):
        return Fact(phrase, NUMBER, "", 0.0, default=0.0)
    return FACTS.get(phrase.replace(" ", "_"))


@dataclass(frozen=True, slots=True)
class Words:
    """A column of words, each kept once.

    Attributes
    ----------
    codes : ndarray of int, shape (rows,)
        Positions in `labels`.
    labels : tuple of str
    """

    codes: Codes
    labels: tuple[str, ...]

    def among(self, values: frozenset[str]) -> Booleans:
        """Where the word is one of `values`."""
        return np.array([label in values for label in self.labels], dtype=bool)[self.codes]

    def __getitem__(self, row: int) -> str:
        return self.labels[int(self.codes[row])]


class Facts:
    """Values of the facts, a row for each oxidant that is tried on each contact.

    Parameters
    ----------
    columns : mapping of str to array_like or Words, each shape (rows,) or a scalar
        By the names in `FACTS` and, for what the liquor holds, `total of Cl(-I)` (mol/kg) and
        `activity of H+`. What a liquor does not hold may be left out. Temperature in K,
        potentials in V against SHE.

    Raises
    ------
    RuleError
        For a column of no known name, or of another length than the others.
    """

    __slots__ = ("_columns", "rows")

    def __init__(self, columns: Mapping[str, ArrayLike | Words]) -> None:
        known = {name: _column(name, values) for name, values in columns.items()}
        lengths = {len(column) for column in (_values(column) for column in known.values())} - {1}
        if len(lengths) > 1:
            raise RuleError(f"columns of facts differ in length: {sorted(lengths)}")
        self.rows: int = lengths.pop() if lengths else 1
        self._columns = known

    def words(self, name: str) -> Words:
        """Column of words."""
        column = self._given(name)
        assert isinstance(column, Words)
        return Words(np.broadcast_to(column.codes, self.rows), column.labels)

    def flags(self, name: str) -> Booleans:
        """Column of flags."""
        return np.broadcast_to(np.asarray(self._given(name), dtype=bool), self.rows)

    def numbers(self, name: str) -> Numbers:
        """Column of numbers; `total of Hg(I) Hg(II)` is the sum of both."""
        if name in self._columns or not name.startswith(TOTAL):
            return np.broadcast_to(np.asarray(self._given(name), dtype=float), self.rows)
        sums = np.zeros(self.rows)
        for component in name.removeprefix(TOTAL).split():
            sums = sums + np.asarray(self._columns.get(TOTAL + component, 0.0), dtype=float)
        return sums

    def with_flags(self, name: str, values: Booleans) -> Facts:
        """The same facts with one more column of flags."""
        return Facts({**self._columns, name: values})

    def _given(self, name: str) -> Any:
        if name in self._columns:
            return self._columns[name]
        fact = find_fact(name)
        if fact is None or fact.default is None:
            raise RuleError(f"the contact gives no value for {name.replace('_', ' ')}")
        return fact.default


def _column(name: str, values: ArrayLike | Words) -> Any:
    fact = find_fact(name)
    if fact is None:
        raise RuleError(f"there is no fact called {name}")
    if isinstance(values, Words):
        return values
    if fact.kind == WORD:
        return _coded(values)
    return np.atleast_1d(np.asarray(values, dtype=bool if fact.kind == FLAG else float))


def _coded(values: ArrayLike) -> Words:
    texts = np.atleast_1d(np.asarray(values, dtype=str))
    if len(texts) == 1:
        return Words(np.zeros(1, dtype=np.intp), (str(texts[0]),))
    labels, codes = np.unique(texts, return_inverse=True)
    return Words(codes.astype(np.intp), tuple(str(label) for label in labels))


def _values(column: Any) -> Any:
    return column.codes if isinstance(column, Words) else column
