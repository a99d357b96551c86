"""Species written in a basis of other species, exactly, and the start of a minimisation by linear programming."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Integers = NDArray[np.int64]
Basis = tuple[int, ...]

ARTIFICIAL_COST = 1e5
"""Cost (units of RT) of a bare component in the linear programme, far above that of any species."""

AQUEOUS_FAVOUR = 5.0
"""Aqueous species are taken at exp(-5) mol/kg, not 1 mol/kg, when the linear programme compares them with solids."""

PERTURBATION = 1e-11
"""Relative shift of the totals that keeps the linear programme from stalling on ties."""


@dataclass(frozen=True, slots=True)
class Tableau:
    """All species and reagents in the coordinates of one basis.

    Attributes
    ----------
    basis : tuple of int
        Row numbers of the basis species; numbers from `species` on are bare components of either sign.
    nu : ndarray, shape (species, components)
        Amount of each basis member in one of each species.
    reagents : ndarray, shape (reagents, components)
    """

    basis: Basis
    nu: Array
    reagents: Array
    inverse: Array


class Stoichiometry:
    """The matrix of a set of species, with its tableaux cached by basis.

    Parameters
    ----------
    matrix : ndarray of int, shape (species, components)
        Order: `aqueous` aqueous species, pure phases, `pinned` species of fixed activity.
    aqueous, pinned : int
    reagents : ndarray of int, shape (reagents, components)
    """

    cache_size = 4096

    def __init__(self, matrix: Integers, aqueous: int, pinned: int, reagents: Integers) -> None:
        self.matrix = matrix
        self.species: int = matrix.shape[0]
        self.components: int = matrix.shape[1]
        self.aqueous = aqueous
        self.phases: int = self.species - aqueous - pinned
        self.pinned = pinned
        self.reagents = reagents
        unit = np.eye(self.components, dtype=np.int64)
        self._extended = np.vstack([matrix, unit, -unit])
        self._tableaux: dict[Basis, Tableau] = {}

    @property
    def first_pinned(self) -> int:
        """Row number of the first pinned species."""
        return self.aqueous + self.phases

    def fixed(self, basis: Basis) -> NDArray[np.bool_]:
        """Tell which members of a basis have a fixed activity (pure phases and pinned species)."""
        members = np.asarray(basis)
        fixed: NDArray[np.bool_] = (members >= self.aqueous) & (members < self.species)
        return fixed

    def tableau(self, basis: Basis) -> Tableau:
        """Return the tableau of a basis (species numbers in slot order)."""
        found = self._tableaux.get(basis)
        if found is None:
            if len(self._tableaux) >= self.cache_size:
                self._tableaux.clear()
            found = self._tableaux[basis] = self._make(basis)
        return found

    def _make(self, basis: Basis) -> Tableau:
        square = self._extended[list(basis)].astype(np.float64)
        inverse = np.linalg.inv(square)
        determinant = np.rint(np.linalg.det(square))
        # Integers over one determinant: the coefficients are exact fractions, so that no rounding
        # noise of a 1 mol/kg species enters the balance of a trace one.
        adjugate = np.rint(inverse * determinant)
        return Tableau(
            basis,
            (self.matrix @ adjugate) / determinant,
            (self.reagents @ adjugate) / determinant,
            adjugate / determinant,
        )

    def groups(self, bases: list[Basis], rows: Integers) -> Iterator[tuple[Tableau, Integers]]:
        """Yield each distinct basis among `rows` with the rows that have it."""
        found: dict[Basis, list[int]] = {}
        for row in rows:
            found.setdefault(bases[row], []).append(int(row))
        for basis, members in found.items():
            yield self.tableau(basis), np.asarray(members)


def linear_start(shape: Stoichiometry, g: Array, amounts: Array) -> tuple[list[Basis], NDArray[np.bool_]]:
    """Find for every row the basis of least Gibbs energy when mixing entropy is left out.

    Parameters
    ----------
    shape : Stoichiometry
    g : ndarray, shape (rows, species)
        Standard energies over RT.
    amounts : ndarray, shape (rows, reagents)
        mol/kg.

    Returns
    -------
    bases : list of tuple of int
    feasible : ndarray of bool, shape (rows,)
        False where the totals cannot be made of the species at all.
    """
    cost = g.copy()
    cost[:, : shape.aqueous] -= AQUEOUS_FAVOUR
    rows = np.arange(len(g))
    start = _pinned_basis(shape)
    bases = _signed_bases(shape, start, amounts)
    todo = rows
    for _ in range(40 * shape.components + 40):
        if not len(todo):
            break
        moved = [
            _pivot(shape, tableau, members, cost, amounts, bases) for tableau, members in shape.groups(bases, todo)
        ]
        todo = np.concatenate(moved) if moved else todo[:0]
    return bases, _drive_out_components(shape, bases, cost, amounts)


def _pinned_basis(shape: Stoichiometry) -> Basis:
    basis = [shape.species + k for k in range(shape.components)]
    for species in range(shape.first_pinned, shape.species):
        nu = shape.tableau(tuple(basis)).nu[species].copy()
        taken = [slot for slot, member in enumerate(basis) if member < shape.species]
        nu[taken] = 0.0
        if not nu.any():
            raise ValueError("two pinned activities contradict each other")
        basis[int(np.argmax(np.abs(nu)))] = species
    return tuple(basis)


def _signed_bases(shape: Stoichiometry, start: Basis, amounts: Array) -> list[Basis]:
    totals = amounts @ shape.tableau(start).reagents
    bases = []
    for row in totals:
        bases.append(
            tuple(
                member + shape.components if member >= shape.species and total < 0 else member
                for member, total in zip(start, row, strict=True)
            )
        )
    return bases


def _costs(shape: Stoichiometry, basis: Basis, cost: Array) -> Array:
    members = np.asarray(basis)
    known = np.minimum(members, shape.species - 1)
    return np.where(members < shape.species, cost[:, known], ARTIFICIAL_COST)


def _totals(shape: Stoichiometry, tableau: Tableau, amounts: Array) -> Array:
    """Amounts of the basis members, shifted a little and always the same way in component space."""
    totals = amounts @ tableau.reagents
    signs = np.where(amounts @ shape.reagents < 0, -1.0, 1.0)
    shift = PERTURBATION * (1.0 + np.arange(shape.components) / 7.0)
    shifted: Array = totals + (signs * shift) @ tableau.inverse
    return shifted


def _pivot(
    shape: Stoichiometry, tableau: Tableau, rows: Integers, cost: Array, amounts: Array, bases: list[Basis]
) -> Integers:
    """One simplex step for the rows of one basis; return the rows that moved."""
    reduced = cost[rows] - _costs(shape, tableau.basis, cost[rows]) @ tableau.nu.T
    reduced[:, shape.first_pinned :] = 0.0
    entering = np.argmin(reduced, axis=1)
    gain = reduced[np.arange(len(rows)), entering]
    column = tableau.nu[entering]
    pinned = (np.asarray(tableau.basis) >= shape.first_pinned) & (np.asarray(tableau.basis) < shape.species)
    usable = (column > 1e-9) & ~pinned
    totals = np.maximum(_totals(shape, tableau, amounts[rows]), 0.0)
    ratio = np.where(usable, totals / np.where(usable, column, 1.0), np.inf)
    leaving = np.argmin(ratio, axis=1)
    moves = (gain < -1e-9) & usable.any(axis=1)
    for k in np.flatnonzero(moves):
        basis = list(tableau.basis)
        basis[int(leaving[k])] = int(entering[k])
        bases[rows[k]] = tuple(basis)
    moved: Integers = rows[moves]
    return moved


def _drive_out_components(shape: Stoichiometry, bases: list[Basis], cost: Array, amounts: Array) -> NDArray[np.bool_]:
    """Replace bare components that are left at zero by species; rows where one is not zero are infeasible."""
    feasible = np.ones(len(bases), dtype=bool)
    for row, basis in enumerate(bases):
        while max(basis) >= shape.species:
            slot = int(np.argmax(basis))
            tableau = shape.tableau(basis)
            total = (amounts[row] @ tableau.reagents)[slot]
            column = tableau.nu[: shape.first_pinned, slot]
            reduced = (cost[row] - _costs(shape, basis, cost[row : row + 1])[0] @ tableau.nu.T)[: len(column)]
            # A bare component stands in the costs of what contains it: compare without its share.
            reduced = reduced + ARTIFICIAL_COST * column
            candidates = np.flatnonzero(np.abs(column) > 1e-9)
            scale = float(np.abs(amounts[row]) @ np.abs(tableau.reagents[:, slot]))
            if not len(candidates) or abs(total) > 1e-9 * max(scale, 1e-30):
                feasible[row] = False
                break
            chosen = candidates[np.argmin(reduced[candidates] / np.abs(column[candidates]))]
            basis = (*basis[:slot], int(chosen), *basis[slot + 1 :])
            bases[row] = basis
    return feasible
