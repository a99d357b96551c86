"""Full equilibrium of liquors: activities and the minimum of the Gibbs energy, brought into agreement."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from redoxq.matter.catalogue import catalogue
from redoxq.thermo.activity import ActivityModel
from redoxq.thermo.constants import R
from redoxq.thermo.gibbs import gibbs_energies
from redoxq.thermo.minimum import Minimum, minimise
from redoxq.thermo.network import Network
from redoxq.thermo.tableau import Array, Basis

WATER_KG_PER_MOL = 0.01801528
AGREEMENT = 1e-11
CYCLES = 50
HISTORY = 4


@dataclass(frozen=True, slots=True)
class Equilibrium:
    """Equilibrium states of one network, a row each.

    Attributes
    ----------
    ln_molality, ln_gamma : ndarray, shape (rows, aqueous)
        mol per kg of the water that is there in the end; molal activity coefficients.
    ln_water_activity : ndarray, shape (rows,)
    water_kg : ndarray, shape (rows,)
        Water in the end for 1 kg at the start.
    phases : ndarray, shape (rows, phases)
        mol of each pure phase for 1 kg of water at the start.
    sources : ndarray, shape (rows, pinned)
        mol given off by the system to what holds a pinned activity.
    potentials : ndarray, shape (rows, components)
        Chemical potentials of the components over RT, with water at its activity eliminated.
    poise : ndarray, shape (rows,)
        mol/kg that the least buffered balance rests on.
    converged : ndarray of bool, shape (rows,)
    """

    network: Network
    temperature: Array
    ln_molality: Array
    ln_gamma: Array
    ln_water_activity: Array
    water_kg: Array
    phases: Array
    sources: Array
    potentials: Array
    poise: Array
    converged: NDArray[np.bool_]
    bases: list[Basis]

    @property
    def ln_activity(self) -> Array:
        """Natural logarithm of the activities of the aqueous species."""
        return self.ln_molality + self.ln_gamma

    @property
    def ionic_strength(self) -> Array:
        """mol/kg, from the species as they are."""
        charge = np.array([species.formula.charge for species in self.network.aqueous], dtype=float)
        strength: Array = 0.5 * np.exp(self.ln_molality) @ charge**2
        return strength

    @property
    def pH(self) -> Array:
        """-log10 of the hydrogen ion activity."""
        column = [species.key for species in self.network.aqueous].index("H+")
        return np.asarray(-self.ln_activity[:, column] / np.log(10.0))


def standard_terms(network: Network, temperature: Array) -> Array:
    """G/RT of the network's species with the water in them taken off, shape (rows, species)."""
    water = catalogue().get("H2O(l)")
    energies = gibbs_energies((*network.species, water), temperature)
    terms: Array = (energies[:, :-1] - energies[:, -1:] * network.water) / (R * temperature[:, None])
    return terms


def equilibrium(
    network: Network,
    amounts: Array,
    temperature: Array,
    model: ActivityModel,
    pinned: Array | None = None,
) -> Equilibrium:
    """Bring liquors to equilibrium.

    Parameters
    ----------
    network : Network
    amounts : ndarray, shape (rows, reagents)
        mol of each reagent per kg of water.
    temperature : ndarray, shape (rows,)
        K.
    model : ActivityModel
        Made for the aqueous species of the network, in their order.
    pinned : ndarray, shape (rows, pinned), optional
        Natural logarithm of the given activities (fugacity in bar for a gas).

    Returns
    -------
    Equilibrium
        Rows that did not settle have `converged` False and must not be used.
    """
    rows = len(temperature)
    standard = standard_terms(network, temperature)
    if pinned is not None:
        standard[:, network.shape.first_pinned :] += pinned
    aqueous = len(network.aqueous)
    surroundings = np.zeros((rows, aqueous + 2))
    result: Minimum | None = None
    mixer = _Mixer(rows, aqueous + 2)
    settled = np.zeros(rows, dtype=bool)
    for _ in range(CYCLES):
        todo = np.flatnonzero(~settled)
        start = None if result is None else _start(result, todo)
        part = minimise(network.shape, _effective(network, standard[todo], surroundings[todo]), amounts[todo], start)
        result = part if result is None else _merge(result, part, todo)
        answer = _surroundings(network, part, amounts[todo], temperature[todo], surroundings[todo], model)
        change = np.abs(answer - surroundings[todo]).max(axis=1, initial=0.0)
        done = (change < AGREEMENT) | ~part.converged
        settled[todo[done]] = True
        moving = ~done
        if not moving.any():
            break
        surroundings[todo[moving]] = mixer.mix(todo[moving], surroundings[todo[moving]], answer[moving])
    assert result is not None
    return _finish(network, result, surroundings, temperature, settled)


