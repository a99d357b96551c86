"""Reactions: what balances them, and their standard energies, potential and constant at a temperature."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from redoxq.errors import ReactionError
from redoxq.matter.catalogue import Species
from redoxq.matter.composition import component_atoms, split_component
from redoxq.thermo.constants import T0, F, R
from redoxq.thermo.gibbs import covariance, gibbs_energies
from redoxq.thermo.tableau import Array

LN10 = float(np.log(10.0))


@dataclass(frozen=True, slots=True)
class Reaction:
    """A balanced reaction of catalogue species.

    Attributes
    ----------
    species : tuple of Species
    coefficients : tuple of int
        Negative on the left.
    electrons : int
        Electrons on the left (positive: a reduction); 0 for a whole reaction.
    """

    species: tuple[Species, ...]
    coefficients: tuple[int, ...]
    electrons: int = 0

    @property
    def transferred(self) -> int:
        """Electrons that change hands when the reaction runs once as written; 0 where none do."""
        if self.electrons:
            return abs(self.electrons)
        before: dict[str, list[int]] = {}
        after: dict[str, list[int]] = {}
        for species, coefficient in zip(self.species, self.coefficients, strict=True):
            side = before if coefficient < 0 else after
            for element, states in _states(species).items():
                side.setdefault(element, []).extend(states * abs(coefficient))
        return sum(_gained(states, after.get(element, [])) for element, states in before.items())

    def __str__(self) -> str:
        left = [(-c, s) for s, c in zip(self.species, self.coefficients, strict=True) if c < 0]
        right = [(c, s) for s, c in zip(self.species, self.coefficients, strict=True) if c > 0]
        before = [_term(count, one) for count, one in sorted(left, key=lambda pair: _left_rank(pair[1]))]
        after = [_term(count, one) for count, one in sorted(right, key=lambda pair: _right_rank(pair[1]))]
        if self.electrons:
            side = before if self.electrons > 0 else after
            side.append("e-" if abs(self.electrons) == 1 else f"{abs(self.electrons)} e-")
        return f"{' + '.join(before)} -> {' + '.join(after)}"


_LAST = {"H+": 1, "OH-": 1, "H2O(l)": 2}


def _left_rank(species: Species) -> tuple[int, int]:
    """What reacts in the order of speech: the metal, what attacks it, then acid and water."""
    return _LAST.get(species.key, 0), 0 if _is_metal(species) else 1


def _right_rank(species: Species) -> tuple[int, int]:
    return _LAST.get(species.key, 0), ("aq", "s", "l", "g").index(species.phase)


def _is_metal(species: Species) -> bool:
    return species.phase in ("s", "l") and len(species.formula.atoms) == 1


def _term(count: int, species: Species) -> str:
    """A species with its number; metals and water go without their phase."""
    plain = _is_metal(species) or species.key == "H2O(l)"
    key = species.text if plain else species.key
    return key if count == 1 else f"{count} {key}"


def _states(species: Species) -> Mapping[str, list[int]]:
    """Oxidation state of every atom by element, hydrogen and oxygen in their usual states included."""
    found: dict[str, list[int]] = {}
    atoms = dict(species.formula.atoms)
    rest = {"H": atoms.get("H", 0), "O": atoms.get("O", 0)}
    for component, number in species.components.items():
        element, state = split_component(component)
        if state is not None:
            found.setdefault(element, []).extend([state] * number)
        for symbol, count in component_atoms(component).items():
            if symbol in rest:
                rest[symbol] -= count * number
    found.setdefault("H", []).extend([1] * rest["H"])
    found.setdefault("O", []).extend([-2] * rest["O"])
    return found


def _gained(before: list[int], after: list[int]) -> int:
    """Electrons that the atoms of one element take up, each going to the state of its own rank.

    In that order the fewest change hands: of 2 Cu+ one takes the electron that the other gives.
    """
    if len(before) != len(after):  # part of the element is bound in groups that have no state
        return max(sum(before) - sum(after), 0)
    return sum(max(old - new, 0) for old, new in zip(sorted(before), sorted(after), strict=True))


@dataclass(frozen=True, slots=True)
class StandardQuantities:
    """Standard quantities of a reaction, arrays of shape (rows,).

    Attributes
    ----------
    delta_G, delta_H : ndarray
        J/mol of the reaction as written.
    delta_S : ndarray
        J/(mol K).
    uncertainty : ndarray
        Standard uncertainty of delta_G, J/mol.
    """

    delta_G: Array
    delta_H: Array
    delta_S: Array
    uncertainty: Array
    temperature: Array

    @property
    def log10_K(self) -> Array:
        """Decimal logarithm of the equilibrium constant."""
        return -self.delta_G / (R * self.temperature * LN10)

    def potential(self, electrons: int) -> Array:
        """Standard potential in V when `electrons` are transferred."""
        return -self.delta_G / (electrons * F)


def standard_quantities(reaction: Reaction, temperature: Array) -> StandardQuantities:
    """Standard Gibbs energy, enthalpy and entropy of a reaction.

    Parameters
    ----------
    reaction : Reaction
    temperature : ndarray, shape (rows,)
        K.

    Returns
    -------
    StandardQuantities
        An electron has the energy of half a molecule of hydrogen less a hydrogen ion, at every temperature
        (IUPAC: the standard hydrogen electrode is the zero).
    """
    temperature = np.asarray(temperature, dtype=float)
    delta_G, uncertainty = standard_gibbs_energy(reaction, temperature)
    coefficients = np.asarray(reaction.coefficients, dtype=float)
    below, above = (gibbs_energies(reaction.species, temperature + step) @ coefficients for step in (-0.05, 0.05))
    delta_S = -(above - below) / 0.1
    return StandardQuantities(delta_G, delta_G + temperature * delta_S, delta_S, uncertainty, temperature)


def standard_gibbs_energy(reaction: Reaction, temperature: Array) -> tuple[Array, Array]:
    """Standard Gibbs energy of a reaction and its standard uncertainty, J/mol, both of shape (rows,).

    The uncertainty is that at the temperature farthest from 25 °C; what species share cancels in it.
    """
    coefficients = np.asarray(reaction.coefficients, dtype=float)
    farthest = float(temperature[np.argmax(np.abs(temperature - T0))])
    variance = float(coefficients @ covariance(reaction.species, farthest) @ coefficients)
    energy: Array = gibbs_energies(reaction.species, temperature) @ coefficients
    return energy, np.full_like(temperature, np.sqrt(max(variance, 0.0)))


def combine(reduction: Reaction, oxidation: Reaction) -> Reaction:
    """Add two half reactions (both written as reductions), the second reversed, so that electrons cancel."""
    if reduction.electrons <= 0 or oxidation.electrons <= 0:
        raise ReactionError("Only reductions with electrons on the left can be combined.")
    common = int(np.lcm(reduction.electrons, oxidation.electrons))
    totals: dict[Species, int] = {}
    for half, factor in ((reduction, common // reduction.electrons), (oxidation, -common // oxidation.electrons)):
        for species, coefficient in zip(half.species, half.coefficients, strict=True):
            totals[species] = totals.get(species, 0) + factor * coefficient
    kept = {species: number for species, number in totals.items() if number}
    divisor = int(np.gcd.reduce([*kept.values()])) if kept else 1
    return Reaction(tuple(kept), tuple(number // divisor for number in kept.values()))
