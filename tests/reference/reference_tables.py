"""Published reactions of `tests/reference/*/*.csv`, built from the catalogue and balanced."""

import csv
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import numpy as np

from redoxq.matter.catalogue import catalogue
from redoxq.matter.formula import parse_formula
from redoxq.thermo.balancing import is_balanced
from redoxq.thermo.derivation import ELECTRON, parse_derivation
from redoxq.thermo.reactions import Reaction, StandardQuantities, standard_quantities

HERE = Path(__file__).parent


@dataclass(frozen=True)
class Published:
    """One published figure: a reaction of catalogue keys, its value and how far the tables may differ."""

    reaction: str
    value: float
    tolerance: float
    source: str
    file: str

    def __str__(self) -> str:
        return f"{self.file}: {self.reaction}"


@cache
def published(folder: str) -> tuple[Published, ...]:
    """All figures of a folder of tables."""
    found = []
    for path in sorted((HERE / folder).glob("*.csv")):
        with path.open(encoding="utf-8", newline="") as file:
            for row in csv.DictReader(file):
                found.append(
                    Published(
                        row["reaction"], float(row["value"]), float(row["tolerance"]), row["source"], path.stem
                    )
                )
    return tuple(found)


def reaction_of(text: str) -> Reaction:
    """The reaction of a row; it must balance.

    Raises
    ------
    AssertionError
        When atoms or charges differ between the sides.
    """
    terms = parse_derivation(f"{text}; delta_G = 0").terms
    sides: tuple[list, list] = ([], [])
    for key, count in terms.items():
        formula = parse_formula("e-" if key == ELECTRON else catalogue().get(key).text)
        sides[count > 0].append((abs(count), formula))
    assert is_balanced(*sides), f"{text} does not balance"
    species = {catalogue().get(key): count for key, count in terms.items() if key != ELECTRON}
    return Reaction(tuple(species), tuple(species.values()), -terms.get(ELECTRON, 0))


def quantities(text: str, celsius: float = 25.0) -> tuple[Reaction, StandardQuantities]:
    """A reaction and its standard quantities at one temperature."""
    reaction = reaction_of(text)
    return reaction, standard_quantities(reaction, np.array([celsius + 273.15]))
