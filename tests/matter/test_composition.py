"""Oxidation states and whole groups in formulas."""

from __future__ import annotations

from collections.abc import Mapping

import pytest

from redoxq.errors import DataError
from redoxq.matter.catalogue import catalogue
from redoxq.matter.composition import (
    component_atoms,
    component_charge,
    component_name,
    components,
    groups,
    split_component,
)
from redoxq.matter.elements import elements
from redoxq.matter.formula import Formula, parse_formula
from redoxq.matter.states import element_states, states_of

# Oxidation states as N. N. Greenwood, A. Earnshaw, Chemistry of the Elements, 2nd ed. (1997) assigns them.
COMPONENTS = {
    "SO4-2": "S(VI)",
    "HSO4-": "S(VI)",
    "SO3-2": "S(IV)",
    "SO3": "S(VI)",
    "S2O3-2": "S2O3",
    "Cu(NH3)4+2": "Cu(II) N(-III):4",
    "Fe3O4": "Fe(II) Fe(III):2",
    "Pb3O4": "Pb(II):2 Pb(IV)",
    "Mn3O4": "Mn(II) Mn(III):2",
    "Sb2O4": "Sb(III) Sb(V)",
    "H2": "H(0):2",
    "O2": "O(0):2",
    "H2O2": "O(-I):2",
    "HO2-": "O(-I):2",
    "Na2O2": "Na(I):2 O(-I):2",
    "KO2": "K(I) O(-I) O(0)",
    "O3": "O3",
    "Zn": "Zn(0)",
    "H2O": "",
    "H+": "",
    "OH-": "",
    "e-": "",
    "NH4NO3": "N(-III) N(V)",
    "K4Fe(CN)6": "K(I):4 Fe(II) CN:6",
    "K3Fe(CN)6": "K(I):3 Fe(III) CN:6",
    "Fe4(Fe(CN)6)3": "Fe(III):4 Fe(II):3 CN:18",
    "Cu2Fe(CN)6": "Cu(II):2 Fe(II) CN:6",
    "Hg2Cl2": "Hg(I):2 Cl(-I):2",
    "Hg2+2": "Hg(I):2",
    "CuFeS2": "Cu(I) Fe(III) S(-II):2",
    "KMnO4": "K(I) Mn(VII)",
    "K2MnO4": "K(I):2 Mn(VI)",
    "MnO4-2": "Mn(VI)",
    "CrO2Cl2": "Cr(VI) Cl(-I):2",
    "FeCr2O4": "Fe(II) Cr(III):2",
    "NO2": "N(IV)",
    "N2O": "N(I):2",
    "N2H5+": "N(-II):2",
    "NH2OH": "N(-I)",
    "NaOCl": "Na(I) Cl(I)",
    "Ca(ClO)2": "Ca(II) Cl(I):2",
    "NaPO3": "Na(I) P(V)",
    "NaH2PO2": "Na(I) P(I)",
    "KI3": "K(I) I(-I) I(0):2",
    "Na2S4": "Na(I):2 S(-II) S(0):3",
    "NaBH4": "Na(I) B(III) H(-I):4",
    "CaH2": "Ca(II) H(-I):2",
    "CH3COOH": "CH3COO",
    "CH3COO-": "CH3COO",
    "C2H3O2-": "CH3COO",
    "(COOH)2": "C2O4",
    "HC2O4-": "C2O4",
    "CO2": "C(IV)",
    "CO": "C(II)",
    "HCO3-": "C(IV)",
    "KSCN": "K(I) SCN",
    "CO(NH2)2": "CH4N2O",
    "Na2H2C10H12N2O8.2H2O": "Na(I):2 C10H12N2O8",
    "CuSO4.3Cu(OH)2": "Cu(II):4 S(VI)",
    "2CaSO4.H2O": "Ca(II):2 S(VI):2",
    "UO2(NO3)2": "U(VI) N(V):2",
    "VOSO4": "V(IV) S(VI)",
    "HAuCl4": "Au(III) Cl(-I):4",
    "BF4-": "B(III) F(-I):4",
}


def _counts(text: str) -> dict[str, int]:
    return {name: int(number or 1) for name, _, number in (part.partition(":") for part in text.split())}


@pytest.mark.parametrize(("text", "expected"), COMPONENTS.items())
def test_components(text: str, expected: str) -> None:
    assert dict(components(parse_formula(text))) == _counts(expected)


@pytest.mark.parametrize("text", ["Na+2", "Zn+3", "Cu+7", "SO4", "C6H12O6", "C2H5OH", "XeF2", "CaC2", "FeS2", "H2SO5"])
def test_states_that_make_no_sense_are_refused(text: str) -> None:
    with pytest.raises(DataError, match="oxidation states"):
        components(parse_formula(text))


def test_stated_states_win() -> None:
    assert components(parse_formula("FeS2"), "Fe(II):1 S(-I):2") == {"Fe(II)": 1, "S(-I)": 2}
    assert components(parse_formula("HFeO2"), "Fe(III) O(-II):2 H(I)") == {"Fe(III)": 1}


def test_names_of_components() -> None:
    assert component_name("N", -3) == "N(-III)"
    assert split_component("N(-III)") == ("N", -3)
    assert split_component("Hg(0)") == ("Hg", 0)
    assert split_component("CN") == ("CN", None)
    assert component_charge("S2O3") == -2
    assert component_charge("C2O4") == -2
    assert component_charge("Cr(VI)") == 6
    assert component_atoms("SCN") == {"S": 1, "C": 1, "N": 1}


def rest(formula: Formula, counts: Mapping[str, int]) -> tuple[dict[str, int], int]:
    """Atoms and charge of a formula that its components do not account for."""
    atoms, charge = dict(formula.atoms), formula.charge
    for name, number in counts.items():
        charge -= component_charge(name) * number
        for symbol, count in component_atoms(name).items():
            atoms[symbol] = atoms.get(symbol, 0) - count * number
    return {symbol: number for symbol, number in atoms.items() if number}, charge


def comes_of_water(atoms: dict[str, int], charge: int) -> bool:
    """Whether a rest is hydrogen ions and oxide alone."""
    return set(atoms) <= {"H", "O"} and atoms.get("H", 0) - 2 * atoms.get("O", 0) == charge


def test_components_hold_the_atoms_and_the_charge_of_every_species() -> None:
    wrong = [one.key for one in catalogue().species if not comes_of_water(*rest(one.formula, one.components))]
    assert wrong == []


def test_groups_carry_the_charge_of_their_components() -> None:
    wrong = []
    for group in groups():
        atoms, charge = rest(parse_formula(group.text), dict(group.components))
        if not comes_of_water(atoms, charge + group.charge):
            wrong.append(group.text)
    assert wrong == []


def test_the_table_of_states_is_sound() -> None:
    for symbol, states in element_states().items():
        assert symbol in elements()
        assert list(states.known) == sorted(set(states.known))
        assert states.usual is None or states.usual in states.known


def test_the_atoms_of_states_add_up() -> None:
    found = states_of({"Fe": 3, "O": 4}, 0)
    assert found == {("Fe", 2): 1, ("Fe", 3): 2, ("O", -2): 4}
    assert states_of({}, 0) == {}
    assert states_of({}, 1) is None
