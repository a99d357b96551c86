"""Reading sentences: what is heard, what is refused and how."""

from __future__ import annotations

import re
from fractions import Fraction
from itertools import permutations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from redoxq.errors import Place, RedoxqError, SentenceError
from redoxq.talk.grammar import EXAMPLES, accepted_next, in_words, sentence_grammar
from redoxq.talk.sentences import LONGEST_SENTENCE, parse
from redoxq.talk.statement import About, Contact, Definition, Reaction, Statement


def contact(text: str) -> Contact:
    said = parse(text).said
    assert isinstance(said, Contact)
    return said


def ingredients(text: str) -> list[tuple[str, float | None, str | None]]:
    found: list[tuple[str, float | None, str | None]] = []
    for portion in contact(text).liquor.portions:
        said = portion.strength
        found.append((portion.name.text, said.value if said else None, said.unit if said else None))
    return found


def test_contact_with_amounts() -> None:
    said = contact("zinc, 20 g, in 2 L of 0.5 M CuSO4 + 0.1 M H2SO4 at 45 C under air")
    assert said.metal.text == "zinc"
    assert said.mass is not None
    assert (said.mass.value, said.mass.unit) == (20, "g")
    assert said.liquor.volume is not None
    assert (said.liquor.volume.value, said.liquor.volume.unit) == (2, "L")
    assert said.liquor.temperature is not None
    assert (said.liquor.temperature.value, said.liquor.temperature.unit) == (45, "C")
    assert said.liquor.air is not None
    assert said.liquor.air.text == "air"


@pytest.mark.parametrize("text", [
    "zinc, 20 g, in 1 M HCl", "zinc 20 g in 1 M HCl", "20 g zinc in 1 M HCl", "20 g of zinc in 1 M HCl",
    "20g of a zinc in 1 M HCl",
])
def test_mass_stands_on_either_side(text: str) -> None:
    said = contact(text)
    assert said.metal.text == "zinc"
    assert said.mass is not None
    assert said.mass.value == 20


@pytest.mark.parametrize(("written", "value", "unit"), [
    ("0.5 M", 0.5, "M"), ("0.5M", 0.5, "M"), (".5 M", 0.5, "M"), ("1e-3 mol/kg", 1e-3, "mol/kg"),
    ("5%", 5, "%"), ("5 wt%", 5, "wt%"), ("5 % w/w", 5, "% w/w"), ("10 g/l", 10, "g/l"),
    ("3 mmol/L", 3, "mmol/L"),
    ("\N{MINUS SIGN}3 M", -3, "M"), ("200 ppm", 200, "ppm"), ("0,5 M", 0.5, "M"), ("7 um", None, ""),
])
def test_strengths(written: str, value: float | None, unit: str) -> None:
    if value is None:
        with pytest.raises(SentenceError):
            parse(f"zinc in {written} CuSO4")
        return
    for sentence in (f"zinc in {written} CuSO4", f"zinc in CuSO4 {written}", f"zinc in {written} of CuSO4"):
        assert ingredients(sentence) == [("CuSO4", value, unit)]


def test_decimal_comma_is_said() -> None:
    assert parse("zinc in 0,5 M CuSO4, 0.1 M H2SO4").remarks == ("0,5 is read as 0.5",)
    assert parse("zinc in 0.5 M CuSO4, 2 g/L H2SO4").remarks == ()


def test_thousands_are_asked_about() -> None:
    with pytest.raises(SentenceError, match="two ways") as caught:
        parse("zinc in 1,000 ppm CuSO4")
    assert caught.value.hint == "Write 1000 or 1.000."


@pytest.mark.parametrize("written", [
    "45 C", "45C", "45 °C", "45 degC", "45 deg C", "45 degrees C", "45 ℃", "45 Celsius", "113 F", "113 °F",
    "318.15 K",
])
def test_temperature_units(written: str) -> None:
    temperature = contact(f"zinc in 1 M HCl at {written}").liquor.temperature
    assert temperature is not None
    assert temperature.value in (45, 113, 318.15)


