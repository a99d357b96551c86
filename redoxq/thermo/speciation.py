"""A liquor as it stands: every oxidation state as it was put in, everything else at equilibrium."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.composition import components
from redoxq.matter.formula import parse_formula
from redoxq.matter.recipes import Air, Recipe
from redoxq.thermo import activity, certificate, water
from redoxq.thermo.constants import R
from redoxq.thermo.density import Composition, molalities
from redoxq.thermo.equilibrium import Equilibrium, equilibrium
from redoxq.thermo.gibbs import gibbs_energies
from redoxq.thermo.network import PROTON, Network, Selection, network, terms
from redoxq.thermo.tableau import Array

ATMOSPHERE = 1.01325
OXYGEN_SHARE = 0.20946
"""Oxygen in dry air, volume fraction: ISO 2533 (1975)."""

LN10 = float(np.log(10.0))


@dataclass(frozen=True)
class Liquor:
    """Speciated liquors that share their reagents, a row each.

    Attributes
    ----------
    reagents : tuple of str
    amounts : ndarray, shape (rows, reagents)
        mol per kg of water.
    temperature : ndarray, shape (rows,)
        K.
    state : Equilibrium
        With all oxidation states frozen as they were put in.
    oxygen_pressure : ndarray, shape (rows,)
        bar; 0 without air.
    composition : Composition
        Of the first row: density and what was assumed.
    """

    reagents: tuple[str, ...]
    amounts: Array
    temperature: Array
    state: Equilibrium
    oxygen_pressure: Array
    composition: Composition
    model: activity.ActivityModel
    pinned: Array | None

    @property
    def network(self) -> Network:
        return self.state.network

    @cached_property
    def totals(self) -> dict[str, Array]:
        """Analytical total of each component, mol per kg of water, shape (rows,)."""
        found: dict[str, Array] = {}
        for k, reagent in enumerate(self.reagents):
            for component, number in components(parse_formula(reagent)).items():
                found[component] = found.get(component, np.zeros(len(self.amounts))) + number * self.amounts[:, k]
        return found

    @cached_property
    def potentials(self) -> dict[str, Array]:
        """Chemical potential over RT of each component, hydrogen and oxygen states included."""
        known = dict(zip(self.network.components, self.state.potentials.T, strict=True))
        known["H(I)"] = known[PROTON]
        oxygen = gibbs_energies((catalogue().get("O2(g)"),), self.temperature)[:, 0] / (R * self.temperature)
        with np.errstate(divide="ignore"):
            known.setdefault("O(0)", 0.5 * (oxygen + np.log(self.oxygen_pressure)))
        return known

    def ln_activity(self, key: str) -> Array:
        """ln of the activity of an aqueous species that is in the network; -inf where it is not."""
        for k, species in enumerate(self.network.aqueous):
            if species.key == key:
                return self.state.ln_activity[:, k]
        return np.full(len(self.amounts), -np.inf)

    def ln_gamma(self, species: tuple[Species, ...]) -> Array:
        """Activity coefficients of species at trace strength in these liquors, shape (rows, species)."""
        model = activity.choose((*self.network.aqueous, *species))
        content = np.exp(self.state.ln_molality)
        padded = np.hstack([content, np.zeros((len(content), len(species)))])
        return model.ln_gamma(padded, self.temperature)[0][:, len(self.network.aqueous) :]


def oxygen_pressure(air: Air, temperature: Array) -> Array:
    """Partial pressure of oxygen over a liquor, bar; water vapour is taken off one atmosphere."""
    dry = np.maximum(ATMOSPHERE - water.vapour_pressure(temperature), 0.0)
    share = {Air.open: OXYGEN_SHARE, Air.oxygen: 1.0}.get(air, 0.0)
    pressure: Array = share * dry
    return pressure


def speciate(recipe: Recipe) -> Liquor:
    """Speciate the liquor of a recipe.

    Raises
    ------
    NotConvergedError
        When no certified equilibrium was found.
    DataError
        When the tables hold nothing for a component.
    """
    composition = molalities(recipe)
    reagents = tuple(formula.text for formula in composition.reagents)
    amounts = np.atleast_2d(composition.molality).astype(float)
    temperature = np.full(len(amounts), recipe.temperature)
    selection = Selection(pinned=() if recipe.pH is None else (PROTON,))
    web = network(reagents, selection)
    pinned = None if recipe.pH is None else np.full((len(amounts), 1), -recipe.pH * LN10)
    model = activity.choose(web.aqueous)
    state = equilibrium(web, amounts, temperature, model, pinned)
    certificate.require(state, amounts, pinned)
    return Liquor(
        reagents, amounts, temperature, state, oxygen_pressure(recipe.air, temperature), composition, model, pinned
    )


def dissolved_oxygen(liquor: Liquor) -> Array:
    """Oxygen in the liquor at saturation with its gas, mol/kg, by Henry's law from the Gibbs energies."""
    gas, solute = catalogue().get("O2(g)"), catalogue().get("O2")
    energies = gibbs_energies((gas, solute), liquor.temperature)
    henry = np.exp((energies[:, 0] - energies[:, 1]) / (R * liquor.temperature))
    content: Array = liquor.oxygen_pressure * henry / np.exp(liquor.ln_gamma((solute,))[:, 0])
    return content


def water_value(liquor: Liquor) -> Array:
    """Chemical potential of water over RT, at its activity, shape (rows,)."""
    pure = gibbs_energies((catalogue().get("H2O(l)"),), liquor.temperature)[:, 0]
    value: Array = pure / (R * liquor.temperature) + liquor.state.ln_water_activity
    return value


def standard_value(liquor: Liquor, species: tuple[Species, ...]) -> Array:
    """Standard chemical potentials over RT with the water in each species taken off, shape (rows, species)."""
    energies = gibbs_energies(species, liquor.temperature) / (R * liquor.temperature[:, None])
    count = np.array([terms(one.formula, one.components, frozenset()).water for one in species])
    values: Array = energies - count * water_value(liquor)[:, None]
    return values
