"""The engine: how rules settle into verdicts, and what no set of rules can do."""

from __future__ import annotations

import math
from random import Random

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from redoxq.errors import RuleError
from redoxq.rules.engine import VERDICTS, Judgement, judge
from redoxq.rules.facts import Facts, Words
from redoxq.rules.language import Rule, parse_rules
from redoxq.rules.rule import SETTLING


def rules_of(*parts: tuple[str, str]) -> tuple[Rule, ...]:
    return parse_rules("".join(
        f'rule r{number}\n  when {condition}\n  then {effects}\n  because "So."\n  source common practice\n'
        for number, (condition, effects) in enumerate(parts)), "test.rules")


def facts(driving: object, doubt: object = 0.0, **columns: object) -> Facts:
    given = {"driving": driving, "driving_uncertainty": doubt, "oxidant": "hydrogen", "air": False}
    return Facts({**given, **columns})


def verdict(driving: object, *parts: tuple[str, str], doubt: object = 0.0, **columns: object) -> str:
    return judge(rules_of(*parts), facts(driving, doubt, **columns)).verdict_of()


IDLE, ACTS = ("oxidant is hydrogen", "oxidant idle"), ("oxidant is hydrogen", "oxidant acts")
HOLDS, BREAKS = ("not air", "film holds"), ("not air", "film breaks")


@pytest.mark.parametrize(("driving", "parts", "expected"), [
    ([-0.1, -0.2], [], "immune"), ([-0.1, 0.2], [], "attacked"), (0.0, [], "immune"),
    (0.3, [IDLE], "passive"), (0.3, [IDLE, ACTS], "attacked"), (0.3, [ACTS], "attacked"),
    (0.3, [HOLDS], "passive"), (0.3, [HOLDS, BREAKS], "attacked"), (0.3, [HOLDS, IDLE, BREAKS], "passive"),
    (0.3, [HOLDS, IDLE, ACTS], "passive"), (0.3, [HOLDS, IDLE, ACTS, BREAKS], "attacked"),
    (-0.3, [ACTS, BREAKS], "immune"),
])
def test_settlement(driving: object, parts: list[tuple[str, str]], expected: str) -> None:
    assert verdict(driving, *parts) == expected


def test_doubt() -> None:
    assert verdict(0.01, doubt=0.02) == "undecided"
    assert verdict(-0.01, doubt=0.02) == "undecided"
    assert verdict([-0.01, 0.5], doubt=[0.02, 0.02]) == "attacked"
    assert verdict(math.nan) == "undecided"
    assert verdict(0.01, IDLE, doubt=0.02) == "passive"


def test_contacts_are_judged_apart() -> None:
    oxidants = ["hydrogen", "oxygen", "hydrogen"]
    judgement = judge(rules_of(IDLE), facts([0.5, 0.5, -0.1], oxidant=oxidants), [0, 1, 2])
    assert [judgement.verdict_of(contact) for contact in range(3)] == ["passive", "attacked", "immune"]
    assert [rule.id for rule in judgement.rules_of(0)] == ["r0"]
    assert judgement.rules_of(1) == judgement.rules_of(2) == ()
    assert [rule.id for rule in judgement.rules_of(2, driven_only=False)] == ["r0"]


def test_what_follows_from_the_attack_is_judged_after_it() -> None:
    rules = rules_of(("attacked", 'hazard H2 fire "Hydrogen."'), IDLE)
    held, going = judge(rules, facts(0.5)), judge(rules, facts(0.5, oxidant="oxygen"))
    assert list(held.effects_of("hazard")) == []
    assert [effect.subject for _, effect in going.effects_of("hazard")] == ["H2"]


