"""Cases of practice as facts: `cases.csv` holds one for each rule, `contacts.csv` metals in whole liquors."""

from __future__ import annotations

import csv
from pathlib import Path

from redoxq.rules.facts import TOTAL, Facts, everyday_words

DRIVING = 0.6
"""V, well above any doubt: the cases are about practice, not about potentials."""

Case = dict[str, str]


def read_cases(name: str) -> list[Case]:
    with Path(__file__).with_name(name).open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def facts_of(case: Case) -> Facts:
    oxidants = (case.get("oxidant") or case["oxidants"]).split("; ")
    besides = case["besides"]
    return Facts({
        "metal": case["metal"], "oxidant": oxidants, "oxidant_kind": [_kind(oxidant) for oxidant in oxidants],
        "plated": [oxidant.removesuffix(" ion") if oxidant.endswith(" ion") else "" for oxidant in oxidants],
        "driving": DRIVING, "metal_potential": -0.3, "oxidant_potential": -0.3 + DRIVING,
        "pH": float(case["pH"]), "temperature": float(case["celsius"]) + 273.15,
        "water_activity": 1.0, "ionic_strength": 0.1, "product": f"{case['metal']}+2", "solid_product": False,
        "film": besides.removeprefix("film ") if besides.startswith("film ") else "",
        "air": besides == "air", "powder": besides == "powder", **_totals(case["liquor"]),
    })


def _kind(oxidant: str) -> str:
    if oxidant.endswith(" ion"):
        return "metal ion"
    return oxidant if oxidant in ("hydrogen", "oxygen") else "dissolved oxidant"


def _totals(liquor: str) -> dict[str, float]:
    totals = {}
    for part in filter(None, liquor.split("; ")):
        words, strength = part.rsplit(" ", 1)
        name = words if words.startswith(TOTAL) else everyday_words()[words]
        totals[TOTAL + name.removeprefix(TOTAL).split()[-1]] = float(strength)
    return totals
