"""Certificate of an equilibrium: balances, mass action and saturation, checked apart from the solver."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from redoxq.errors import NotConvergedError
from redoxq.thermo.equilibrium import Equilibrium, standard_terms
from redoxq.thermo.minimum import NOTHING
from redoxq.thermo.tableau import Array

BALANCE = 1e-9
MASS_ACTION = 1e-8
SATURATION = 1e-7
DOMINANCE = 4.0


@dataclass(frozen=True, slots=True)
class Certificate:
    """Largest violations of the conditions of equilibrium, a row each.

    Attributes
    ----------
    balance : ndarray, shape (rows,)
        Residual of the balances over the amounts in them, in a basis of the dominant species: totals of
        fixed components hide an error in a trace redox species.
    mass_action : ndarray, shape (rows,)
        Natural-log units by which the species disagree with one set of component potentials.
    saturation : ndarray, shape (rows,)
        Supersaturation of absent phases or misfit of present and pinned ones, natural-log units.
    holds : ndarray of bool, shape (rows,)
    """

    balance: Array
    mass_action: Array
    saturation: Array
    holds: NDArray[np.bool_]


def certify(state: Equilibrium, amounts: Array, pinned: Array | None = None) -> Certificate:
    """Check every row of an equilibrium against its own conditions.

    Parameters
    ----------
    state : Equilibrium
    amounts : ndarray, shape (rows, reagents)
        What was given to the solver.
    pinned : ndarray, shape (rows, pinned), optional

    Returns
    -------
    Certificate
    """
    shape, network = state.network.shape, state.network
    standard = standard_terms(network, state.temperature)
    if pinned is not None:
        standard[:, shape.first_pinned :] += pinned
    standard = standard - network.water * state.ln_water_activity[:, None]
    implied = state.potentials @ shape.matrix.T - standard
    aqueous = shape.aqueous
    mass_action = np.abs(implied[:, :aqueous] - state.ln_activity).max(axis=1, initial=0.0)
    present = state.phases > 0.0
    phases = implied[:, aqueous : shape.first_pinned]
    saturation = np.maximum(
        np.where(present, np.abs(phases), np.maximum(phases, 0.0)).max(axis=1, initial=0.0),
        np.abs(implied[:, shape.first_pinned :]).max(axis=1, initial=0.0),
    )
    balance = _balances(state, amounts)
    with np.errstate(invalid="ignore"):
        holds = state.converged & (balance < BALANCE) & (mass_action < MASS_ACTION) & (saturation < SATURATION)
    return Certificate(balance, mass_action, saturation, holds)


def require(state: Equilibrium, amounts: Array, pinned: Array | None = None) -> None:
    """Raise unless every row of an equilibrium is certified.

    Raises
    ------
    NotConvergedError
    """
    certificate = certify(state, amounts, pinned)
    if not certificate.holds.all():
        row = int(np.flatnonzero(~certificate.holds)[0])
        raise NotConvergedError(
            "The equilibrium of this liquor was not found to the accuracy that an answer needs "
            f"(balance {certificate.balance[row]:.1e}, saturation {certificate.saturation[row]:.1e}).",
            hint="Change the amounts a little, or leave out what is not needed; then report the sentence.",
        )


def _balances(state: Equilibrium, amounts: Array) -> Array:
    shape = state.network.shape
    worst = np.full(len(amounts), np.inf)
    rows = np.flatnonzero(state.converged)
    for tableau, members in shape.groups(state.bases, rows):
        basis = np.asarray(tableau.basis)
        content = np.exp(state.ln_molality[members]) * state.water_kg[members][:, None]
        everything = np.hstack([content, state.phases[members], state.sources[members]])
        totals = amounts[members] @ tableau.reagents
        residual = np.abs(totals - everything @ tableau.nu)
        gross = np.abs(everything) @ np.abs(tableau.nu) + np.abs(totals)
        noise = 1e-13 * (np.abs(amounts[members]) @ np.abs(tableau.reagents) + np.abs(everything) @ np.abs(tableau.nu))
        share = np.where(residual <= np.maximum(noise, NOTHING), 0.0, residual / np.maximum(gross, 1e-300)).max(axis=1)
        free = basis < shape.aqueous
        mine = np.where(free, np.log(np.maximum(everything[:, basis], 1e-320)), np.inf)
        touching = (np.abs(tableau.nu[: shape.aqueous]) > 1e-9) & free
        lead = np.where(touching[None], np.log(np.maximum(content, 1e-320))[:, :, None] - mine[:, None, :], -np.inf)
        dominated = lead.reshape(len(members), -1).max(axis=1, initial=-np.inf) > np.log(DOMINANCE)
        worst[members] = np.where(dominated, np.inf, share)
    return worst