@pytest.mark.parametrize(("air", "text"), [
    ("under nitrogen", "nitrogen"), ("under air", "air"), ("without air", "none"), ("with air", "air"),
    ("open to air", "open"), ("deaerated", "none"), ("aerated", "open"), ("under Ar", "Ar"),
])
def test_tail_in_any_order(air: str, text: str) -> None:
    tails = [f" at 45 C, pH 1.2, {air}"]
    tails += [" " + " ".join(order) for order in permutations(["at 45 C", "at pH 1.2", air])]
    tails += [", " + ", ".join(order) for order in permutations(["45 C", "pH 1.2", air])]
    heard = set()
    for tail in tails:
        liquor = contact("iron in 1 M HCl" + tail).liquor
        assert liquor.temperature is not None
        assert liquor.pH is not None
        assert liquor.air is not None
        heard.add((liquor.temperature.value, liquor.pH.value, liquor.air.text))
    assert heard == {(45, 1.2, text)}


@pytest.mark.parametrize(("text", "words"), [
    ("zinc in CuSO4+H2SO4", ["CuSO4", "H2SO4"]),
    ("zinc in 1 M CuSO4+1 M H2SO4", ["CuSO4", "H2SO4"]),
    ("zinc in 0.5M CuSO4+0.1M H2SO4", ["CuSO4", "H2SO4"]),
    ("zinc in 0.5 M CuSO4, 0.1 M H2SO4 and 1 g/L NaCl with 2 ppm AgNO3", ["CuSO4", "H2SO4", "NaCl", "AgNO3"]),
    ("zinc in oil of vitriol", ["oil of vitriol"]),
    ("zinc in 0.1 M (NH4)2SO4", ["(NH4)2SO4"]),
    ("zinc in 0.1 M K4[Fe(CN)6]", ["K4[Fe(CN)6]"]),
    ("zinc in 0.1 M CuSO4·5H2O", ["CuSO4·5H2O"]),
    ("zinc in 0.1 M copper(II) sulfate", ["copper(II) sulfate"]),
    ("zinc in tank 3 + 0.1 M NaCl", ["tank 3", "NaCl"]),
])
def test_names_of_ingredients(text: str, words: list[str]) -> None:
    assert [name for name, _, _ in ingredients(text)] == words


@pytest.mark.parametrize(("text", "left", "right"), [
    ("Cu+2 + 2 e- = Cu at 40 C", [(None, "Cu+2"), (2, "e-")], [(None, "Cu")]),
    ("Cu2+ + 2e-->Cu", [(None, "Cu2+"), (2, "e-")], [(None, "Cu")]),
    ("Cu²⁺ + 2e⁻ → Cu", [(None, "Cu²⁺"), (2, "e⁻")], [(None, "Cu")]),
    ("Zn+Cu+2=Zn+2+Cu", [(None, "Zn"), (None, "Cu+2")], [(None, "Zn+2"), (None, "Cu")]),
    ("HgS(s, red) ⇌ Hg+2 + S-2", [(None, "HgS(s, red)")], [(None, "Hg+2"), (None, "S-2")]),
    ("1/2 O2 + 2 H+ + 2 e- <=> H2O", [(Fraction(1, 2), "O2"), (2, "H+"), (2, "e-")], [(None, "H2O")]),
    ("0.5 O2 + H2 -> H2O", [(Fraction(1, 2), "O2"), (None, "H2")], [(None, "H2O")]),
])
def test_reactions(text: str, left: list[tuple[object, str]], right: list[tuple[object, str]]) -> None:
    said = parse(text).said
    assert isinstance(said, Reaction)
    assert [(term.coefficient, term.name.text) for term in said.left] == left
    assert [(term.coefficient, term.name.text) for term in said.right] == right


def test_definitions_and_sheets() -> None:
    said = parse("let tank 3 = 5 g/L CuSO4 + 20 g/L H2SO4 at 45 C").said
    assert isinstance(said, Definition)
    assert said.name.text == "tank 3"
    assert len(said.liquor.portions) == 2
    assert isinstance(parse("about Cu+2").said, About)
    assert isinstance(parse("About 0.5 mol/kg CuSO4 at 25 C.").said, About)


@pytest.mark.parametrize(("text", "place", "expected"), [
    ("zinc in 0.5 copper sulfate", (12, 18), "a unit of strength"),
    ("zinc in 0.5 M", (13, 13), "a name"),
    ("zinc", (4, 4), '"in"'),
    ("zinc in 1 M HCl at 45", (21, 21), "a unit of temperature"),
    ("zinc in 1 M HCl under steam", (22, 27), "a gas (air"),
    ("zinc in 1 M 😀", (12, 13), "a name"),
    ("Zn + = Cu", (5, 6), "a name"),
    ("let = 5 g/L CuSO4", (4, 5), "a name"),
    ("zinc in 1 M HCl at 45 C at 50 C", (27, 31), "once"),
    ("0 Zn = Zn+2", (0, 1), "above 0"),
    ("1/0 Zn = Zn+2", (0, 3), "above 0"),
])
def test_errors_say_where_and_what(text: str, place: tuple[int, int], expected: str) -> None:
    with pytest.raises(SentenceError) as caught:
        parse(text)
    assert caught.value.at == Place(*place)
    assert caught.value.hint is not None
    assert expected in caught.value.hint


