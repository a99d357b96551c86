"""The form that an oxidation state takes in a liquor: which ion, complex or solid, and at what potential."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.composition import split_component
from redoxq.thermo.constants import F, R
from redoxq.thermo.network import terms
from redoxq.thermo.speciation import Liquor, standard_value
from redoxq.thermo.tableau import Array, Integers

TRACE = 1e-6
"""mol/kg of dissolved metal where the liquor holds none: the convention of potential-pH diagrams,
M. Pourbaix, Atlas of Electrochemical Equilibria in Aqueous Solutions (1966)."""

FILM_SOLUBILITY = 1e-4
"""mol/kg: a solid that holds the dissolved metal below this can cover the metal."""

LN_ABSENT = float(np.log(1e-30))
"""ln mol/kg below which a state that the liquor nominally holds (all of it bound elsewhere) counts as absent."""

FORMING = frozenset({"yes", "film"})


@dataclass(frozen=True, slots=True)
class Form:
    """One oxidation state (or one solid) of an element in liquors, a row each.

    Attributes
    ----------
    component : str
        `Cu(II)`; for a solid of several states the element.
    species : tuple of Species
        What it may be, the most abundant first in `leading`.
    leading : ndarray of int, shape (rows,)
        Which of `species` stands for it.
    potential : ndarray, shape (rows,)
        Chemical potential over RT of one atom in that state.
    """

    component: str
    species: tuple[Species, ...]
    leading: Integers
    potential: Array


def dissolved_form(liquor: Liquor, component: str, total: float = TRACE, fresh: bool = False) -> Form | None:
    """Distribution of a state over ions and complexes, at its own strength or at a trace.

    Parameters
    ----------
    liquor : Liquor
    component : str
    total : float
        mol/kg taken where the liquor has none.
    fresh : bool
        Take that total even where the liquor has some.

    Returns
    -------
    Form or None
        None where the tables hold no dissolved species of that state.
    """
    species = _species_of(liquor, component, "aq")
    if not species:
        return None
    count, offset = _lines(liquor, component, species)
    known = None if fresh else liquor.potentials.get(component)
    if known is None or not _there(known[:, None] * count + offset, species):
        known = _potential_at(count, offset, total)
    abundance = known[:, None] * count + offset
    return Form(component, species, _leading(species, abundance), known)


def solid_forms(liquor: Liquor, element: str) -> list[Form]:
    """Solids of an element that can form from what the liquor holds, one form each.

    The potential is that of the neutral atom plus the electrons it lost, an atom of the element: the energy that
    makes the solid from metal and liquor.
    """
    solids = [
        species
        for species in _candidates(liquor, element)
        if species.phase == "s" and species.precipitates in FORMING and oxidation_number(species, element) > 0
    ]
    if not solids:
        return []
    standard = standard_value(liquor, tuple(solids))
    forms = []
    for k, solid in enumerate(solids):
        atoms = _atoms(solid, element)
        rest = _rest(liquor, solid, element)
        forms.append(Form(element, (solid,), np.zeros(len(standard), dtype=np.int64), (standard[:, k] - rest) / atoms))
    return forms


def gas_form(liquor: Liquor, species: Species, component: str, pressure: float = 1.0) -> Form:
    """A gas at a given pressure (bar) as the form of a state."""
    standard = standard_value(liquor, (species,))[:, 0] + np.log(pressure)
    count = species.components[component]
    rest = _sum(liquor, species, without=component)
    return Form(component, (species,), np.zeros(len(standard), dtype=np.int64), (standard - rest) / count)


def stable_form(liquor: Liquor, component: str) -> Form | None:
    """The solid or dissolved form of a state that the liquor settles on, whichever lies lower."""
    dissolved = dissolved_form(liquor, component)
    element, _ = split_component(component)
    solids = [form for form in solid_forms(liquor, element) if set(_states(form.species[0], element)) == {component}]
    best = dissolved
    for form in solids:
        if best is None or bool(np.all(form.potential < best.potential - 1e-9)):
            best = form
    return best


def states_of(liquor: Liquor, element: str) -> tuple[str, ...]:
    """Oxidation states above zero in which the element can stand dissolved in the liquor."""
    found = {
        component
        for species in _candidates(liquor, element)
        if species.phase == "aq"
        for component in _states(species, element)
    }
    return tuple(sorted(component for component in found if (split_component(component)[1] or 0) > 0))


def oxidation_number(species: Species, element: str) -> float:
    """Mean oxidation state of an element in a species."""
    states = _states(species, element)
    return sum((split_component(c)[1] or 0) * n for c, n in states.items()) / max(sum(states.values()), 1)


def electrode_potential(form: Form, charge: float, temperature: Array) -> Array:
    """Potential against SHE of the element going to a form of the given mean charge, V."""
    volts: Array = R * temperature / F * form.potential / charge
    return volts


def _states(species: Species, element: str) -> dict[str, int]:
    return {c: n for c, n in species.components.items() if split_component(c)[0] == element}


def _atoms(species: Species, element: str) -> int:
    return sum(_states(species, element).values())


def _candidates(liquor: Liquor, element: str) -> tuple[Species, ...]:
    """Species of the element whose other components the liquor holds."""
    return _candidates_of(
        liquor.network.components, frozenset().union(*(s.symbols for s in liquor.network.species)), element
    )


@lru_cache(maxsize=4096)
def _candidates_of(components: tuple[str, ...], symbols: frozenset[str], element: str) -> tuple[Species, ...]:
    held = set(components)
    return tuple(
        species
        for species in catalogue().of_elements(symbols | {element, "H", "O"})
        if element in species.symbols
        and _atoms(species, element)
        and all(c in held or split_component(c)[0] == element for c in species.components)
    )


def _species_of(liquor: Liquor, component: str, phase: str) -> tuple[Species, ...]:
    element, _ = split_component(component)
    return tuple(
        species
        for species in _candidates(liquor, element)
        if species.phase == phase and set(_states(species, element)) == {component}
    )


def _sum(liquor: Liquor, species: Species, without: str) -> Array:
    """Potentials of the components of a species, one of them (or all states of an element) left out."""
    total = np.zeros(len(liquor.amounts))
    for name, number in terms(species.formula, species.components, frozenset()).counts.items():
        if number and name != without and split_component(name)[0] != without:
            total = total + number * liquor.potentials[name]
    return total


def _rest(liquor: Liquor, species: Species, element: str) -> Array:
    return _sum(liquor, species, without=element)


def _lines(liquor: Liquor, component: str, species: tuple[Species, ...]) -> tuple[Array, Array]:
    """Slope and intercept of ln molality of each species against the potential of the component."""
    count = np.array([one.components[component] for one in species], dtype=float)
    rest = np.column_stack([_sum(liquor, one, without=component) for one in species])
    return count, rest - standard_value(liquor, species) - liquor.ln_gamma(species)


def _there(abundance: Array, species: tuple[Species, ...]) -> bool:
    """Tell whether a state is in the liquor other than bound by another element in a complex that never lets go."""
    free = [k for k, one in enumerate(species) if len(one.components) == 1] or list(range(len(species)))
    return bool(np.all(abundance[:, free].max(axis=1) > LN_ABSENT))


def _potential_at(count: Array, offset: Array, total: float) -> Array:
    """Potential at which the species add up to a total; Newton's method from above on a convex function."""
    level = np.log(total)
    potential: Array = ((level - np.log(count) - offset) / count).min(axis=1)
    for _ in range(40):
        logs = count * potential[:, None] + offset + np.log(count)
        top = logs.max(axis=1, keepdims=True)
        share = np.exp(logs - top)
        excess = top[:, 0] + np.log(share.sum(axis=1)) - level
        slope = (share * count).sum(axis=1) / share.sum(axis=1)
        potential = potential - excess / slope
        if np.max(np.abs(excess)) < 1e-13:
            break
    return potential


def _leading(species: tuple[Species, ...], abundance: Array) -> Integers:
    """The bare ion where it is a fiftieth or more of the most abundant form, else that form."""
    top = abundance.argmax(axis=1)
    size = np.array([len(one.formula.atoms) for one in species])
    bare = int(np.lexsort((np.arange(len(species)), size))[0])
    enough = abundance[:, bare] > abundance.max(axis=1) - np.log(50.0)
    leading: Integers = np.where(enough, bare, top)
    return leading
