"""From statements to questions: names, strengths, assumptions, definitions."""

from __future__ import annotations

from fractions import Fraction
from itertools import permutations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from redoxq.errors import Place, RangeError, RecipeError, RedoxqError, SentenceError, UnknownNameError
from redoxq.jobs.questions import (
    ContactQuestion,
    Definition,
    LiquorQuestion,
    Question,
    ReactionQuestion,
    SpeciesQuestion,
)
from redoxq.matter.recipes import Air
from redoxq.talk.session import Session


def asked(*sentences: str) -> Question:
    session = Session()
    *before, last = sentences
    for sentence in before:
        session.hear(sentence)
    return session.hear(last)


def contact(*sentences: str) -> ContactQuestion:
    question = asked(*sentences)
    assert isinstance(question, ContactQuestion)
    return question


def made_of(question: ContactQuestion | LiquorQuestion | Definition) -> list[tuple[str, float, str]]:
    return [(item.formula.text, item.amount, item.unit) for item in question.recipe.ingredients]


def test_contact_with_amounts() -> None:
    question = contact("zinc, 20 g, in 2 L of 0.5 M CuSO4 + 0.1 M H2SO4 at 45 C under air")
    assert question.metal == "Zn"
    assert question.metal_mass_g == 20
    assert question.volume_L == 2
    assert made_of(question) == [("CuSO4", 0.5, "M"), ("H2SO4", 0.1, "M")]
    assert question.recipe.temperature == 318.15
    assert question.recipe.air is Air.open
    assert question.assumptions == ()
    assert question.canonical == "zinc, 20 g, in 2 L of 0.5 M CuSO4 + 0.1 M H2SO4 at 45 °C, open to air"


@pytest.mark.parametrize("text", [
    "Zn in 0.5 M CuSO4", "a zinc rod in a 0.5 M copper sulfate solution", "zinc dipped in 500 mM CuSO4",
    "a piece of zinc in 0.5 mol/L copper(II) sulfate", "zinc metal in 0.5 molar cupric sulfate.",
    "zinc in 0.25 M CuSO4 + 0.25 M copper sulphate",
])
def test_ways_to_say_the_same(text: str) -> None:
    question = contact(text)
    assert question.metal == "Zn"
    assert made_of(question) == [("CuSO4", 0.5, "M")]


def test_powder_is_kept_for_its_heat() -> None:
    assert contact("zinc dust in water").powder
    assert not contact("zinc rod in water").powder


def test_what_is_left_open_is_said() -> None:
    assert contact("zinc in copper sulfate").assumptions == (
        "1 M CuSO4, since no strength is given",
        "25 °C, since no temperature is given",
        "open to air, since nothing else is said",
    )
    assert "0,5 is read as 0.5" in contact("zinc in 0,5 M CuSO4").assumptions


@pytest.mark.parametrize(("said", "inside"), [
    ("500 mmol/L", (0.5, "M")), ("0.1 molal", (0.1, "mol/kg")), ("5%", (5, "wt%")), ("5 % w/w", (5, "wt%")),
    ("7 g/l", (7, "g/L")), ("20 mg/kg", (20, "ppm")), ("3 mg/L", (3, "mg/L")), ("2 g/kg", (2, "g/kg")),
])
def test_units_of_strength(said: str, inside: tuple[float, str]) -> None:
    assert made_of(contact(f"zinc in {said} CuSO4")) == [("CuSO4", *inside)]


@pytest.mark.parametrize(("text", "molar"), [
    ("1 N H2SO4 as H+", 0.5), ("1 N CuSO4 as Cu+2", 0.5), ("1 N NaOH as OH-", 1.0),
    ("1 N CH3COOH as H+", 1.0),
    ("0.3 N H3PO4 as H+", 0.1), ("0.2 N FeCl3 as Cl-", 0.2 / 3),
])
def test_normality_counts_the_ion(text: str, molar: float) -> None:
    (_, amount, unit), = made_of(contact(f"zinc in {text}"))
    assert unit == "M"
    assert amount == pytest.approx(molar, rel=1e-11)


@pytest.mark.parametrize(("said", "kelvins"), [
    ("45 C", 318.15), ("113 F", 318.15), ("318.15 K", 318.15), ("45 degrees C", 318.15), ("0 °C", 273.15),
])
def test_temperatures(said: str, kelvins: float) -> None:
    assert contact(f"zinc in water at {said}").recipe.temperature == pytest.approx(kelvins, abs=1e-9)


