"""Turns what the grammar recognises into the parts of a statement, while the sentence is being parsed."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from fractions import Fraction

from lark import Token, Transformer, v_args

from redoxq.errors import Place, SentenceError
from redoxq.talk.statement import (
    About,
    Contact,
    Definition,
    Liquor,
    Phrase,
    Portion,
    Quantity,
    Reaction,
    Term,
)

_THOUSANDS = re.compile(r"-?[1-9]\d{0,2}(,\d{3})+")
_NUMBER = re.compile(r"-?(\d+([.,]\d+)?|\.\d+)([eE][+-]?\d+)?")

LARGEST_COEFFICIENT = 10_000

_SAID_ONCE = {
    "volume": "The volume",
    "temperature": "The temperature",
    "pH": "The pH",
    "air": "What stands over the liquor",
}


@dataclass(frozen=True, slots=True)
class _Part:
    """A piece of a liquor, by the name of its field."""

    field: str
    value: Quantity | Phrase | Portion


def _span(*pieces: Token | Phrase | Quantity) -> Place:
    places = [place_of(piece) if isinstance(piece, Token) else piece.at for piece in pieces]
    return Place(places[0].start, places[-1].end)


def place_of(token: Token) -> Place:
    """Return where a token stands."""
    start = token.start_pos or 0
    return Place(start, start + len(token))


def number(token: Token) -> float:
    """Read a number, with a decimal point or comma."""
    at = place_of(token)
    if _THOUSANDS.fullmatch(token):
        plain, decimal = token.replace(",", ""), token.replace(",", ".", 1)
        raise SentenceError(f'"{token}" can be read in two ways.', at, f"Write {plain} or {decimal}.")
    if not _NUMBER.fullmatch(token):
        raise SentenceError(f'"{token}" is not a number that I can read.', at, "Write it as 0.5 or 5e-3.")
    value = float(token.replace(",", "."))
    if not math.isfinite(value):
        raise SentenceError(f"{token} is larger than any number I can use.", at)
    return value


def remarks(text: str) -> tuple[str, ...]:
    """Tell which numbers of a sentence were read with a decimal comma."""
    commas = re.findall(r"(?<![\w.,])-?\d+,\d+(?![\d,])", text)
    return tuple(f"{typed} is read as {typed.replace(',', '.')}" for typed in dict.fromkeys(commas))


@v_args(inline=True)
class Reader(Transformer[Token, object]):
    """One method a rule of grammar/sentence.lark."""

    def start(self, said: object) -> object:
        return said

    def contact(self, metal: tuple[Phrase, Quantity | None], liquor: tuple[_Part, ...]) -> Contact:
        name, mass = metal
        return Contact(name, mass, _liquor(liquor))

    def metal(self, *pieces: Phrase | Quantity) -> tuple[Phrase, Quantity | None]:
        name = next(piece for piece in pieces if isinstance(piece, Phrase))
        return name, next((piece for piece in pieces if isinstance(piece, Quantity)), None)

    def about(self, liquor: tuple[_Part, ...]) -> About:
        return About(_liquor(liquor))

    def definition(self, name: Phrase, liquor: tuple[_Part, ...]) -> Definition:
        return Definition(name, _liquor(liquor))

    def reaction(self, left: tuple[Term, ...], right: tuple[Term, ...], *kept: _Part) -> Reaction:
        temperature = next((part.value for part in kept if isinstance(part.value, Quantity)), None)
        return Reaction(left, right, temperature)

    def side(self, *pieces: Term | tuple[Term, ...]) -> tuple[Term, ...]:
        return tuple(term for piece in pieces for term in (piece if isinstance(piece, tuple) else (piece,)))

    def term(self, *pieces: Token | Phrase) -> Term:
        name = next(piece for piece in pieces if isinstance(piece, Phrase))
        return Term(name, next((_coefficient(piece) for piece in pieces if isinstance(piece, Token)), None))

    def liquor(self, *pieces: _Part | tuple[_Part, ...]) -> tuple[_Part, ...]:
        return tuple(part for piece in pieces for part in (piece if isinstance(piece, tuple) else (piece,)))

    def ingredient(self, *pieces: Phrase | Quantity) -> _Part:
        names = [piece for piece in pieces if isinstance(piece, Phrase)]
        strength = next((piece for piece in pieces if isinstance(piece, Quantity)), None)
        return _Part("portions", Portion(names[0], strength, names[1] if len(names) > 1 else None))

    def label(self, name: Phrase, figure: Token | None = None) -> Phrase:
        return name if figure is None else Phrase(f"{name.text} {figure}", _span(name, figure))

    def atmosphere(self, gas: Token) -> _Part:
        return _Part("air", Phrase(str(gas), place_of(gas)))

    def open_to_air(self, *words: Token) -> _Part:
        return _Part("air", Phrase("open", _span(*words)))

    def airless(self, *words: Token) -> _Part:
        return _Part("air", Phrase("none", _span(*words)))

    def aeration(self, word: Token) -> _Part:
        return _Part("air", Phrase("open" if word == "aerated" else "none", place_of(word)))

    def acidity(self, figure: Token) -> _Part:
        return _Part("pH", Quantity(number(figure), "", place_of(figure)))

    def temperature(self, figure: Token, unit: Token) -> _Part:
        return _Part("temperature", _quantity(figure, unit))

    def volume(self, figure: Token, unit: Token) -> _Part:
        return _Part("volume", _quantity(figure, unit))

    def strength(self, figure: Token, unit: Token) -> Quantity:
        return _quantity(figure, unit)

    def mass(self, figure: Token, unit: Token) -> Quantity:
        return _quantity(figure, unit)

    def name(self, *words: Token | Phrase) -> Phrase:
        text = " ".join(str(word) if isinstance(word, Token) else word.text for word in words)
        return Phrase(text, _span(*words))


def _quantity(figure: Token, unit: Token) -> Quantity:
    return Quantity(number(figure), str(unit), _span(figure, unit))


def _coefficient(token: Token) -> Fraction:
    if "/" in token:
        above, below = token.split("/")
        value = Fraction(int(above), int(below)) if int(below) else Fraction(0)
    else:
        value = Fraction(str(number(token)))
    if not 0 < value <= LARGEST_COEFFICIENT:
        raise SentenceError(f"{token} cannot count a substance in a reaction.", place_of(token),
                            f"Write a number above 0 and up to {LARGEST_COEFFICIENT}.")
    return value


def _liquor(parts: tuple[_Part, ...]) -> Liquor:
    portions = tuple(part.value for part in parts if isinstance(part.value, Portion))
    kept: dict[str, Quantity | Phrase] = {}
    for part in parts:
        if isinstance(part.value, Portion):
            continue
        if part.field in kept:
            raise SentenceError(f"{_SAID_ONCE[part.field]} is said twice.", part.value.at, "Say it once.")
        kept[part.field] = part.value
    figures = {field: value for field, value in kept.items() if isinstance(value, Quantity)}
    air = kept.get("air")
    return Liquor(
        portions,
        volume=figures.get("volume"),
        temperature=figures.get("temperature"),
        pH=figures.get("pH"),
        air=air if isinstance(air, Phrase) else None,
    )
