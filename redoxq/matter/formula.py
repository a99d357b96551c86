"""Chemical formulas: read in every usual notation, kept in one canonical form."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache, lru_cache
from typing import Any

from lark import Lark, Token, Tree, UnexpectedInput

from redoxq.errors import FormulaError, Place
from redoxq.matter.elements import elements, nearest_symbol
from redoxq.matter.notation import bare_sign, charge_last
from redoxq.parsers import parser

LONGEST = 120
MOST_ATOMS = 9999
MOST_CHARGE = 30

SYMBOL = re.compile(r"[A-Z][a-z]?")
"""An element in a formula."""

_STATE = re.compile(r"\((?:I{1,3}|IV|VI{0,3})\)|II+")


@dataclass(frozen=True, slots=True)
class Formula:
    """A formula in canonical form.

    Attributes
    ----------
    text : str
        Without the phase: `Cu+2`, `CuSO4.5H2O`, `K4Fe(CN)6`.
    atoms : tuple of (str, int)
        Symbols in the order in which they first stand, with their number.
    charge : int
    phase : str or None
        s, l, g or aq where it was written.
    form : str or None
        Word that tells solids of one formula apart.
    water : int
        Molecules of crystal water.
    """

    text: str
    atoms: tuple[tuple[str, int], ...]
    charge: int
    phase: str | None = None
    form: str | None = None
    water: int = 0

    @property
    def elements(self) -> frozenset[str]:
        return frozenset(symbol for symbol, _ in self.atoms)

    @property
    def bare(self) -> str:
        """The text without the charge."""
        return re.sub(r"[+-]\d*$", "", self.text)

    def count(self, symbol: str) -> int:
        """Number of atoms of an element."""
        return dict(self.atoms).get(symbol, 0)


@cache
def _grammar() -> Lark:
    return parser("formula")


@lru_cache(maxsize=16384)
def parse_formula(text: str) -> Formula:
    """Read a formula.

    Parameters
    ----------
    text : str

    Returns
    -------
    Formula

    Raises
    ------
    FormulaError
        With the place in the text.
    """
    if len(text) > LONGEST:
        raise FormulaError(f"A formula of more than {LONGEST} characters is not read.", Place(0, len(text)))
    if state := _STATE.search(text):
        at = Place(*state.span())
        raise FormulaError(
            "A Roman numeral belongs to a name, not to a formula.", at, "Write Cu+2, or copper(II) sulfate."
        )
    plain = charge_last(text)
    try:
        return _built(_grammar().parse(plain))
    except UnexpectedInput as error:
        start = error.pos_in_stream if isinstance(error.pos_in_stream, int) and error.pos_in_stream >= 0 else len(text)
        start = min(start + len(text) - len(text.lstrip()), max(len(text) - 1, 0))
        raise FormulaError(
            f'"{text}" is not a formula that I can read.',
            Place(start, start + 1),
            "Write it like CuSO4, Cu+2, SO4-2, K4[Fe(CN)6], CuSO4.5H2O or AgCl(s).",
        ) from None


def _built(tree: Tree[Any]) -> Formula:
    first = tree.children[0]
    if first.data == "electron":
        return Formula("e-", (), -1)
    charge, phase, form = 0, None, None
    for node in tree.children[1:]:
        if node.data == "charge":
            charge = _charge(node.children)
        else:
            phase, _, word = str(node.children[0]).strip("()").partition(",")
            form = word.strip() or None
    atoms: dict[str, int] = {}
    water = 0
    parts: list[str] = []
    for node in first.find_data("part"):
        count, units = _part(node, alone=len(first.children) == 1)
        found = _atoms(units, count, {})
        if node is not first.children[0] and found == {"H": 2 * count, "O": count}:
            water += count
        for symbol, number in found.items():
            atoms[symbol] = atoms.get(symbol, 0) + number
        parts.append(_part_text(count, units, leads=not parts))
    if any(number > MOST_ATOMS for number in atoms.values()):
        raise FormulaError(f"A formula of more than {MOST_ATOMS} atoms of an element is not read.")
    text = ".".join(parts)
    return Formula(text + _charge_text(text, charge), tuple(atoms.items()), charge, phase, form, water)


def _charge(tokens: list[Any]) -> int:
    size = _number(tokens[1]) if len(tokens) > 1 else 1
    if size > MOST_CHARGE:
        raise FormulaError(f"No ion carries a charge of {size}.", _place(tokens[1]))
    return -size if tokens[0] == "-" else size


def _number(token: Token) -> int:
    """A count as a number from 1 up."""
    text = str(token)
    if len(text) > len(str(MOST_ATOMS)) or not int(text):
        raise FormulaError(f"A count of {text[:12]} is not possible.", _place(token), f"Use 1 to {MOST_ATOMS}.")
    return int(text)


def _place(token: Token) -> Place:
    return Place(token.start_pos or 0, token.end_pos or 1)


def _part(node: Tree[Any], alone: bool) -> tuple[int, list[Any]]:
    """Coefficient and units of what stands between the dots of a formula."""
    children = list(node.children)
    if not isinstance(children[0], Token):
        return 1, children
    if alone:
        hint = "A number of molecules belongs into a reaction: 2 Ag+ + Cu = Cu+2 + 2 Ag."
        raise FormulaError("A formula does not begin with a number.", _place(children[0]), hint)
    return _number(children[0]), children[1:]


def _part_text(count: int, units: list[Any], leads: bool) -> str:
    """Text of a part: crystal water as `5H2O`, a coefficient of the first part as `(CaSO4)2`."""
    text = "".join(map(_text, units))
    if count == 1:
        return text
    return f"({text}){count}" if leads else f"{count}{text}"


def _unit(node: Tree[Any]) -> tuple[list[Any], int]:
    """What a unit holds and how often."""
    children = list(node.children)
    count = 1
    last = children[-1]
    if isinstance(last, Token) and last.type == "COUNT":
        count = _number(last)
        children.pop()
    return children, count


def _atoms(units: Iterable[Any], factor: int, into: dict[str, int]) -> dict[str, int]:
    for unit in units:
        inner, count = _unit(unit)
        if isinstance(inner[0], Token):
            symbol = str(inner[0])
            if symbol not in elements():
                raise FormulaError(f'There is no element "{symbol}".', _place(inner[0]), nearest_symbol(symbol))
            into[symbol] = into.get(symbol, 0) + factor * count
        else:
            _atoms(inner, factor * count, into)
    return into


def _text(unit: Tree[Any]) -> str:
    inner, count = _unit(unit)
    if isinstance(inner[0], Token):
        return str(inner[0]) + (str(count) if count > 1 else "")
    body = "".join(map(_text, inner))
    return f"({body}){count}" if count > 1 else body


def _charge_text(body: str, charge: int) -> str:
    """The charge as it stands in canonical text; `+1` is spelled where a bare sign would be read otherwise."""
    if not charge:
        return ""
    sign = "+" if charge > 0 else "-"
    if abs(charge) > 1 or bare_sign(body, sign) != body + sign:
        return f"{sign}{abs(charge)}"
    return sign


def molar_mass(formula: Formula) -> float:
    """Molar mass in g/mol from the IUPAC atomic weights."""
    table = elements()
    return sum(table[symbol].weight * number for symbol, number in formula.atoms)