@pytest.mark.parametrize(("said", "air"), [
    ("under air", Air.open), ("open to air", Air.open), ("aerated", Air.open), ("without air", Air.none),
    ("deaerated", Air.none), ("under argon", Air.none), ("under N2", Air.nitrogen),
    ("under oxygen", Air.oxygen), ("with hydrogen", Air.hydrogen),
])
def test_air(said: str, air: Air) -> None:
    assert contact(f"zinc in water, {said}").recipe.air is air


def test_tails_in_any_order_ask_the_same() -> None:
    tails = permutations(["at 60 C", "pH 1.2", "under nitrogen"])
    questions = {contact("iron in 10 wt% FeCl3 " + " ".join(tail)) for tail in tails}
    assert len(questions) == 1


def test_ions_that_balance() -> None:
    assert len(made_of(contact("zinc in 0.5 M Cu+2 + 1 M Cl-"))) == 2
    assert len(made_of(contact("zinc in 0.1 mol/kg Na+ + 0.1 mol/kg Cl- + 1 M HCl"))) == 3


def test_names_that_hold_a_strength() -> None:
    question = contact("iron nail in battery acid")
    assert made_of(question) == [("H2SO4", 35, "wt%")]
    assert question.assumptions[0] == "battery acid is taken as 35 wt% H2SO4"
    assert isinstance(asked("about seawater"), LiquorQuestion)


def test_water_alone() -> None:
    assert made_of(contact("aluminium in water")) == []
    assert contact("aluminium in water").canonical == "aluminium in water at 25 °C, open to air"


def test_definitions() -> None:
    let = "let rinse = 5 g/L CuSO4 + 20 g/L H2SO4 at 45 C"
    plain = contact(let, "zinc in Rinse")
    assert made_of(plain) == [("CuSO4", 5, "g/L"), ("H2SO4", 20, "g/L")]
    assert plain.recipe.temperature == 318.15
    assert plain.assumptions == ("open to air, since nothing else is said",)
    changed = contact(let, "zinc in 2 L of rinse + 1 g/L NaCl at 60 C, pH 3, without air")
    assert changed.recipe.temperature == 333.15
    assert changed.recipe.pH == 3
    assert changed.volume_L == 2
    assert made_of(changed)[-1] == ("NaCl", 1, "g/L")
    assert isinstance(asked(let, "about rinse"), LiquorQuestion)
    assert contact("let tank 3 = 1 M HCl", "zinc in tank 3") == contact("zinc in 1 M HCl")


def test_a_name_can_be_given_again() -> None:
    assert made_of(contact("let dip = 1 M HCl", "let dip = 2 M HCl", "zinc in dip")) == [("HCl", 2, "M")]


def test_a_failed_definition_is_not_remembered() -> None:
    session = Session()
    with pytest.raises(UnknownNameError):
        session.hear("let dip = 1 M nosuchthing")
    assert session.definitions == {}


@pytest.mark.parametrize(("text", "kind", "formula"), [
    ("about Cu+2", None, "Cu+2"), ("about zinc", "metal", "Zn"), ("about Zn", "metal", "Zn"),
    ("about copper sulfate", "salt", "CuSO4"), ("about AgCl(s)", None, "AgCl"), ("about water", None, "H2O"),
])
def test_fact_sheets(text: str, kind: str | None, formula: str) -> None:
    question = asked(text)
    assert isinstance(question, SpeciesQuestion)
    assert question.formula.text == formula
    assert kind is None or question.kind == kind
    assert question.temperature == 298.15


def test_sheet_of_a_liquor() -> None:
    question = asked("about 0.1 M NH3 + 0.1 M NH4Cl at 40 C")
    assert isinstance(question, LiquorQuestion)
    assert question.canonical == "about 0.1 M NH3 + 0.1 M NH4Cl at 40 °C, open to air"


def test_reactions() -> None:
    question = asked("HgS(s, red) + 2 e- = Hg(l) + S2- at 40 C")
    assert isinstance(question, ReactionQuestion)
    assert [(term.coefficient, term.formula.text, term.formula.phase) for term in question.left] == [
        (None, "HgS", "s"), (Fraction(2), "e-", None)]
    assert question.left[0].formula.form == "red"
    assert question.temperature == 313.15
    assert question.canonical == "HgS(s, red) + 2 e- -> Hg(l) + S-2 at 40 °C"


def test_reactions_may_use_names() -> None:
    question = asked("zinc + copper sulfate -> zinc sulfate + copper")
    assert question == asked("Zn + CuSO4 = ZnSO4 + Cu")


