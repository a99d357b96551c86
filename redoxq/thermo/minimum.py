"""The minimum of the Gibbs energy of a solution and its pure phases, many states at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from redoxq.thermo.tableau import Array, Basis, Integers, Stoichiometry, Tableau, linear_start

BALANCE = 1e-12
"""A balance is closed when its residual is below this share of the amounts in it."""

NOISE = 1e-13
"""Residuals below this share of the amounts are rounding, not signal."""

NOTHING = 1e-60
"""mol/kg: a species that nothing forces to be there falls without end; below this it is absent."""

SUPERSATURATION = 1e-9
DOMINANCE = 1.5
LARGEST_EXPONENT = 230.0
PASSES = 250
EARLY_PHASE_CHANGES = 12
PHASE_TRIAL = 10


@dataclass(frozen=True, slots=True)
class Minimum:
    """Equilibrium amounts of many states of one set of species.

    Attributes
    ----------
    ln_molality : ndarray, shape (rows, aqueous)
    phases : ndarray, shape (rows, phases)
        mol/kg of each pure phase; 0 where absent.
    sources : ndarray, shape (rows, pinned)
        mol/kg taken up (negative) or given off (positive) by what holds a pinned activity.
    potentials : ndarray, shape (rows, components)
        Chemical potentials of the components over RT.
    poise : ndarray, shape (rows,)
        Smallest amount of a free basis member, mol/kg: what the least buffered balance rests on.
    converged : ndarray of bool, shape (rows,)
    passes : ndarray of int, shape (rows,)
    bases : list of tuple of int
    """

    ln_molality: Array
    phases: Array
    sources: Array
    potentials: Array
    poise: Array
    converged: NDArray[np.bool_]
    passes: Integers
    bases: list[Basis]


class _Search:
    """State of the iteration: for every row a basis and the logarithms of its members."""

    def __init__(self, shape: Stoichiometry, g: Array, amounts: Array, bases: list[Basis], x: Array) -> None:
        rows = len(g)
        self.shape, self.g, self.amounts, self.bases, self.x = shape, g, amounts, bases, x
        self.step = np.zeros_like(x)
        self.slope = np.full(rows, np.nan)
        self.passes = np.zeros(rows, dtype=np.int64)
        self.early = np.zeros(rows, dtype=np.int64)
        self.converged = np.zeros(rows, dtype=bool)

    # -- one evaluation ---------------------------------------------------------------------------

    def logarithms(self, tableau: Tableau, rows: Integers) -> Array:
        """ln activity-like amounts of all species, shape (rows, species); phases: ln of the saturation."""
        g = self.g[rows]
        relative = g - g[:, list(tableau.basis)] @ tableau.nu.T
        values: Array = self.x[rows] @ tableau.nu.T - relative
        return values

    def advance(self, tableau: Tableau, rows: Integers) -> None:
        """One pass for the rows of one basis: judge the last step, change the basis, or step on."""
        shape = self.shape
        self.passes[rows] += 1
        logs = self.logarithms(tableau, rows)
        aqueous = np.exp(np.clip(logs[:, : shape.aqueous], -700.0, LARGEST_EXPONENT))
        nu = tableau.nu[: shape.aqueous]
        fixed = shape.fixed(tableau.basis)
        totals = self.amounts[rows] @ tableau.reagents
        residual = totals - aqueous @ nu
        scale = aqueous @ np.abs(nu) + np.abs(self.amounts[rows]) @ np.abs(tableau.reagents)
        own = aqueous @ np.abs(nu) + np.abs(totals)
        signal = np.where(np.abs(residual) < NOISE * scale, 0.0, residual)
        good = self._step_was_good(rows, signal, fixed)
        if not good.all():
            self._shorten(rows[~good])
        floor = np.maximum(np.maximum(BALANCE * own, NOISE * scale), NOTHING)
        closed = (fixed | (np.abs(residual) <= floor)).all(axis=1)
        pending = good.copy()
        pending[pending] = ~self._improve_basis(tableau, rows[pending], logs[pending], closed[pending])
        pending[pending] = ~self._change_phase(
            tableau, rows[pending], logs[pending], residual[pending], own[pending], closed[pending]
        )
        done = pending & closed
        self.converged[rows[done]] = True
        pending &= ~closed
        if pending.any():
            self._newton(tableau, rows[pending], aqueous[pending], signal[pending], totals[pending], fixed)

    def _step_was_good(self, rows: Integers, signal: Array, fixed: NDArray[np.bool_]) -> NDArray[np.bool_]:
        """The objective is concave: a step is too long where its slope has turned and grown."""
        slope = (np.where(fixed, 0.0, signal) * self.step[rows]).sum(axis=1)
        before = self.slope[rows]
        bad: NDArray[np.bool_] = (slope < 0.0) & (-slope > 0.9 * before)
        return ~bad

    def _shorten(self, rows: Integers) -> None:
        self.step[rows] *= 0.5
        self.x[rows] -= self.step[rows]

    # -- steps ------------------------------------------------------------------------------------

    def _newton(
        self,
        tableau: Tableau,
        rows: Integers,
        aqueous: Array,
        signal: Array,
        totals: Array,
        fixed: NDArray[np.bool_],
    ) -> None:
        free = np.flatnonzero(~fixed)
        nu = tableau.nu[: self.shape.aqueous, free]
        hessian = (nu.T[None] * aqueous[:, None, :]) @ nu
        root = np.sqrt(np.maximum(np.einsum("rii->ri", hessian), 1e-300))
        scaled = hessian / root[:, :, None] / root[:, None, :]
        scaled += 1e-14 * np.eye(len(free))
        newton = np.linalg.solve(scaled, (signal[:, free] / root)[..., None])[..., 0] / root
        step = np.zeros_like(signal)
        step[:, free] = _tempered(newton, nu, aqueous, totals[:, free])
        self.step[rows] = step
        self.slope[rows] = (signal * step).sum(axis=1)
        uphill = self.slope[rows] <= 0.0
        if uphill.any():
            capped = np.zeros_like(signal)
            capped[:, free] = np.clip(newton, -2.0, 2.0)
            shrink = np.max(np.abs(newton), axis=1, keepdims=True)
            capped[:, free] = newton * np.minimum(1.0, 2.0 / np.maximum(shrink, 1e-300))
            turned = rows[uphill]
            self.step[turned] = capped[uphill]
            self.slope[turned] = (signal * capped).sum(axis=1)[uphill]
        self.x[rows] += self.step[rows]

    # -- basis ------------------------------------------------------------------------------------

    def _rebase(self, tableau: Tableau, row: int, slot: int, entering: int, values: Array) -> None:
        """Exchange one basis member without moving the point; the last step is carried along."""
        step = tableau.nu[entering] @ self.step[row]
        self.x[row, slot] = values[entering] if entering < self.shape.aqueous else 0.0
        self.step[row, slot] = step
        basis = self.bases[row]
        self.bases[row] = (*basis[:slot], entering, *basis[slot + 1 :])

    def _improve_basis(
        self, tableau: Tableau, rows: Integers, logs: Array, closed: NDArray[np.bool_]
    ) -> NDArray[np.bool_]:
        """Let the most abundant species be the basis; tell which rows changed."""
        shape = self.shape
        if not len(rows):
            return np.zeros(0, dtype=bool)
        fixed = shape.fixed(tableau.basis)
        nonzero = (np.abs(tableau.nu[: shape.aqueous]) > 1e-9) & ~fixed
        lead = logs[:, : shape.aqueous, None] - self.x[rows][:, None, :]
        lead = np.where(nonzero[None], lead, -np.inf)
        best = lead.reshape(len(rows), -1).argmax(axis=1)
        gain = lead.reshape(len(rows), -1)[np.arange(len(rows)), best]
        changes = gain > np.log(DOMINANCE)
        for k in np.flatnonzero(changes):
            entering, slot = divmod(int(best[k]), shape.components)
            self._rebase(tableau, int(rows[k]), slot, entering, logs[k])
        moved: NDArray[np.bool_] = changes
        return moved

    # -- phases -----------------------------------------------------------------------------------

    def _change_phase(
        self,
        tableau: Tableau,
        rows: Integers,
        logs: Array,
        residual: Array,
        own: Array,
        closed: NDArray[np.bool_],
    ) -> NDArray[np.bool_]:
        """Drop the most negative phase or add the most supersaturated one; tell which rows changed."""
        shape = self.shape
        if not len(rows):
            return np.zeros(0, dtype=bool)
        members = np.asarray(tableau.basis)
        phase = (members >= shape.aqueous) & (members < shape.first_pinned)
        deficit = np.where(phase, residual + BALANCE * own, np.inf)
        slot = deficit.argmin(axis=1)
        negative = deficit[np.arange(len(rows)), slot] < 0.0
        saturation = logs[:, shape.aqueous : shape.first_pinned].copy()
        saturation[:, members[phase] - shape.aqueous] = -np.inf
        worst = saturation.argmax(axis=1) if shape.phases else np.zeros(len(rows), dtype=np.int64)
        excess = saturation[np.arange(len(rows)), worst] if shape.phases else np.full(len(rows), -np.inf)
        # A balance that only a phase can close does not come near by itself: now and then one is let in unasked.
        due = self._near(residual, own, members) | (self.passes[rows] % PHASE_TRIAL == 0)
        allowed = closed | ((self.early[rows] < EARLY_PHASE_CHANGES) & due)
        drops = allowed & negative
        adds = allowed & ~negative & (excess > SUPERSATURATION)
        for k in np.flatnonzero(drops):
            self._drop(tableau, int(rows[k]), int(slot[k]), logs[k])
        for k in np.flatnonzero(adds):
            self._add(tableau, int(rows[k]), shape.aqueous + int(worst[k]), logs[k], residual[k])
        changed = drops | adds
        self.early[rows[changed & ~closed]] += 1
        self.slope[rows[changed]] = np.nan
        self.step[rows[changed]] = 0.0
        result: NDArray[np.bool_] = changed
        return result

    def _near(self, residual: Array, own: Array, members: Integers) -> NDArray[np.bool_]:
        free = members < self.shape.aqueous
        near: NDArray[np.bool_] = np.all((np.abs(residual) <= 0.1 * own)[:, free], axis=1)
        return near

    def _drop(self, tableau: Tableau, row: int, slot: int, logs: Array) -> None:
        column = np.abs(tableau.nu[: self.shape.aqueous, slot]) > 1e-9
        entering = int(np.where(column, logs[: self.shape.aqueous], -np.inf).argmax())
        self._rebase(tableau, row, slot, entering, logs)

    def _add(self, tableau: Tableau, row: int, phase: int, logs: Array, residual: Array) -> None:
        """The new phase takes the slot of the member that least of it brings to saturation or uses up."""
        shape = self.shape
        members = np.asarray(tableau.basis)
        column = tableau.nu[phase]
        usable = (np.abs(column) > 1e-9) & (members < shape.first_pinned)
        size = np.where(usable, np.abs(column), 1.0)
        aqueous = members < shape.aqueous
        held = np.exp(np.clip(self.x[row], -700.0, 200.0))
        # A dissolved member that the phase gives off rises until the phase is only just saturated.
        rise = np.expm1(np.clip(max(float(logs[phase]), 0.0) / size, 0.0, 200.0))
        needed = np.where(column > 0.0, held, held * rise) / size
        used_up = np.where(column > 0.0, np.maximum(residual, 0.0) / size, np.inf)
        ratio = np.where(usable, np.where(aqueous, needed, used_up), np.inf)
        self._rebase(tableau, row, int(ratio.argmin()), phase, logs)


def _tempered(newton: Array, nu: Array, aqueous: Array, totals: Array) -> Array:
    """Newton steps in amounts where they are small, the balance of each component alone where not."""
    small = newton > -0.8
    logarithmic = np.log1p(np.where(small, newton, 0.0))
    gains = aqueous @ np.maximum(nu, 0.0) + np.maximum(-totals, 0.0)
    losses = aqueous @ np.maximum(-nu, 0.0) + np.maximum(totals, 0.0)
    stiffness = (aqueous @ nu**2) / np.maximum(np.maximum(gains, losses), 1e-300)
    alone = np.log(np.maximum(losses, 1e-300) / np.maximum(gains, 1e-300)) / np.maximum(stiffness, 1.0)
    tempered: Array = np.where(small, logarithmic, np.clip(alone, -60.0, -0.1))
    return tempered


def minimise(shape: Stoichiometry, g: Array, amounts: Array, start: tuple[list[Basis], Array] | None = None) -> Minimum:
    """Minimise the Gibbs energy of every row at fixed activity coefficients.

    Parameters
    ----------
    shape : Stoichiometry
    g : ndarray, shape (rows, species)
        Standard energies over RT on the components of `shape`, activity coefficients and the
        water in each species included: ln m = matrix @ potentials - g for an aqueous species.
    amounts : ndarray, shape (rows, reagents)
        mol per kg of water. May be negative for a reagent that is taken away.
    start : (bases, potentials), optional
        Where to begin: those of a neighbouring solution.

    Returns
    -------
    Minimum

    Notes
    -----
    Dual of the Gibbs minimisation (element potentials), solved by Newton steps in the logarithms
    of a basis that is exchanged as other species come to dominate; W. R. Smith, R. W. Missen,
    Chemical Reaction Equilibrium Analysis, Wiley (1982).
    """
    rows = len(g)
    feasible = np.ones(rows, dtype=bool)
    if start is None:
        bases, feasible = linear_start(shape, g, amounts)
        x = _first_logarithms(shape, bases, feasible, amounts)
    else:
        bases = list(start[0])
        x = _logarithms_at(shape, bases, g, start[1])
    search = _Search(shape, g, amounts, bases, x)
    active = np.flatnonzero(feasible)
    for _ in range(PASSES):
        for tableau, members in shape.groups(search.bases, active):
            search.advance(tableau, members)
        active = active[~search.converged[active]]
        if not len(active):
            break
    return _collect(search, feasible)


def _first_logarithms(shape: Stoichiometry, bases: list[Basis], feasible: NDArray[np.bool_], amounts: Array) -> Array:
    x = np.zeros((len(bases), shape.components))
    for tableau, rows in shape.groups(bases, np.flatnonzero(feasible)):
        totals = amounts[rows] @ tableau.reagents
        x[rows] = np.where(shape.fixed(tableau.basis), 0.0, np.log(np.maximum(totals, 1e-9)))
    return x


def _logarithms_at(shape: Stoichiometry, bases: list[Basis], g: Array, potentials: Array) -> Array:
    x = np.zeros((len(bases), shape.components))
    for tableau, rows in shape.groups(bases, np.arange(len(bases))):
        members = list(tableau.basis)
        values = potentials[rows] @ shape.matrix[members].T - g[rows][:, members]
        x[rows] = np.where(shape.fixed(tableau.basis), 0.0, values)
    return x


def _collect(search: _Search, feasible: NDArray[np.bool_]) -> Minimum:
    shape = search.shape
    rows = len(search.x)
    ln_molality = np.full((rows, shape.aqueous), np.nan)
    phases = np.zeros((rows, shape.phases))
    sources = np.zeros((rows, shape.pinned))
    potentials = np.full((rows, shape.components), np.nan)
    poise = np.full(rows, np.nan)
    for tableau, members in shape.groups(search.bases, np.flatnonzero(feasible)):
        logs = search.logarithms(tableau, members)[:, : shape.aqueous]
        ln_molality[members] = logs
        amounts = np.exp(np.clip(logs, -700.0, LARGEST_EXPONENT))
        residual = search.amounts[members] @ tableau.reagents - amounts @ tableau.nu[: shape.aqueous]
        for slot, member in enumerate(tableau.basis):
            if member >= shape.first_pinned:
                sources[members, member - shape.first_pinned] = residual[:, slot]
            elif member >= shape.aqueous:
                phases[members, member - shape.aqueous] = np.maximum(residual[:, slot], 0.0)
        basis_g = search.g[members][:, list(tableau.basis)]
        potentials[members] = (search.x[members] + basis_g) @ tableau.inverse.T
        held = np.where(shape.fixed(tableau.basis), np.inf, search.x[members])
        poise[members] = np.exp(np.minimum(held.min(axis=1), 200.0))
    return Minimum(
        ln_molality, phases, sources, potentials, poise, search.converged & feasible, search.passes, search.bases
    )
