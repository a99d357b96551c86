"""Formulas in every usual notation, their canonical form, and what is no formula."""

from __future__ import annotations

import string

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from redoxq.errors import FormulaError, Place
from redoxq.matter.catalogue import catalogue
from redoxq.matter.elements import elements
from redoxq.matter.formula import LONGEST, Formula, molar_mass, parse_formula

NOTATIONS = {
    "Cu+2": ["Cu+2", "Cu2+", "Cu++", "Cu^2+", "Cu^+2", "Cu^{2+}", "Cu(2+)", "Cu(+2)", "Cu²⁺", " Cu2+ "],
    "Fe+3": ["Fe+3", "Fe3+", "Fe+++", "Fe³⁺"],
    "Ag+": ["Ag+", "Ag^+", "Ag⁺", "Ag+1"],
    "Cl-": ["Cl-", "Cl^-", "Cl⁻", "Cl−"],
    "S-2": ["S-2", "S2-", "S--", "S²⁻"],
    "SO4-2": ["SO4-2", "SO42-", "SO4--", "SO4^2-", "SO₄²⁻", "SO4(2-)", "SO₄2−", "[SO4]2-"],
    "PO4-3": ["PO4-3", "PO43-", "PO4^3-"],
    "Cr2O7-2": ["Cr2O7-2", "Cr2O72-", "Cr₂O₇²⁻"],
    "Mo7O24-6": ["Mo7O24-6", "Mo7O246-"],
    "MnO4-": ["MnO4-", "MnO4^-", "MnO₄⁻"],
    "NH4+": ["NH4+", "NH₄⁺"],
    "I3-": ["I3-", "I3^-", "I₃⁻"],
    "N3-": ["N3-"],
    "O2-": ["O2-"],
    "O2-2": ["O2-2", "O22-", "O2^2-"],
    "Hg2+2": ["Hg2+2", "Hg22+", "Hg2^2+", "Hg₂²⁺"],
    "Hg+2": ["Hg2+", "Hg+2"],
    "VO2+": ["VO2+", "VO2^+"],
    "VO+2": ["VO+2", "VO^2+", "VO²⁺"],
    "TiO+2": ["TiO2+", "TiO+2"],
    "FeOH+2": ["FeOH2+", "FeOH+2"],
    "Fe(OH)2+": ["Fe(OH)2+", "Fe(OH)2^+", "[Fe(OH)2]+"],
    "CuCl2-": ["CuCl2-"],
    "Zn(OH)4-2": ["Zn(OH)4-2", "Zn(OH)42-", "[Zn(OH)4]2-"],
    "Cu(NH3)4+2": ["Cu(NH3)4+2", "Cu(NH3)42+", "[Cu(NH3)4]2+", "[Cu(NH3)4]^2+", "[Cu(NH3)4]²⁺"],
    "Fe(CN)6-4": ["Fe(CN)6-4", "[Fe(CN)6]4-", "[Fe(CN)6]----"],
    "K4Fe(CN)6": ["K4[Fe(CN)6]", "K4Fe(CN)6"],
    "CuSO4.5H2O": ["CuSO4.5H2O", "CuSO4·5H2O", "CuSO4*5H2O", "CuSO₄•5H₂O", "CuSO4 · 5H2O"],
    "(CaSO4)2.H2O": ["2CaSO4.H2O"],
    "e-": ["e-", "e⁻", "e−", "e^-"],
}


@pytest.mark.parametrize(("canonical", "written"), [(text, one) for text, ways in NOTATIONS.items() for one in ways])
def test_every_notation_of_an_ion_comes_to_one_form(canonical: str, written: str) -> None:
    formula = parse_formula(written)
    assert formula.text == canonical
    assert formula == parse_formula(canonical)


@pytest.mark.parametrize(
    ("text", "atoms", "charge"),
    [
        ("Fe2(SO4)3", {"Fe": 2, "S": 3, "O": 12}, 0),
        ("K4[Fe(CN)6]", {"K": 4, "Fe": 1, "C": 6, "N": 6}, 0),
        ("KAl(SO4)2.12H2O", {"K": 1, "Al": 1, "S": 2, "O": 20, "H": 24}, 0),
        ("CuSO4.3Cu(OH)2", {"Cu": 4, "S": 1, "O": 10, "H": 6}, 0),
        ("2CaSO4.H2O", {"Ca": 2, "S": 2, "O": 9, "H": 2}, 0),
        ("CH3COO-", {"C": 2, "H": 3, "O": 2}, -1),
        ("Pb3(CO3)2(OH)2", {"Pb": 3, "C": 2, "O": 8, "H": 2}, 0),
        ("Co", {"Co": 1}, 0),
        ("CO", {"C": 1, "O": 1}, 0),
    ],
)
def test_atoms_are_counted_through_brackets_and_dots(text: str, atoms: dict[str, int], charge: int) -> None:
    formula = parse_formula(text)
    assert dict(formula.atoms) == atoms
    assert formula.charge == charge


@pytest.mark.parametrize(
    ("text", "water"), [("CuSO4.5H2O", 5), ("CuSO4", 0), ("2CaSO4.H2O", 1), ("CuSO4.3Cu(OH)2.2H2O", 2), ("H2O", 0)]
)
def test_crystal_water_is_told_apart(text: str, water: int) -> None:
    assert parse_formula(text).water == water