@pytest.mark.parametrize(("parts", "expected"), [
    ([], None), ([("oxidant is hydrogen", "pace slow")], None),
    ([("oxidant is hydrogen", "pace slow"), ("oxidant is oxygen", "pace supply-limited")], "supply-limited"),
    ([("not air", "pace slow")], "slow"),
    ([("not air", "pace slow"), ("oxidant is oxygen", "pace fast")], "fast"),
    ([("not air", "pace slow"), ("oxidant is oxygen", "oxidant idle")], "slow"),
])
def test_pace_is_that_of_the_fastest_attack(parts: list[tuple[str, str]], expected: str | None) -> None:
    assert judge(rules_of(*parts), facts([0.5, 0.5], oxidant=["hydrogen", "oxygen"])).pace_of() == expected


def test_facts_are_checked() -> None:
    with pytest.raises(RuleError, match="no fact called colour"):
        Facts({"colour": "red"})
    with pytest.raises(RuleError, match="differ in length"):
        Facts({"pH": [1.0, 2.0], "air": [True, False, True]})
    with pytest.raises(RuleError, match="no value for metal"):
        judge(rules_of(("metal is Zn", "film holds")), facts(0.5))


def test_words_may_come_coded() -> None:
    coded = Facts({"metal": Words(np.array([0, 1, 0]), ("Zn", "Fe")), "driving": 0.5})
    assert judge(rules_of(("metal is Zn", "film holds")), coded, [0, 1, 2]).verdict.tolist() == [1, 3, 1]


CONDITIONS = st.sampled_from(["air", "not air", "oxidant is hydrogen", "oxidant is oxygen", "pH above 7",
                              "pH below 3 or air", "metal is Zn"])
PARTS = st.lists(st.tuples(CONDITIONS, st.sampled_from(SETTLING)), max_size=8)
ROWS = st.lists(st.tuples(st.floats(-1, 1), st.floats(0, 0.1), st.sampled_from(["hydrogen", "oxygen"]),
                          st.floats(0, 14), st.booleans(), st.sampled_from(["Zn", "Fe"]), st.integers(0, 2)),
                min_size=1, max_size=9)
Row = tuple[float, float, str, float, bool, str, int]


def judged(rules: tuple[Rule, ...], rows: list[Row]) -> Judgement:
    driving, doubt, oxidant, pH, air, metal, contact = (list(column) for column in zip(*rows, strict=True))
    return judge(rules, Facts({"driving": driving, "driving_uncertainty": doubt, "oxidant": oxidant, "pH": pH,
                               "air": air, "metal": metal}), contact)


@given(PARTS, ROWS, st.randoms(use_true_random=False))
def test_order_is_nothing(parts: list[tuple[str, str]], rows: list[Row], random: Random) -> None:
    rules, shuffled, mixed = list(rules_of(*parts)), list(rules_of(*parts)), list(rows)
    random.shuffle(shuffled)
    random.shuffle(mixed)
    first, second = judged(tuple(rules), rows), judged(tuple(shuffled), mixed)
    assert first.verdict.tolist() == second.verdict.tolist()
    assert [first.rules_of(contact) for contact in range(len(first.verdict))] == [
        second.rules_of(contact) for contact in range(len(second.verdict))]


@given(PARTS, ROWS)
def test_no_rule_makes_a_driven_metal_immune_or_an_immune_one_attacked(parts: list[tuple[str, str]],
                                                                       rows: list[Row]) -> None:
    bare, ruled = judged((), rows), judged(rules_of(*parts), rows)
    immune = VERDICTS.index("immune")
    assert ((bare.verdict == immune) == (ruled.verdict == immune)).all()
    assert (ruled.verdict <= bare.verdict).all()


@given(PARTS, ROWS)
def test_one_contact_is_the_batch_of_one(parts: list[tuple[str, str]], rows: list[Row]) -> None:
    rules = rules_of(*parts)
    whole = judged(rules, rows)
    for contact in {row[-1] for row in rows}:
        alone = judged(rules, [(*row[:-1], 0) for row in rows if row[-1] == contact])
        assert alone.verdict_of() == whole.verdict_of(contact)
