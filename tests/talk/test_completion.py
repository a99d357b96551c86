"""Completion offers only what the parser would accept next."""

from __future__ import annotations

import pytest

from redoxq.talk.completion import suggestions


def offered(typed: str, *defined: str) -> list[str]:
    return [typed[:item.start] + item.text for item in suggestions(typed, defined)]


@pytest.mark.parametrize(("typed", "whole"), [
    ("zin", "zinc"),
    ("ab", "about"),
    ("zinc i", "zinc in"),
    ("zinc in 0.5 M copper sul", "zinc in 0.5 M copper sulfate"),
    ("zinc in 0.5 m", "zinc in 0.5 mol/kg"),
    ("zinc in 0.5 M CuSO4 u", "zinc in 0.5 M CuSO4 under"),
    ("zinc in 0.5 M CuSO4 under nit", "zinc in 0.5 M CuSO4 under nitrogen"),
    ("zinc in water at 45 ", "zinc in water at 45 C"),
    ("zinc in water, p", "zinc in water, pH"),
    ("about copper sul", "about copper sulfate"),
])
def test_offers(typed: str, whole: str) -> None:
    assert whole in offered(typed)


def test_offers_defined_liquors() -> None:
    assert "zinc in rinse" in offered("zinc in ri", "rinse")


@pytest.mark.parametrize("typed", [
    "zinc at ", "zinc in 0.5 M CuSO4 under stea", "Zn | ", "\0", "zinc in 1,000 M CuSO4 u",
])
def test_offers_nothing_after_an_error(typed: str) -> None:
    assert offered(typed) == []


def test_metals_stand_first_and_salts_later() -> None:
    assert "copper sulfate" not in offered("copper s")
    assert "zinc in zinc" not in offered("zinc in zin")
