"""Couples of a liquor: each oxidant in it, what it turns into, and the potential at the actual activities."""

from __future__ import annotations

from collections.abc import Mapping, Set
from dataclasses import dataclass, replace
from functools import cache

import numpy as np

from redoxq.errors import DataError
from redoxq.matter.catalogue import Species, catalogue
from redoxq.matter.composition import split_component
from redoxq.matter.tables import read_table
from redoxq.thermo.constants import F, R
from redoxq.thermo.forms import (
    FILM_SOLUBILITY,
    Form,
    dissolved_form,
    electrode_potential,
    gas_form,
    solid_forms,
    stable_form,
    states_of,
)
from redoxq.thermo.halves import ALKALINE, carriers, half_reaction
from redoxq.thermo.network import PROTON, terms
from redoxq.thermo.reactions import Reaction
from redoxq.thermo.speciation import Liquor, water_value
from redoxq.thermo.tableau import Array

LEAST = 1e-12
"""mol/kg below which an oxidant counts as absent."""


@dataclass(frozen=True, slots=True)
class Couple:
    """A row of the table of couples."""

    id: str
    kind: str
    oxidised: str
    reduced: str
    product: str
    title: str
    source: str
    frozen: str


@dataclass(frozen=True, slots=True)
class Oxidant:
    """One oxidant in liquors, a row each.

    Attributes
    ----------
    half : Reaction
        Its reduction, written with the species of the first row.
    potential : ndarray, shape (rows,)
        V against SHE at the actual activities.
    plated : str
        Symbol of the metal that it leaves, or nothing.
    changing : frozenset of str
        Its components before and after.
    frozen : bool
        The couple does not react in water at all unless practice lets it: where it is idle it is no oxidant.
    """

    id: str
    kind: str
    title: str
    half: Reaction
    potential: Array
    plated: str
    changing: frozenset[str]
    product: Species
    oxidised: Species
    frozen: bool = False


@dataclass(frozen=True, slots=True)
class MetalForm:
    """What a metal turns into in liquors, a row each.

    Attributes
    ----------
    potential : ndarray, shape (rows,)
        Lowest equilibrium potential of the metal with any of its products, V against SHE: it is immune below.
    half : Reaction
        The reduction of `product` to the metal, of the first row.
    product : Species
        The film where there is one, else the dissolved form of lowest potential.
    film : Species or None
        The solid that can cover the metal.
    dissolving : tuple of (Reaction, Species)
        The same for the dissolved form.
    components : frozenset of str
        All states of the metal.
    """

    metal: Species
    potential: Array
    half: Reaction
    product: Species
    film: Species | None
    dissolving: tuple[Reaction, Species]
    components: frozenset[str]

    def dissolved(self) -> MetalForm:
        """The same metal going to its dissolved form."""
        half, product = self.dissolving
        return replace(self, half=half, product=product)


@cache
def couples() -> tuple[Couple, ...]:
    """The table of couples."""
    return tuple(Couple(**{key: row[key] for key in Couple.__slots__}) for row in read_table("couples.csv"))


def is_alkaline(liquor: Liquor) -> bool:
    return bool(liquor.state.pH[0] > ALKALINE)


def metal_form(liquor: Liquor, symbol: str) -> MetalForm:
    """Find the product of lowest potential of a metal, and the solid that may cover it.

    Parameters
    ----------
    liquor : Liquor
    symbol : str

    Returns
    -------
    MetalForm
    """
    metal = catalogue().metal(symbol)
    dissolved = [
        (form, float(split_component(form.component)[1] or 0))
        for state in states_of(liquor, symbol)
        if (form := dissolved_form(liquor, state))
    ]
    solids = [(form, _mean_state(form.species[0], symbol)) for form in solid_forms(liquor, symbol)]
    if not dissolved and not solids:
        raise DataError(f"The tables hold no ion and no oxide of {metal.name}.")
    volts = {id(form): electrode_potential(form, charge, liquor.temperature) for form, charge in (*dissolved, *solids)}

    def lowest(pairs: list[tuple[Form, float]]) -> Species:
        form, _ = min(pairs, key=lambda pair: float(volts[id(pair[0])][0]))
        return form.species[int(form.leading[0])]

    components = frozenset(
        {
            c
            for form, _ in (*dissolved, *solids)
            for s in form.species
            for c in s.components
            if split_component(c)[0] == symbol
        }
        | {f"{symbol}(0)"}
    )

    def reduction(species: Species) -> Reaction:
        return half_reaction(
            species, metal, (1, _atoms(species, symbol)), components, carriers(liquor), is_alkaline(liquor)
        )

    film = (
        lowest(solids)
        if solids and _covers(liquor, symbol, min(float(volts[id(form)][0]) for form, _ in solids))
        else None
    )
    ion = lowest(dissolved or solids)
    product = ion if film is None else film
    potential = np.min([volts[id(form)] for form, _ in (*dissolved, *solids)], axis=0)
    return MetalForm(metal, potential, reduction(product), product, film, (reduction(ion), ion), components)


def _covers(liquor: Liquor, symbol: str, solid: float) -> bool:
    """Tell whether a solid of that potential (V) leaves too little dissolved metal to carry attack on."""
    for state in states_of(liquor, symbol):
        form = dissolved_form(liquor, state, FILM_SOLUBILITY, fresh=True)
        charge = float(split_component(state)[1] or 0)
        if form is not None and solid > electrode_potential(form, charge, liquor.temperature)[0]:
            return False
    return True


def _mean_state(species: Species, symbol: str) -> float:
    states = {c: n for c, n in species.components.items() if split_component(c)[0] == symbol}
    return sum((split_component(c)[1] or 0) * n for c, n in states.items()) / sum(states.values())