@pytest.mark.parametrize("text", [
    "Zn | ZnSO4 0.1 M || CuSO4 1 M | Cu at 35 C", "bridge for Zn | ZnSO4 0.1 M || AgNO3 0.1 M | Ag",
    "measured 0.98 V on Zn | ZnSO4 0.1 M || CuSO4 0.1 M | Cu", "0.25 V vs Ag/AgCl sat KCl at 40 C as SHE",
    "mix 1 L of 0.1 M KMnO4 with 1 L of 1 M HCl", "which metals withstand 1 M HCl at 60 C",
    "When does nickel in 0.1 M H2SO4 turn as pH goes 0 to 10", "map copper in 0.01 M NH3", "why", "at 60 C",
    "with 0.1 M NaCl as well", "titanium instead", "zinc in rinse expect attacked, plates Cu",
    "316L in 10 wt% FeCl3", "1.4404 in water", "stainless steel in 1 M HCl", "brass in 0.1 M NH3",
    "copper joined to aluminium in 3.5 wt% NaCl, area 1:20",
])
def test_kinds_that_come_later_are_named(text: str) -> None:
    with pytest.raises(SentenceError, match="not answered yet"):
        parse(text)


@pytest.mark.parametrize("text", [
    "", "   ", "\n", "zinc\nin water", "zinc \0 in water", "zinc\x1b[31m", "\ud800", "?", "a" * 1_000_000,
    "zinc in 1e999 M HCl", "zinc in 1.2.3 M HCl",
])
def test_unusable_text_is_refused_at_once(text: str) -> None:
    with pytest.raises(SentenceError):
        parse(text)


def test_longest_sentence_is_read() -> None:
    portions = " + ".join(["1 M HCl"] * 190)
    text = f"zinc in {portions}"
    assert len(text) <= LONGEST_SENTENCE
    assert len(ingredients(text)) == 190


@given(st.text(max_size=60))
@settings(max_examples=150, deadline=1000)
def test_any_text_is_a_statement_or_an_error(text: str) -> None:
    _is_read_or_refused(text)


_PIECES = [
    "zinc", "in", "0.5", "M", "CuSO4", "+", ",", "at", "45", "C", "pH", "under", "air", "about", "let", "=",
    "of", "->", "2", "e-", "Cu+2", "with", "without", "g", "(", "|", "L", "and", "as",
]


@given(st.lists(st.sampled_from(_PIECES), max_size=14))
@settings(max_examples=300, deadline=1000)
def test_any_words_are_a_statement_or_an_error(words: list[str]) -> None:
    _is_read_or_refused(" ".join(words))


def _is_read_or_refused(text: str) -> None:
    try:
        outcome: Statement | Place | None = parse(text)
    except RedoxqError as error:
        outcome = error.at
    assert outcome is not None
    if isinstance(outcome, Place):
        assert 0 <= outcome.start <= outcome.end <= max(len(text), 1)


def test_every_terminal_has_words() -> None:
    silent = ("__IGNORE_0", "ARTICLE")
    heard = [terminal.name for terminal in sentence_grammar().terminals if terminal.name not in silent]
    assert all(in_words([name]) for name in heard)


def test_examples_are_what_the_grammar_reads() -> None:
    patterns = {terminal.name: terminal.pattern.to_regexp() for terminal in sentence_grammar().terminals}
    for terminal, examples in EXAMPLES.items():
        for example in examples:
            assert re.match(patterns[terminal], example + " ")


def test_what_may_come_next() -> None:
    assert in_words(accepted_next("zinc in 0.5")) == [
        "a unit of strength (M, mol/kg, g/L, mg/L, wt%, ppm)", "a unit of volume (L, mL, m3)",
    ]
    assert "UNDER" in accepted_next("zinc in 0.5 M CuSO4")
    assert accepted_next("zinc at") == frozenset()