@pytest.mark.parametrize(("text", "place", "error", "says"), [
    ("zinc in 0.5 M coper sulfate", (14, 27), UnknownNameError, "copper sulfate"),
    ("zink in 0.5 M CuSO4", (0, 4), UnknownNameError, "zinc"),
    ("zinc in zinc", (8, 12), SentenceError, "metal"),
    ("water in zinc", (0, 5), SentenceError, "not a metal"),
    ("chlorine in water", (0, 8), SentenceError, "gas"),
    ("copper sulfate in water", (0, 14), SentenceError, "salt"),
    ("zinc in chlorine", (8, 16), RecipeError, "How much"),
    ("zinc in 0.5 M water", (8, 13), RecipeError, "no strength"),
    ("zinc in 1 N H2SO4", (8, 11), RecipeError, "1 N H2SO4 as H+"),
    ("zinc in 1 N CuSO4 as Cl-", (21, 24), RecipeError, "does not hold"),
    ("zinc in -3 M CuSO4", (8, 12), RecipeError, ""),
    ("zinc in 200 wt% CuSO4", (8, 15), RecipeError, ""),
    ("zinc in 1 M HCl, pH 40", (20, 22), RecipeError, ""),
    ("zinc in 1 M HCl at 400 C", (19, 24), RangeError, ""),
    ("zinc in 0.5 M Cu+2", (14, 18), RecipeError, "positive charge"),
    ("zinc in 0.5 M Cu+2 + 0.5 M Cl-", (14, 30), RecipeError, "positive charge"),
    ("zinc in 1 g/L Na+ + 1 g/L Cl-", (14, 29), RecipeError, "positive charge"),
    ("zinc, 0 g, in water", (6, 9), SentenceError, "above zero"),
    ("zinc in 0 L of water", (8, 11), RecipeError, "above zero"),
    ("let zinc = 1 M HCl", (4, 8), SentenceError, "something already"),
])
def test_errors(text: str, place: tuple[int, int], error: type[RedoxqError], says: str) -> None:
    with pytest.raises(error) as caught:
        asked(text)
    assert caught.value.at == Place(*place)
    assert says in f"{caught.value.message} {caught.value.hint}"


def test_errors_about_defined_liquors() -> None:
    with pytest.raises(UnknownNameError) as caught:
        asked("let rinse = 1 M HCl", "zinc in rinze")
    assert caught.value.hint == "Nearest: rinse, which you defined."
    with pytest.raises(RecipeError):
        asked("let rinse = 1 M HCl", "zinc in 0.5 M rinse")
    with pytest.raises(SentenceError):
        asked("let rinse = 1 M HCl", "let dip = 1 M NaCl", "zinc in rinse + dip")


_METALS = st.sampled_from(["zinc", "Cu", "iron powder", "silver wire"])
_UNITS = st.sampled_from(["M", "mM", "mol/kg", "g/L", "wt%", "ppm"])
_STRENGTHS = st.builds("{:g} {}".format, st.floats(1e-4, 5), _UNITS)
_SALTS = st.sampled_from(["CuSO4", "copper sulfate", "HCl", "NaOH", "FeCl3", "sodium chloride", "CuSO4.5H2O"])
_INGREDIENTS = st.lists(st.builds("{} {}".format, _STRENGTHS, _SALTS), min_size=1, max_size=3).map(" + ".join)
_CONDITIONS = st.sampled_from(["at 45 C", "pH 1.2", "without air"])
_TAILS = st.lists(_CONDITIONS, unique=True, max_size=3).map(" ".join)
_MASSES = st.sampled_from(["", ", 20 g,", ", 0.3 kg,"])


@given(st.builds("{}{} in {} {}".format, _METALS, _MASSES, _INGREDIENTS, _TAILS))
@settings(max_examples=100, deadline=1000)
def test_canonical_sentences_ask_the_same(text: str) -> None:
    question = asked(text)
    again = asked(question.canonical)
    assert again == question
    assert again.canonical == question.canonical
    assert again.assumptions == ()


@pytest.mark.parametrize("text", [
    "about Cu+2", "about zinc", "about copper sulfate at 40 C", "about 0.1 M NH3 + 0.1 M NH4Cl",
    "let rinse = 5 g/L CuSO4 at 45 C", "let rinse = 1 M HCl without air", "let rinse = water",
    "1/2 O2 + H2O + 2 e- = 2 OH-", "AgCl(s) = Ag+ + Cl- at 60 C", "KMnO4 + HCl = KCl + MnCl2 + Cl2 + H2O",
])
def test_canonical_sentences_of_other_kinds(text: str) -> None:
    question = asked(text)
    assert asked(question.canonical) == question


@given(st.text(alphabet="zincu CuSO4+-=.,()[]0125MLgatpH|&é\u2212²⁺", max_size=40))
@settings(max_examples=150, deadline=1000)
def test_any_text_is_a_question_or_an_error(text: str) -> None:
    try:
        outcome: Question | Place | None = asked(text)
    except RedoxqError as error:
        outcome = error.at
    assert outcome is not None
