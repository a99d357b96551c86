"""Chemical formulas: read in every usual notation, kept in one canonical form."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache, lru_cache
from importlib.resources import files
from typing import Any

from lark import Lark, Token, Tree, UnexpectedInput

from redoxq.errors import FormulaError, Place
from redoxq.matter.elements import elements, nearest_symbol

LONGEST = 120
MOST_ATOMS = 9999

_PLAIN = str.maketrans("₀₁₂₃₄₅₆₇₈₉₊₋−–·•*", "0123456789+---...")
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")

_PHASE = re.compile(r"\((?:s|l|g|aq)(?:,\s*[\w ]+)?\)$")
_MARKED = re.compile(r"(.*?)(?:\^\{?|\()(\d{0,3})([+-])(\d{0,3})[})]?$")
_SIGNED = re.compile(r"(.*?)([+-])(\d{1,3})$")
_REPEATED = re.compile(r"(.*?[^+-])(\++|-+)$")
_ELEMENT = re.compile(r"[A-Z][a-z]?$")

CHAINS = frozenset({"I3", "Br3", "Cl3", "N3", "O2", "O3", "S2O8"})
"""Ions written `I3-`: here the digit counts atoms, elsewhere (`S2-`, `Cu2+`) it is the charge."""


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

    def count(self, symbol: str) -> int:
        """Number of atoms of an element."""
        return dict(self.atoms).get(symbol, 0)


@cache
def _grammar() -> Lark:
    return Lark((files("redoxq.grammar") / "formula.lark").read_text("utf-8"), parser="lalr", maybe_placeholders=False)


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
    plain = _charge_last(text)
    try:
        tree = _grammar().parse(plain)
    except UnexpectedInput as error:
        start = error.pos_in_stream if isinstance(error.pos_in_stream, int) and error.pos_in_stream >= 0 else len(text)
        start = min(start, max(len(text) - 1, 0))
        raise FormulaError(
            f'"{text}" is not a formula that I can read.',
            Place(start, start + 1),
            "Write it like CuSO4, Cu+2, SO4-2, K4[Fe(CN)6], CuSO4.5H2O or AgCl(s).",
        ) from None
    return _built(tree)


def _charge_last(text: str) -> str:
    """Bring every way of writing a charge to a sign and a number at the end, before the phase."""
    raised = re.sub(r"[⁰¹²³⁴⁵⁶⁷⁸⁹]*[⁺⁻]+[⁰¹²³⁴⁵⁶⁷⁸⁹]*", lambda found: "^" + found[0].translate(_RAISED), text.strip())
    plain = raised.translate(_PLAIN).translate(_RAISED)
    phase = _PHASE.search(plain)
    end = phase[0] if phase else ""
    body = plain[: len(plain) - len(end)]
    if body == "e-" or (not body.endswith(("+", "-", ")", "}")) and not _SIGNED.match(body)):
        return plain
    if marked := _MARKED.match(body):
        return f"{marked[1]}{marked[3]}{marked[2] or marked[4]}{end}"
    if _SIGNED.match(body) and not body.endswith(("+", "-")):
        return plain
    if repeated := _REPEATED.match(body):
        return _bare_sign(repeated[1], repeated[2]) + end
    return plain


def _bare_sign(body: str, signs: str) -> str:
    """`Cu2+` is Cu+2, `SO42-` is SO4-2, `I3-` and `NH4+` carry one charge."""
    if len(signs) > 1:
        return f"{body}{signs[0]}{len(signs)}"
    core = body.rstrip("0123456789")
    digits = body[len(core) :]
    if not digits or (len(digits) == 1 and not _ELEMENT.match(core)) or body in CHAINS:
        return body + signs
    return f"{core}{digits[:-1]}{signs}{digits[-1]}"


def _built(tree: Tree[Any]) -> Formula:
    first = tree.children[0]
    if first.data == "electron":
        return Formula("e-", (), -1)
    charge, phase, form = 0, None, None
    for node in tree.children[1:]:
        token = "".join(map(str, node.children))
        if node.data == "charge":
            charge = int(token + "1" if token in "+-" else token[:4])
        else:
            phase, _, word = token.strip("()").partition(",")
            form = word.strip() or None
    atoms: dict[str, int] = {}
    water = 0
    parts = []
    for node in first.find_data("part"):
        count, units = _part(node)
        found = _atoms(units, count, {})
        if node is not first.children[0] and found == {"H": 2 * count, "O": count}:
            water += count
        for symbol, number in found.items():
            atoms[symbol] = atoms.get(symbol, 0) + number
        parts.append((str(count) if count > 1 else "") + "".join(map(_text, units)))
    if any(not 0 < number <= MOST_ATOMS for number in atoms.values()):
        raise FormulaError("A count in the formula is zero or too large.", Place(0, 1))
    return Formula(".".join(parts) + _charge_text(charge), tuple(atoms.items()), charge, phase, form, water)


def _part(node: Tree[Any]) -> tuple[int, list[Any]]:
    children = list(node.children)
    if isinstance(children[0], Token):
        return int(str(children[0])[:6]), children[1:]
    return 1, children


def _unit(node: Tree[Any]) -> tuple[list[Any], int]:
    """What a unit holds and how often."""
    children = list(node.children)
    count = 1
    if isinstance(children[-1], Token) and children[-1].type == "COUNT":
        count = int(str(children.pop())[:6])
    return children, count


def _atoms(units: Iterable[Any], factor: int, into: dict[str, int]) -> dict[str, int]:
    for unit in units:
        inner, count = _unit(unit)
        if isinstance(inner[0], Token):
            symbol = str(inner[0])
            if symbol not in elements():
                at = Place(inner[0].start_pos or 0, inner[0].end_pos or 1)
                raise FormulaError(f'There is no element "{symbol}".', at, nearest_symbol(symbol))
            into[symbol] = into.get(symbol, 0) + factor * count
        else:
            _atoms(inner, factor * count, into)
    return into


def _text(unit: Tree[Any]) -> str:
    inner, count = _unit(unit)
    number = str(count) if count != 1 else ""
    if isinstance(inner[0], Token):
        return str(inner[0]) + number
    body = "".join(map(_text, inner))
    return f"({body}){number}" if number or len(inner) > 1 else body


def _charge_text(charge: int) -> str:
    if not charge:
        return ""
    sign = "+" if charge > 0 else "-"
    return sign if abs(charge) == 1 else f"{sign}{abs(charge)}"


def molar_mass(formula: Formula) -> float:
    """Molar mass in g/mol from the IUPAC atomic weights."""
    table = elements()
    return sum(table[symbol].weight * number for symbol, number in formula.atoms)
