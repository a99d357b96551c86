"""The equilibrium solver: right answers, certified, and a certificate that catches wrong ones."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from redoxq.errors import NotConvergedError
from redoxq.thermo import activity, certificate
from redoxq.thermo.constants import LN10
from redoxq.thermo.equilibrium import Equilibrium, equilibrium
from redoxq.thermo.network import Network, Selection, network

AT_25 = 298.15
ZINC_COPPER = frozenset({"Zn(0)", "Zn(II)", "Cu(0)", "Cu(I)", "Cu(II)"})


def solved(
    reagents: list[str],
    amounts: np.ndarray,
    temperature: float = AT_25,
    pinned: np.ndarray | None = None,
    **selection: object,
) -> tuple[Network, Equilibrium]:
    web = network(tuple(reagents), Selection(**selection))
    rows = np.atleast_2d(amounts)
    state = equilibrium(web, rows, np.full(len(rows), temperature), activity.choose(web.aqueous), pinned)
    return web, state


def of(web: Network, state: Equilibrium, key: str, row: int = 0) -> float:
    return float(state.ln_molality[row, [one.key for one in web.aqueous].index(key)] / LN10)


def solid(web: Network, state: Equilibrium, key: str, row: int = 0) -> float:
    return float(state.phases[row, [one.key for one in web.phases].index(key)])


def zinc_in_copper_sulfate() -> tuple[Network, Equilibrium, np.ndarray]:
    amounts = np.array([[0.5, 1.0]])
    web, state = solved(["CuSO4", "Zn"], amounts, merged=ZINC_COPPER, phases=frozenset({"Zn(s)", "Cu(s)"}))
    return web, state, amounts


def test_excess_zinc_takes_copper_sulfate_down_to_the_true_residue() -> None:
    web, state, amounts = zinc_in_copper_sulfate()
    certificate.require(state, amounts)
    assert solid(web, state, "Cu(s)") == pytest.approx(0.5, rel=1e-9)
    ratio = of(web, state, "Cu+2") - of(web, state, "Zn+2")
    # log10 K = 2 F (0.3394 + 0.7628 V)/(RT ln 10) = 37.26, both ions with nearly the same activity coefficient.
    assert ratio == pytest.approx(-37.26, abs=0.05)


def test_several_solids_at_once() -> None:
    amounts = np.array([[0.1, 0.1, 0.3]])
    web, state = solved(["AgNO3", "Pb(NO3)2", "Na2SO4"], amounts)
    web2, state2 = solved(["AgNO3", "Ba(NO3)2", "Na2SO4", "NaCl"], np.array([[0.1, 0.1, 0.2, 0.2]]))
    assert state.converged.all()
    assert solid(web, state, "PbSO4(s)") == pytest.approx(0.1, rel=1e-3)
    assert solid(web2, state2, "AgCl(s)") == pytest.approx(0.1, rel=1e-3)
    assert solid(web2, state2, "BaSO4(s)") == pytest.approx(0.1, rel=1e-3)


def test_a_pinned_pH_holds_and_is_not_ignored() -> None:
    pinned = np.array([[-3.0 * LN10], [-9.0 * LN10]])
    made = network(("ZnSO4",), Selection(pinned=("H+",)))
    amounts = np.array([[0.1], [0.1]])
    held = equilibrium(made, amounts, np.full(2, AT_25), activity.choose(made.aqueous), pinned)
    certificate.require(held, amounts, pinned)
    assert held.pH == pytest.approx([3.0, 9.0], abs=1e-9)
    assert solid(made, held, "Zn(OH)2(s, amorphous)", 0) == 0.0
    assert solid(made, held, "Zn(OH)2(s, amorphous)", 1) > 0.09


def test_an_unpoised_liquor_is_solved_and_its_poise_told() -> None:
    """Copper(II) alone with water free to react: the electron balance rests on next to nothing."""
    amounts = np.array([[0.01]])
    merged = frozenset({"Cu(0)", "Cu(I)", "Cu(II)", "H(0)", "O(0)"})
    _, state = solved(["CuSO4"], amounts, merged=merged, phases=frozenset({"Cu(s)"}))
    certificate.require(state, amounts)
    assert state.poise[0] < 1e-6
    _, poised, _ = zinc_in_copper_sulfate()
    assert poised.poise[0] > state.poise[0]


def test_totals_that_nothing_can_hold_are_not_converged() -> None:
    web = network(("AgNO3",), Selection())
    state = equilibrium(web, np.array([[-0.1]]), np.array([AT_25]), activity.choose(web.aqueous))
    assert not state.converged[0]
    with pytest.raises(NotConvergedError):
        certificate.require(state, np.array([[-0.1]]))


def test_a_row_alone_is_the_row_in_a_batch() -> None:
    rng = np.random.default_rng(7)
    amounts = 10.0 ** rng.uniform(-5, 0, (40, 3))
    reagents = ["CuSO4", "NH3", "NaCl"]
    _, batch = solved(reagents, amounts)
    assert batch.converged.all()
    for row in (0, 13, 39):
        _, alone = solved(reagents, amounts[row])
        assert alone.ln_molality[0] == pytest.approx(batch.ln_molality[row], abs=1e-8)


@settings(max_examples=15, deadline=None)
@given(st.permutations(["FeCl3", "H2SO4", "NaF", "CuSO4"]), st.integers(0, 2**32 - 1))
def test_the_order_of_reagents_changes_nothing(order: list[str], seed: int) -> None:
    reagents = ["FeCl3", "H2SO4", "NaF", "CuSO4"]
    amounts = dict(zip(reagents, 10.0 ** np.random.default_rng(seed).uniform(-4, -0.3, 4), strict=True))
    web, first = solved(reagents, np.array([amounts[r] for r in reagents]))
    other, second = solved(order, np.array([amounts[r] for r in order]))
    assert first.converged.all()
    assert second.converged.all()
    for species in web.aqueous:
        assert of(web, first, species.key) == pytest.approx(of(other, second, species.key), abs=1e-7)


@settings(max_examples=15, deadline=None)
@given(st.floats(0.05, 0.95), st.integers(0, 2**32 - 1))
def test_splitting_a_reagent_changes_nothing(share: float, seed: int) -> None:
    total = float(10.0 ** np.random.default_rng(seed).uniform(-4, -0.5))
    web, whole = solved(["AgNO3", "NaCl"], np.array([0.1, total]))
    rest = total * (1 - share)
    half, both = solved(["AgNO3", "NaCl", "HCl", "NaOH"], np.array([0.1, total * share, rest, rest]))
    assert of(web, whole, "Ag+") == pytest.approx(of(half, both, "Ag+"), abs=2e-3)


@settings(max_examples=20, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_more_of_a_component_never_lowers_its_potential(seed: int) -> None:
    rng = np.random.default_rng(seed)
    base = 10.0 ** rng.uniform(-4, -1, 3)
    rows = np.array([base * [factor, 1.0, 1.0] for factor in (1.0, 2.0, 5.0)])
    web, state = solved(["CdCl2", "KI", "NH3"], rows)
    assert state.converged.all()
    potential = state.potentials[:, web.components.index("Cd(II)")]
    assert (np.diff(potential) > -1e-2).all()


class TestCertificate:
    """A wrong state must be caught, whatever is wrong with it."""

    def test_the_right_state_holds(self) -> None:
        _, state, amounts = zinc_in_copper_sulfate()
        assert certificate.certify(state, amounts).holds.all()

    @pytest.mark.parametrize("key", ["Cu+2", "Zn+2", "H+", "Cu+", "SO4-2", "HSO4-"])
    def test_a_shifted_species_is_caught(self, key: str) -> None:
        web, state, amounts = zinc_in_copper_sulfate()
        shifted = state.ln_molality.copy()
        shifted[0, [one.key for one in web.aqueous].index(key)] += 1e-4
        assert not certificate.certify(replace(state, ln_molality=shifted), amounts).holds.any()

    @pytest.mark.parametrize("key", ["Zn(s)", "Cu(s)"])
    @pytest.mark.parametrize("factor", [1.001, 0.999, 0.0])
    def test_a_changed_or_deleted_phase_is_caught(self, key: str, factor: float) -> None:
        web, state, amounts = zinc_in_copper_sulfate()
        phases = state.phases.copy()
        phases[0, [one.key for one in web.phases].index(key)] *= factor
        assert not certificate.certify(replace(state, phases=phases), amounts).holds.any()

    def test_a_shifted_electron_potential_is_caught(self) -> None:
        web, state, amounts = zinc_in_copper_sulfate()
        potentials = state.potentials.copy()
        potentials[0, web.components.index("e-")] += 1e-4
        assert not certificate.certify(replace(state, potentials=potentials), amounts).holds.any()

    def test_other_amounts_are_caught(self) -> None:
        _, state, amounts = zinc_in_copper_sulfate()
        assert not certificate.certify(state, amounts * [1.001, 1.0]).holds.any()


def test_random_liquors_are_solved_and_certified() -> None:
    """Salts of random ions at random strengths: at least 99 in 100 are solved, and what is not says so."""
    from redoxq.matter import names
    from redoxq.matter.composition import components
    from redoxq.matter.formula import parse_formula

    common = [
        "Na+",
        "K+",
        "NH4+",
        "Mg+2",
        "Ca+2",
        "Al+3",
        "Fe+2",
        "Fe+3",
        "Ni+2",
        "Cu+2",
        "Zn+2",
        "Ag+",
        "Cd+2",
        "Pb+2",
    ]
    partners = ["Cl-", "Br-", "I-", "F-", "NO3-", "SO4-2", "CO3-2", "PO4-3", "CN-", "SCN-", "CH3COO-", "S2O3-2", "OH-"]
    ions = {ion.text: ion.formula for ion in names.ions()}
    rng = np.random.default_rng(20260101)
    solved_count = tried = 0
    for _ in range(200):
        picks = {
            names.salt_text(ions[common[rng.integers(len(common))]], ions[partners[rng.integers(len(partners))]])
            for _ in range(rng.integers(1, 5))
        }
        reagents = sorted(text for text in picks if text != "HOH")
        if not reagents or not any(components(parse_formula(text)) for text in reagents):
            continue
        amounts = np.array([10.0 ** rng.uniform(-6, 0.3, len(reagents))])
        _, state = solved(reagents, amounts)
        tried += 1
        holds = bool(certificate.certify(state, amounts).holds[0])
        assert holds == bool(state.converged[0])
        solved_count += holds
    assert tried > 150
    assert solved_count >= 0.99 * tried