def _effective(network: Network, standard: Array, surroundings: Array) -> Array:
    """Add activity coefficients, water activity and the mass of water to the standard terms."""
    aqueous = len(network.aqueous)
    g = standard - network.water * surroundings[:, aqueous : aqueous + 1]
    g[:, :aqueous] += surroundings[:, :aqueous] - surroundings[:, aqueous + 1 :]
    return g


def _surroundings(
    network: Network, part: Minimum, amounts: Array, temperature: Array, before: Array, model: ActivityModel
) -> Array:
    """ln gamma of each species, ln of the water activity, ln of the kilograms of water."""
    aqueous = len(network.aqueous)
    content = np.exp(np.clip(part.ln_molality, -700.0, 10.0))
    bound = (
        content @ network.water[:aqueous]
        + part.phases @ network.water[aqueous : network.shape.first_pinned]
        + part.sources @ network.water[network.shape.first_pinned :]
    )
    water = 1.0 + WATER_KG_PER_MOL * (amounts @ network.reagent_water - bound)
    water = np.clip(water, 0.02, 50.0)
    ln_gamma, ln_activity = model.ln_gamma(content / water[:, None], temperature)
    answer = np.column_stack([ln_gamma, ln_activity, np.log(water)])
    return np.where(part.converged[:, None], answer, before)


def _start(result: Minimum, rows: NDArray[np.int64]) -> tuple[list[Basis], Array]:
    return [result.bases[row] for row in rows], result.potentials[rows]


def _merge(result: Minimum, part: Minimum, rows: NDArray[np.int64]) -> Minimum:
    for name in ("ln_molality", "phases", "sources", "potentials", "poise", "converged"):
        getattr(result, name)[rows] = getattr(part, name)
    result.passes[rows] += part.passes
    bases = list(result.bases)
    for row, basis in zip(rows, part.bases, strict=True):
        bases[row] = basis
    return replace(result, bases=bases)


def _finish(
    network: Network, result: Minimum, surroundings: Array, temperature: Array, settled: NDArray[np.bool_]
) -> Equilibrium:
    aqueous = len(network.aqueous)
    return Equilibrium(
        network,
        temperature,
        result.ln_molality - surroundings[:, aqueous + 1 :],
        surroundings[:, :aqueous],
        surroundings[:, aqueous],
        np.exp(surroundings[:, aqueous + 1]),
        result.phases,
        result.sources,
        result.potentials,
        result.poise,
        result.converged & settled,
        result.bases,
    )


class _Mixer:
    """Anderson's extrapolation of a fixed-point iteration, a row each.

    References
    ----------
    D. G. Anderson, J. Assoc. Comput. Mach. 12 (1965) 547.
    """

    def __init__(self, rows: int, size: int) -> None:
        self.points = np.zeros((rows, HISTORY, size))
        self.errors = np.zeros((rows, HISTORY, size))
        self.count = 0

    def mix(self, rows: NDArray[np.int64], point: Array, answer: Array) -> Array:
        """Return the next point from the last few points and what they led to."""
        slot = self.count % HISTORY
        self.points[rows, slot] = answer
        self.errors[rows, slot] = answer - point
        self.count += 1
        known = min(self.count, HISTORY)
        if known < 2:
            return answer
        others = [k for k in range(known) if k != slot]
        errors = self.errors[rows]
        points = self.points[rows]
        difference = errors[:, others] - errors[:, slot : slot + 1]
        normal = difference @ difference.transpose(0, 2, 1)
        trace = np.trace(normal, axis1=1, axis2=2)
        normal += (1e-12 * trace + 1e-300)[:, None, None] * np.eye(len(others))
        right = -(difference @ errors[:, slot][..., None])
        share = np.clip(np.linalg.solve(normal, right)[..., 0], -5.0, 5.0)
        shift = (points[:, others] - points[:, slot : slot + 1]).transpose(0, 2, 1) @ share[..., None]
        mixed: Array = points[:, slot] + shift[..., 0]
        return mixed