def _atoms(species: Species, symbol: str) -> int:
    return dict(species.formula.atoms)[symbol]


def oxidants(liquor: Liquor, metal: str) -> list[Oxidant]:
    """Every oxidant in a liquor that could be tried on a metal.

    Parameters
    ----------
    liquor : Liquor
    metal : str
        Symbol; its own ions do not plate on it.

    Returns
    -------
    list of Oxidant
    """
    standing = carriers(liquor)
    found = [one for couple in couples() if (one := _dissolved_oxidant(liquor, couple, standing)) is not None]
    for component, total in liquor.totals.items():
        symbol, state = split_component(component)
        if symbol != metal and (state or 0) > 0 and float(np.max(total)) > LEAST and catalogue().has_metal(symbol):
            plating = _plating(liquor, component, standing)
            if plating is not None:
                found.append(plating)
    return found


def _plating(liquor: Liquor, component: str, standing: Mapping[str, Species]) -> Oxidant | None:
    symbol, state = split_component(component)
    form = dissolved_form(liquor, component)
    if form is None or not state:
        return None
    ion, metal = form.species[int(form.leading[0])], catalogue().metal(symbol)
    changing = frozenset({component, f"{symbol}(0)"})
    half = half_reaction(ion, metal, (1, ion.components[component]), changing, standing, is_alkaline(liquor))
    potential = electrode_potential(form, float(state), liquor.temperature)
    return Oxidant(f"{symbol} ion", "metal ion", f"{ion.key}", half, potential, symbol, changing, metal, ion)


def _dissolved_oxidant(liquor: Liquor, couple: Couple, standing: Mapping[str, Species]) -> Oxidant | None:
    oxidised = _oxidised(liquor, couple, standing)
    if oxidised is None:
        return None
    changing = frozenset({couple.oxidised, couple.reduced})
    reduced, form = _reduced(liquor, couple, standing.keys() | changing)
    if reduced is None:
        return None
    half = half_reaction(oxidised, reduced, _ratio(oxidised, reduced, couple), changing, standing, is_alkaline(liquor))
    values = {reduced: _value_at(liquor, reduced, couple.reduced, form)}
    return Oxidant(
        couple.id,
        couple.kind,
        couple.title,
        half,
        half_potential(liquor, half, values),
        "",
        changing,
        reduced,
        oxidised,
        frozen=couple.frozen == "yes",
    )


def _oxidised(liquor: Liquor, couple: Couple, standing: Mapping[str, Species]) -> Species | None:
    if couple.oxidised == "H(I)":
        return catalogue().get(PROTON)
    if couple.oxidised == "O(0)":
        return catalogue().get("O2(g)") if float(np.max(liquor.oxygen_pressure)) > 0.0 else None
    total = liquor.totals.get(couple.oxidised)
    if total is None or float(np.max(total)) <= LEAST:
        return None
    if couple.oxidised in standing:
        return standing[couple.oxidised]
    form = dissolved_form(liquor, couple.oxidised)
    return None if form is None else form.species[int(form.leading[0])]


def _reduced(liquor: Liquor, couple: Couple, writable: Set[str]) -> tuple[Species | None, Form | None]:
    """What the oxidant becomes, as a species whose other components can stand in an equation."""
    if couple.reduced == "O(-II)":
        return catalogue().get("H2O(l)"), None
    if couple.product:
        product = catalogue().get(couple.product)
        return product, gas_form(liquor, product, couple.reduced)
    form = stable_form(liquor, couple.reduced)
    if form is None:
        return None, None
    leading = form.species[int(form.leading[0])]
    if leading.components.keys() <= writable:
        return leading, form
    return next(((one, form) for one in form.species if one.components.keys() <= writable), (None, None))


def _ratio(oxidised: Species, reduced: Species, couple: Couple) -> tuple[int, int]:
    """How many of each keep the changing element; whole groups are counted by the element they share."""
    if couple.oxidised == "H(I)":
        return 0, 1  # the hydrogen ions, or water, come in when the equation is closed
    if couple.reduced == "O(-II)":
        return 1, dict(oxidised.formula.atoms)["O"]
    element, _ = split_component(couple.reduced)
    if element == "O":
        return 1, 1
    left, right = dict(oxidised.formula.atoms)[element], dict(reduced.formula.atoms)[element]
    common = int(np.lcm(left, right))
    return common // left, common // right


def _value_at(liquor: Liquor, species: Species, component: str, form: Form | None) -> Array:
    """Chemical potential over RT (water taken off) of a species at the potential that its form has."""
    total = np.zeros(len(liquor.amounts))
    for name, number in terms(species.formula, species.components, frozenset()).counts.items():
        if number:
            source = form.potential if form is not None and name == component else liquor.potentials[name]
            total = total + number * source
    return total


def half_potential(liquor: Liquor, half: Reaction, values: Mapping[Species, Array]) -> Array:
    """Nernst potential of a half reaction in liquors, V against SHE, shape (rows,).

    Parameters
    ----------
    liquor : Liquor
    half : Reaction
        Written as a reduction.
    values : mapping of Species to ndarray
        Potentials over RT of the species that the liquor does not fix, water taken off.
    """
    total = np.zeros(len(liquor.amounts))
    water = 0
    for species, coefficient in zip(half.species, half.coefficients, strict=True):
        value = values.get(species)
        total = total + coefficient * (_value_at(liquor, species, "", None) if value is None else value)
        water += coefficient * terms(species.formula, species.components, frozenset()).water
    if water:  # made of, or broken down to, oxygen in another state
        total = total + water * water_value(liquor)
    volts: Array = -R * liquor.temperature / F * total / half.electrons
    return volts
