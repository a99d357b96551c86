"""Standard atomic weights against the `periodictable` package (IUPAC 2021) and figures of that report."""

from __future__ import annotations

import periodictable
import pytest

from redoxq.matter.elements import Element, elements, nearest_symbol

WEIGHED = [element for element in elements().values() if element.uncertainty > 0]

# T. Prohaska et al., Pure Appl. Chem. 94 (2022) 573, table 1; from memory.
STANDARD_WEIGHTS = [("H", 1.008), ("O", 15.999), ("Cu", 63.546), ("Zn", 65.38), ("Ag", 107.8682), ("Ir", 192.217),
                    ("Hf", 178.486), ("Yb", 173.045), ("Se", 78.971), ("Ar", 39.95), ("Pb", 207.2)]  # fmt: skip


def test_every_element_stands_once() -> None:
    assert sorted(element.number for element in elements().values()) == list(range(1, 119))
    assert len(WEIGHED) == 84


@pytest.mark.parametrize("element", elements().values(), ids=lambda element: element.symbol)
def test_symbols_and_names_go_with_the_numbers(element: Element) -> None:
    other = periodictable.elements[element.number]
    assert other.symbol == element.symbol
    assert element.name == {"aluminum": "aluminium", "cesium": "caesium"}.get(other.name, other.name)


@pytest.mark.parametrize("element", WEIGHED, ids=lambda element: element.symbol)
def test_atomic_weights(element: Element) -> None:
    assert element.weight == pytest.approx(periodictable.elements[element.number].mass, abs=element.uncertainty + 1e-6)


@pytest.mark.parametrize(("symbol", "weight"), STANDARD_WEIGHTS)
def test_standard_weights(symbol: str, weight: float) -> None:
    assert elements()[symbol].weight == weight


@pytest.mark.parametrize(("symbol", "near"), [("CU", "Cu"), ("So", "S"), ("Xx", None)])
def test_hint_for_a_symbol_that_is_none(symbol: str, near: str | None) -> None:
    hint = nearest_symbol(symbol)
    assert hint is None if near is None else near in (hint or "")
