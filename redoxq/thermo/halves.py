"""Half reactions written with the species that really stand in a liquor."""

from __future__ import annotations

from collections.abc import Mapping, Set

import numpy as np

from redoxq.errors import ReactionError
from redoxq.matter.catalogue import Species, catalogue
from redoxq.thermo.reactions import Reaction
from redoxq.thermo.speciation import Liquor

ALKALINE = 8.0
"""pH from which a reaction is written with hydroxide instead of hydrogen ions."""


def carriers(liquor: Liquor, row: int = 0) -> dict[str, Species]:
    """For each component the dissolved species that stands for it in equations: it alone, and most abundant."""
    best: dict[str, tuple[float, Species]] = {}
    for species, content in zip(liquor.network.aqueous, liquor.state.ln_molality[row], strict=True):
        if len(species.components) == 1:
            ((component, number),) = species.components.items()
            rank = float(content) - (0.0 if number == 1 else 5.0)
            if component not in best or rank > best[component][0]:
                best[component] = (rank, species)
    return {component: species for component, (_, species) in best.items()}


def half_reaction(
    oxidised: Species,
    reduced: Species,
    ratio: tuple[int, int],
    changing: Set[str],
    standing: Mapping[str, Species],
    alkaline: bool,
) -> Reaction:
    """Balance a reduction from one species to another.

    Parameters
    ----------
    oxidised, reduced : Species
    ratio : (int, int)
        How many of each keep the element that changes its state.
    changing : set of str
        The components that turn into each other.
    standing : mapping of str to Species
        The species that stands for each other component (`carriers`).
    alkaline : bool
        Write OH- instead of H+.

    Returns
    -------
    Reaction
        With electrons on the left.
    """
    counts: dict[Species, int] = {oxidised: -ratio[0]}
    counts[reduced] = counts.get(reduced, 0) + ratio[1]
    for component in {**oxidised.components, **reduced.components}:
        if component in changing:
            continue
        surplus = ratio[0] * oxidised.components.get(component, 0) - ratio[1] * reduced.components.get(component, 0)
        if surplus:
            carrier = standing.get(component)
            if carrier is None:
                raise ReactionError(f"No dissolved species stands for {component} alone.")
            share, left = divmod(surplus, carrier.components[component])
            if left:
                raise ReactionError(f"{component} cannot be shared out between {oxidised.key} and {reduced.key}.")
            counts[carrier] = counts.get(carrier, 0) + share
    return _closed(counts, alkaline)


def _closed(counts: dict[Species, int], alkaline: bool) -> Reaction:
    """Add water, hydrogen or hydroxide ions and electrons until atoms and charge agree."""
    table = catalogue()
    water, proton, hydroxide = table.get("H2O(l)"), table.get("H+"), table.get("OH-")
    oxygen = -_total(counts, "O")
    counts[water] = counts.get(water, 0) + oxygen
    hydrogen = -_total(counts, "H")
    if alkaline:
        counts[hydroxide] = counts.get(hydroxide, 0) - hydrogen
        counts[water] += hydrogen
    else:
        counts[proton] = counts.get(proton, 0) + hydrogen
    electrons = sum(n * s.formula.charge for s, n in counts.items())
    kept = {species: number for species, number in counts.items() if number}
    divisor = int(np.gcd.reduce([*kept.values(), electrons]))
    return Reaction(tuple(kept), tuple(n // divisor for n in kept.values()), -electrons // divisor)


def _total(counts: Mapping[Species, int], symbol: str) -> int:
    return sum(number * dict(species.formula.atoms).get(symbol, 0) for species, number in counts.items())
