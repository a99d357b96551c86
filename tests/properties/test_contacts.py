"""What every contact must keep, whatever the metal and the liquor: atoms, electrons, finite figures, one verdict."""

import json

import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

import redoxq
from redoxq.errors import NotConvergedError
from redoxq.jobs.answers import ContactAnswer
from redoxq.matter.formula import molar_mass, parse_formula
from redoxq.show.json_lines import answer_line

METALS = ("zinc", "iron", "copper", "nickel", "tin", "lead", "magnesium", "aluminium", "silver", "titanium", "cadmium")
SOLUTES = ("CuSO4", "AgNO3", "FeCl3", "HCl", "H2SO4", "HNO3", "NaCl", "NaOH", "NH3", "Na2SO4", "H2O2", "KMnO4", "NaCN")
VERDICTS = {"immune", "passive", "attacked", "undecided"}
TRIED = settings(max_examples=40, deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow])

strengths = st.floats(1e-3, 2.0).map(lambda value: float(f"{value:.3g}"))


def asked(sentence: str) -> ContactAnswer:
    answer = redoxq.ask(sentence)
    assert isinstance(answer, ContactAnswer)
    return answer


@TRIED
@given(st.sampled_from(METALS), st.sampled_from(SOLUTES), strengths, st.integers(0, 95))
def test_contact_has_one_verdict_and_finite_figures(metal: str, solute: str, strength: float, celsius: int) -> None:
    try:
        answer = asked(f"{metal} in {strength} M {solute} at {celsius} C")
    except NotConvergedError:
        assume(False)
    assert answer.verdict in VERDICTS
    assert answer.without_air.verdict in VERDICTS
    line = answer_line("contact", answer)
    assert "\n" not in line
    found = json.loads(line, parse_constant=lambda name: pytest.fail(f"{name} is no number"))
    assert found["summary"]
    assert found["reasons"] or found["verdict"] == "immune"
    if found["verdict"] == "attacked" and answer.end_state is not None:
        assert answer.end_state.dissolved_g > 0


@TRIED
@given(
    st.sampled_from([("Zn", 2), ("Cd", 2), ("Fe", 2), ("Ni", 2), ("Pb", 2)]),
    st.sampled_from([("Cu(NO3)2", "Cu", 2), ("AgNO3", "Ag", 1)]),
    st.floats(1e-3, 0.5).map(lambda value: float(f"{value:.3g}")),
    st.sampled_from([0.5, 1.0, 3.0]),
)
def test_plating_keeps_atoms_and_electrons(
    metal: tuple[str, int], salt: tuple[str, str, int], strength: float, litres: float
) -> None:
    """M. Faraday, Phil. Trans. 124 (1834) 77: equivalents dissolved are equivalents plated and gassed."""
    (symbol, lost), (formula, ion, gained) = metal, salt
    answer = asked(f"{symbol} in {litres} L of {strength} M {formula}, without air")
    assume(answer.verdict == "attacked" and answer.end_state is not None)
    end = answer.end_state
    assert end is not None
    assume(not set(end.gas_mol) - {"H2(g)"})
    plated = end.plated.get(f"{ion}(s)", 0.0) / molar_mass(parse_formula(ion))
    assert plated == pytest.approx(strength * litres, rel=1e-3)
    dissolved = end.dissolved_g / molar_mass(parse_formula(symbol))
    taken = gained * plated + 2 * end.gas_mol.get("H2(g)", 0.0)
    assert lost * dissolved == pytest.approx(taken, rel=0.02), "nitrate that is reduced as well would show here"
    assert end.plated_g == pytest.approx(sum(end.plated.values()))


@pytest.mark.parametrize(("air", "lost"), [("open to air", 0.04), ("without air", 0.01)])
def test_a_limited_piece_dissolves_no_further_than_its_mass(air: str, lost: float) -> None:
    """Copper in what is left of its sulfate goes to copper(I) a little: 10 mg/L at K = 1e-6; air takes some more."""
    end = asked(f"zinc, 2 g, in 1 L of 0.5 M CuSO4, {air}").end_state
    assert end is not None
    assert end.dissolved_g == pytest.approx(2.0, abs=1e-6)
    exchanged = 2.0 * molar_mass(parse_formula("Cu")) / molar_mass(parse_formula("Zn"))
    assert exchanged - lost < end.plated["Cu(s)"] < exchanged


@pytest.mark.parametrize("metal", ["zinc", "copper", "iron", "tin"])
def test_air_only_adds_oxidants(metal: str) -> None:
    rank = {"immune": 0, "passive": 1, "undecided": 2, "attacked": 3}
    for liquor in ("0.1 M HCl", "0.1 M NaOH", "0.5 M NaCl", "1 M NH3"):
        answer = asked(f"{metal} in {liquor}")
        assert answer.under_air is not None
        assert rank[answer.under_air.verdict] >= rank[answer.without_air.verdict]
