"""Where a contact comes to rest: metal and liquor brought to equilibrium through the oxidants that act."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from redoxq.errors import NotConvergedError
from redoxq.jobs.answers import EndState, Residue
from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.composition import broken_group, split_component
from redoxq.matter.formula import molar_mass
from redoxq.thermo import activity, certificate
from redoxq.thermo.couples import MetalForm, Oxidant
from redoxq.thermo.equilibrium import Equilibrium, equilibrium
from redoxq.thermo.forms import states_of
from redoxq.thermo.network import PROTON, Network, Selection, network
from redoxq.thermo.speciation import Liquor, dissolved_oxygen
from redoxq.thermo.tableau import Array

ASSUMED_FREE_METAL = 0.1
"""mol/kg of a metal taken beyond the oxidants in the liquor when it goes on to react with the water itself."""

EXCESS = 1.0
"""mol/kg of metal left over when the amount is not given."""

STEPS = 12
ROUNDS = 4

LEAST_EXTENT = 1e-6
"""Share of the gas at which the search begins: with none taken off there is no couple to solve for."""

Stops = Callable[[Oxidant, Array], NDArray[np.bool_]]
"""Given an oxidant and pH values: True where practice no longer lets it act."""


@dataclass(frozen=True, slots=True)
class Reach:
    """A contact ready to be brought to rest."""

    liquor: Liquor
    form: MetalForm
    acting: tuple[Oxidant, ...]
    metal_mol: float | None
    water_kg: float


def end_state(reach: Reach, stops: Stops) -> EndState:
    """Bring a contact to rest.

    Parameters
    ----------
    reach : Reach
    stops : callable
        Tells at which pH an oxidant ceases to act.

    Returns
    -------
    EndState

    Raises
    ------
    NotConvergedError
        When no certified equilibrium was found.
    """
    gassing = [oxidant for oxidant in reach.acting if oxidant.product.phase == "g"]
    whole = _Rest(reach, held=None)
    if not gassing:
        return _report(whole, whole.solve(np.zeros(1)), 0, ())
    state = whole.try_solve(np.zeros(1))
    leader = max(gassing, key=lambda oxidant: float(oxidant.potential[0]))
    start = float(reach.liquor.state.pH[0])
    if state is not None:
        final = float(state.pH[0])
        path = np.linspace(start, final, 400)
        held = stops(leader, path)
        if not held.any():
            return _report(whole, state, 0, ())
        stop = float(path[int(np.argmax(held))])
    else:
        raise NotConvergedError("The end of this contact was not found to the accuracy that an answer needs.")
    rest = _Rest(reach, held=leader)
    extent, stopped = _extent_at(rest, stop, _gas_formed(whole, state, leader))
    note = (
        f"{leader.title} is taken to act until pH {stop:.1f}, where practice holds it to be too slow; "
        "metal and liquor left beyond that are left alone"
    )
    return _report(rest, stopped, extent, (note,))


class _Rest:
    """The network of a contact at rest, with one gas either free to form or taken off by amount."""

    def __init__(self, reach: Reach, held: Oxidant | None) -> None:
        self.reach, self.held = reach, held
        acting = [o for o in reach.acting if held is None or o is held or o.product.phase != "g"]
        merged = frozenset().union(reach.form.components, *(_merging(o) for o in acting))
        merged |= {c for o in acting if o.plated for c in _states_between(reach.liquor, o)}
        gases = {o.product.key for o in acting if o.product.phase == "g"}
        liquor = reach.liquor
        self.oxygen = float(dissolved_oxygen(liquor)[0]) if any(o.id == "oxygen" for o in acting) else 0.0
        self.gas = "" if held is None else held.product.formula.text
        extra = [
            reach.form.metal.formula.text,
            "O2" if self.oxygen else "",
            PROTON if liquor.pinned is not None else "",
            self.gas,
        ]
        reagents = liquor.reagents + tuple(text for text in extra if text)
        excluded = frozenset(_forms_of(self.gas)) if self.gas else frozenset()
        plated = {o.product.key for o in acting if o.plated}
        self.network = network(
            reagents,
            Selection(
                merged=merged,
                phases=frozenset(plated | {reach.form.metal.key} | (gases if held is None else set())),
                excluded=excluded,
            ),
        )
        self.model = activity.choose(self.network.aqueous)
        self.metal = reach.metal_mol if reach.metal_mol is not None else self._excess(acting)

    def _excess(self, acting: Sequence[Oxidant]) -> float:
        liquor = self.reach.liquor
        capacity = 4.0 * self.oxygen
        for oxidant in acting:
            if oxidant.id == "hydrogen":
                capacity += abs(float(sum(n for n in (liquor.amounts[0] @ _protons(liquor),))))
            elif oxidant.id != "oxygen":
                ((before, *_),) = (tuple(c for c in oxidant.changing if c in liquor.totals),)
                capacity += 8.0 * float(liquor.totals[before][0])
        free = any(o.id == "hydrogen" for o in acting)
        return capacity + (ASSUMED_FREE_METAL if free and self.held is None else EXCESS)

    def amounts(self, extents: Array) -> Array:
        """Reagent amounts with a given amount of the held gas taken off, shape (rows, reagents)."""
        liquor = self.reach.liquor
        extra = [self.metal]
        if self.oxygen:
            extra.append(self.oxygen)
        if liquor.pinned is not None:
            extra.append(-float(liquor.state.sources[0, 0]))
        rows = np.repeat(np.concatenate([liquor.amounts[0], extra])[None], len(extents), axis=0)
        return np.column_stack([rows, -extents]) if self.gas else rows

    def solve(self, extents: Array) -> Equilibrium:
        amounts = self.amounts(extents)
        temperature = np.full(len(extents), self.reach.liquor.temperature[0])
        state = equilibrium(self.network, amounts, temperature, self.model)
        if len(extents) == 1:
            certificate.require(state, amounts)
        return state

    def try_solve(self, extents: Array) -> Equilibrium | None:
        try:
            return self.solve(extents)
        except NotConvergedError:
            return None


def _protons(liquor: Liquor) -> Array:
    column = liquor.network.components.index(PROTON)
    return np.abs(liquor.network.shape.reagents[:, column]).astype(float)


def _merging(oxidant: Oxidant) -> frozenset[str]:
    """Components that electrons turn into each other; what a whole group breaks into stays a component of its own."""
    whole = frozenset(name for name in oxidant.changing if broken_group(name))
    return whole or oxidant.changing - {"H(I)", "O(-II)"}


def _states_between(liquor: Liquor, oxidant: Oxidant) -> set[str]:
    """All states of a plated metal: it may stop at any of them."""
    return {*states_of(liquor, oxidant.plated), f"{oxidant.plated}(0)", *oxidant.changing}


def _forms_of(formula: str) -> list[str]:
    return [formula, f"{formula}(aq)", f"{formula}(g)"]


def _gas_formed(rest: _Rest, state: Equilibrium, oxidant: Oxidant) -> float:
    keys = [species.key for species in rest.network.phases]
    formed = float(state.phases[0, keys.index(oxidant.product.key)]) if oxidant.product.key in keys else 0.0
    return max(formed, 1e-9)


def _extent_at(rest: _Rest, stop: float, most: float) -> tuple[float, Equilibrium]:
    """Amount of gas at which the pH reaches the stop, by a repeated grid."""
    low, high = LEAST_EXTENT * most, most
    for _ in range(ROUNDS):
        grid = np.linspace(low, high, STEPS)
        state = rest.solve(grid)
        passed = ~state.converged | (np.nan_to_num(state.pH, nan=99.0) >= stop)
        first = int(np.argmax(passed)) if passed.any() else len(grid) - 1
        low, high = float(grid[max(first - 1, 0)]), float(grid[first])
    return low, rest.solve(np.array([low]))


def _report(rest: _Rest, state: Equilibrium, extent: float, notes: tuple[str, ...]) -> EndState:
    reach, web = rest.reach, rest.network
    kg = reach.water_kg
    phases = {species.key: float(amount) * kg for species, amount in zip(web.phases, state.phases[0], strict=True)}
    metal = reach.form.metal
    dissolved = max(rest.metal * kg - phases.pop(metal.key, 0.0), 0.0) * molar_mass(metal.formula)
    plated = {
        key: amount * molar_mass(catalogue().get(key).formula)
        for key, amount in phases.items()
        if amount > 0 and any(o.plated and o.product.key == key for o in reach.acting)
    }
    gases = {key: amount for key, amount in phases.items() if amount > 0 and key.endswith("(g)")}
    if rest.held is not None and extent > 0:
        gases[rest.held.product.key] = extent * kg
    solids = {key: amount for key, amount in phases.items() if amount > 0 and key not in plated and key not in gases}
    return EndState(
        pH=float(state.pH[0]),
        residual=_residues(reach, web, state),
        dissolved_g=dissolved,
        plated_g=sum(plated.values()),
        plated=plated,
        gas_mol=gases,
        precipitates=solids,
        notes=notes,
    )


def _residues(reach: Reach, web: Network, state: Equilibrium) -> tuple[Residue, ...]:
    """The ions that were reduced, and those of the metal, with what is left of each."""
    elements = [split_component(c)[0] for o in reach.acting for c in o.changing if c in reach.liquor.totals]
    wanted = dict.fromkeys([*elements, reach.form.metal.formula.text])
    density = reach.liquor.composition.density
    found: list[Residue] = []
    for element in wanted:
        rows = [
            (float(np.exp(m)), species)
            for species, m in zip(web.aqueous, state.ln_molality[0], strict=True)
            if any(split_component(c)[0] == element for c in species.components)
        ]
        rows.sort(key=lambda pair: -pair[0])
        found.extend(Residue(s.key, m, _mg_per_litre(m, s, reach, density)) for m, s in _shown(rows, reach))
    return tuple(found)


def _shown(rows: list[tuple[float, Species]], reach: Reach) -> list[tuple[float, Species]]:
    """The three most abundant, and always the ions that the liquor was made with."""
    named = {o.oxidised.key for o in reach.acting} | {reach.form.product.key}
    shown = [(m, s) for k, (m, s) in enumerate(rows) if k < 3 or s.key in named]
    return sorted(shown, key=lambda pair: pair[1].key not in named)


def _mg_per_litre(molality: float, species: Species, reach: Reach, density: float) -> float:
    """mg/L through the density of the liquor at the start."""
    composition = reach.liquor.composition
    return molality * composition.water_kg_per_L * molar_mass(species.formula) * 1000.0
