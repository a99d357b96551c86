"""The species that can stand in a liquor, written on its components."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from redoxq.errors import DataError
from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.composition import broken_group, component_atoms, component_charge, components, split_component
from redoxq.matter.formula import Formula, parse_formula
from redoxq.thermo.tableau import Integers, Stoichiometry

PROTON, ELECTRON = "H+", "e-"


@dataclass(frozen=True, slots=True)
class Terms:
    """One species or reagent as a sum of components, hydrogen ions, electrons and water."""

    counts: Mapping[str, int]
    water: int


def terms(formula: Formula, states: Mapping[str, int], merged: frozenset[str]) -> Terms:
    """Write a formula on the components of a liquor.

    Parameters
    ----------
    formula : Formula
    states : mapping of str to int
        Its oxidation-state components, as `matter.composition.components` gives them.
    merged : frozenset of str
        Components that are told apart by electrons only.

    Returns
    -------
    Terms
        Oxide oxygen comes as H2O and the rest of the charge as H+; a merged component counts as the
        neutral atom of its element (oxygen as water, hydrogen as H+) and one electron a unit of its state.
    """
    counts: dict[str, int] = {}
    water = dict(formula.atoms).get("O", 0)
    charge = formula.charge
    electrons = 0
    for component, number in states.items():
        element, state = split_component(component)
        water -= number * component_atoms(component).get("O", 0)
        if component not in merged:
            counts[component] = counts.get(component, 0) + number
            charge -= number * component_charge(component)
        elif (broken := broken_group(component)) is not None:
            target, pieces = broken[0], broken[1] * number
            counts[target] = counts.get(target, 0) + pieces
            oxide = number * component_atoms(component).get("O", 0) - pieces * component_atoms(target).get("O", 0)
            water += oxide
            charge -= pieces * component_charge(target)
            electrons -= number * component_charge(component) - pieces * component_charge(target) + 2 * oxide
        elif element == "H":
            electrons += number * (1 - (state or 0))
        elif element == "O":
            water += number
            electrons -= number * ((state or 0) + 2)
        else:
            counts[element] = counts.get(element, 0) + number
            electrons -= number * (state or 0)
    return Terms({**counts, PROTON: charge + electrons, ELECTRON: electrons}, water)


@dataclass(frozen=True, slots=True)
class Network:
    """Aqueous species, pure phases and pinned species of one set of components.

    Attributes
    ----------
    aqueous, phases, pinned : tuple of Species
    components : tuple of str
    reagents : tuple of str
        Formulas of what the liquor is made of; amounts are given per reagent.
    shape : Stoichiometry
    water : ndarray of int, shape (species,)
        H2O in each species beside the components.
    reagent_water : ndarray of int, shape (reagents,)
    """

    aqueous: tuple[Species, ...]
    phases: tuple[Species, ...]
    pinned: tuple[Species, ...]
    components: tuple[str, ...]
    reagents: tuple[str, ...]
    merged: frozenset[str]
    shape: Stoichiometry
    water: Integers
    reagent_water: Integers

    @property
    def species(self) -> tuple[Species, ...]:
        return self.aqueous + self.phases + self.pinned


@dataclass(frozen=True, slots=True)
class Selection:
    """Which phases may appear beside the aqueous species.

    Attributes
    ----------
    merged : frozenset of str
        Oxidation states (`Cu(II)`, `Cu(0)`, `H(0)`, ...) that are in equilibrium with the others of their element.
    precipitates : frozenset of str
        Codes of the `precipitates` column that are let in: `yes`, `film`, `no`.
    phases : frozenset of str
        Keys of further pure phases: metals, gases at 1 bar.
    excluded : frozenset of str
        Keys of species left out.
    pinned : tuple of str
        Keys of species whose activity is given.
    """

    merged: frozenset[str] = frozenset()
    precipitates: frozenset[str] = frozenset({"yes"})
    phases: frozenset[str] = frozenset()
    excluded: frozenset[str] = frozenset()
    pinned: tuple[str, ...] = ()


@lru_cache(maxsize=512)
def network(reagents: tuple[str, ...], selection: Selection) -> Network:
    """Collect all species that the reagents can form.

    Raises
    ------
    DataError
        When the tables hold no species for a component of a reagent.
    """
    merged = selection.merged
    formulas = [parse_formula(reagent) for reagent in reagents]
    made = [terms(formula, components(formula), merged) for formula in formulas]
    pinned = tuple(catalogue().get(key) for key in selection.pinned)
    fixed = [_species_terms(species, merged) for species in pinned]
    present = {name for term in (*made, *fixed) for name in term.counts} - {PROTON, ELECTRON}
    elements = {symbol for formula in (*formulas, *(p.formula for p in pinned)) for symbol, _ in formula.atoms}
    candidates = [
        (species, term)
        for species in catalogue().of_elements(frozenset(elements | {"H", "O"}))
        if species.key not in selection.excluded
        and _allowed(species, selection)
        and (term := _species_terms(species, merged)).counts.keys() <= present | {PROTON, ELECTRON}
        and _held(species, merged, present)
    ]
    aqueous = [pair for pair in candidates if pair[0].phase == "aq"]
    phases = [pair for pair in candidates if pair[0].phase != "aq"]
    order = [*sorted(present), PROTON, *([ELECTRON] if merged else [])]
    rows = [*aqueous, *phases, *zip(pinned, fixed, strict=True)]
    matrix = np.array([[term.counts.get(name, 0) for name in order] for _, term in rows], dtype=np.int64)
    _require_species(matrix, order)
    keep = _independent_columns(matrix)
    reagent_matrix = np.array([[term.counts.get(name, 0) for name in order] for term in made], dtype=np.int64)
    shape = Stoichiometry(
        matrix[:, keep], len(aqueous), len(pinned), reagent_matrix.reshape(len(made), len(order))[:, keep]
    )
    return Network(
        tuple(species for species, _ in aqueous),
        tuple(species for species, _ in phases),
        pinned,
        tuple(order[k] for k in keep),
        reagents,
        merged,
        shape,
        np.array([term.water for _, term in rows], dtype=np.int64),
        np.array([term.water for term in made], dtype=np.int64),
    )


@lru_cache(maxsize=8192)
def _species_terms(species: Species, merged: frozenset[str]) -> Terms:
    return terms(species.formula, species.components, merged)


def _allowed(species: Species, selection: Selection) -> bool:
    if species.phase == "aq":
        return True
    if species.key in selection.pinned:
        return False
    return species.precipitates in selection.precipitates or species.key in selection.phases


def _held(species: Species, merged: frozenset[str], present: set[str]) -> bool:
    """Every oxidation state of a species must have been put in or be one that may form."""
    return all(component in merged or component in present for component in species.components)


def _require_species(matrix: Integers, order: list[str]) -> None:
    for column, name in enumerate(order):
        if name not in (PROTON, ELECTRON) and not matrix[:, column].any():
            raise DataError(
                f"The tables hold no dissolved species of {name}.",
                hint="Leave that substance out, or bring in a table of species that has it.",
            )


def _independent_columns(matrix: Integers) -> list[int]:
    if int(np.linalg.matrix_rank(matrix)) == matrix.shape[1]:
        return list(range(matrix.shape[1]))
    keep: list[int] = []
    rank = 0
    for column in range(matrix.shape[1]):
        trial = int(np.linalg.matrix_rank(matrix[:, [*keep, column]]))
        if trial > rank:
            keep.append(column)
            rank = trial
    return keep