@pytest.mark.parametrize(
    ("text", "bare", "phase", "form"),
    [
        ("H2(g)", "H2", "g", None),
        ("AgCl(s)", "AgCl", "s", None),
        ("HgS(s, red)", "HgS", "s", "red"),
        ("HgS(s,red)", "HgS", "s", "red"),
        ("CO2(aq)", "CO2", "aq", None),
        ("Cu2+(aq)", "Cu+2", "aq", None),
        ("[Cu(NH3)4]2+ (aq)", "Cu(NH3)4+2", "aq", None),
        ("H2O(l)", "H2O", "l", None),
    ],
)
def test_phases(text: str, bare: str, phase: str, form: str | None) -> None:
    formula = parse_formula(text)
    assert (formula.text, formula.phase, formula.form) == (bare, phase, form)


@pytest.mark.parametrize(
    ("text", "place", "told"),
    [
        ("Xx2O", Place(0, 2), "no element"),
        ("CuSo4", Place(2, 4), "no element"),
        ("Na2Qo3", Place(3, 5), "no element"),
        ("Cu0", Place(2, 3), "count of 0"),
        ("Cu(OH)0", Place(6, 7), "count of 0"),
        ("H99999", Place(1, 6), "count of 99999"),
        ("Cu(OH)2)", Place(7, 8), "cannot|not a formula"),
        ("(Cu", Place(1, 2), "not a formula"),
        ("Cu()", Place(3, 4), "not a formula"),
        ("2H2O", Place(0, 1), "begin with a number"),
        ("Fe(III)", Place(2, 7), "Roman numeral"),
        ("FeII", Place(2, 4), "Roman numeral"),
        ("Cu+31", Place(3, 5), "charge of 31"),
        ("Cu+0", Place(3, 4), "count of 0"),
    ],
)
def test_what_is_no_formula_is_told_with_its_place(text: str, place: Place, told: str) -> None:
    with pytest.raises(FormulaError, match=told) as raised:
        parse_formula(text)
    assert raised.value.at == place


@pytest.mark.parametrize(
    "text",
    ["", " ", "+", "-", "2+", "cu", "Cu+3+", "Cu--2", "Cu(2+", "Cu^2+3", "(s)", "CuSO4.", ".5H2O", "Cu٢+", "H½O",
     "Cu SO4", "[Cu)", "C" * 121, "((((" * 20, "Cu\x00", "🜠"],
)  # fmt: skip
def test_other_text_is_refused(text: str) -> None:
    with pytest.raises(FormulaError):
        parse_formula(text)


def test_a_formula_of_too_many_atoms_is_refused() -> None:
    with pytest.raises(FormulaError, match="atoms"):
        parse_formula("(H9999)9999")


def test_case_tells_cobalt_from_carbon_monoxide() -> None:
    assert parse_formula("Co").elements == {"Co"}
    assert parse_formula("CO").elements == {"C", "O"}


# CRC Handbook of Chemistry and Physics, 95th ed., section 4 (Physical Constants of Inorganic Compounds), from memory;
# that edition has sulfur at 32.065, the table of elements at 32.06.
MOLAR_MASSES = [("CuSO4", 159.609), ("CuSO4.5H2O", 249.685), ("K4Fe(CN)6", 368.343), ("KMnO4", 158.034),
                ("Na2S2O3", 158.108), ("HgCl2", 271.50), ("AgNO3", 169.873), ("PbCrO4", 323.2)]  # fmt: skip


@pytest.mark.parametrize(("text", "grams"), MOLAR_MASSES)
def test_molar_masses(text: str, grams: float) -> None:
    assert molar_mass(parse_formula(text)) == pytest.approx(grams, rel=1e-4)


def test_every_species_stands_in_canonical_form() -> None:
    assert [one.text for one in catalogue().species if one.formula.text != one.text] == []


_SYMBOLS = st.sampled_from(sorted(elements()))
_COUNTS = st.one_of(st.just(""), st.integers(1, 20).map(str))
_UNITS = st.builds("{}{}".format, _SYMBOLS, _COUNTS)
_BODIES = st.recursive(
    st.lists(_UNITS, min_size=1, max_size=3).map("".join),
    lambda inner: st.builds("{}({}){}".format, _UNITS, inner, _COUNTS),
    max_leaves=4,
)
_CHARGES = st.one_of(st.just(""), st.builds("{}{}".format, st.sampled_from("+-"), st.integers(1, 8)))


def read(text: str) -> Formula | FormulaError:
    try:
        return parse_formula(text)
    except FormulaError as error:
        return error


@given(_BODIES, _CHARGES)
def test_canonical_text_is_read_back_as_the_same_formula(body: str, charge: str) -> None:
    assume(len(body) < LONGEST - 4)
    formula = read(body + charge)
    if isinstance(formula, FormulaError):
        assert "atoms of an element" in formula.message or "Roman" in formula.message
    else:
        assert parse_formula(formula.text) == formula
        assert formula.charge == int(charge or "0")


@given(st.text(alphabet=string.ascii_letters + string.digits + "()[]{}+-.·^²⁺⁻₂ ,*\x00é", max_size=130))
def test_any_text_is_a_formula_or_a_formula_error(text: str) -> None:
    formula = read(text)
    if isinstance(formula, FormulaError):
        assert formula.at is None or 0 <= formula.at.start < formula.at.end <= max(len(text), 1)
    else:
        assert all(number > 0 for _, number in formula.atoms)
