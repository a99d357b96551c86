"""Each rule of practice fires, and settles its case as corrosion tables do at that strength.

The verdicts of `cases.csv` and `contacts.csv` are common practice, as in H. H. Uhlig (ed.), The Corrosion
Handbook (1948), and the ASM Handbook, vol. 13 (1987); written down from memory.
"""

from __future__ import annotations

import pytest
from practice_cases import Case, facts_of, read_cases

from redoxq.matter.tables import read_table
from redoxq.rules.engine import judge
from redoxq.rules.language import Rule
from redoxq.rules.practice import practice
from redoxq.rules.reader import COMMON_PRACTICE

CASES = read_cases("cases.csv")


@pytest.fixture(scope="module")
def rules() -> tuple[Rule, ...]:
    return practice()


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["rule"])
def test_rule_fires_and_settles_its_case(case: Case, rules: tuple[Rule, ...]) -> None:
    judgement = judge(rules, facts_of(case))
    assert case["rule"] in {rule.id for rule in judgement.rules_of_row(0)}
    assert judgement.verdict_of() == case["verdict"]


@pytest.mark.parametrize("case", read_cases("contacts.csv"), ids=lambda case: f"{case['metal']} {case['pH']}")
def test_metal_in_liquor(case: Case, rules: tuple[Rule, ...]) -> None:
    assert judge(rules, facts_of(case)).verdict_of() == case["verdict"]


def test_every_rule_has_a_case(rules: tuple[Rule, ...]) -> None:
    assert {rule.id for rule in rules} == {case["rule"] for case in CASES}


def test_every_rule_names_a_source(rules: tuple[Rule, ...]) -> None:
    publications = {row["code"] for row in read_table("sources.csv")}
    assert {rule.source for rule in rules} <= publications | {COMMON_PRACTICE}


def test_rules_say_why_in_a_sentence(rules: tuple[Rule, ...]) -> None:
    said = [rule.because for rule in rules]
    said += [effect.text for rule in rules for effect in rule.effects if effect.kind in ("caution", "hazard")]
    assert [text for text in said if not text.endswith(".")] == []


@pytest.mark.parametrize("metal", ["Zn", "Al", "Au", "Hg", "La", "Na", "Ti"])
def test_rules_left_unread_could_not_have_fired(metal: str, rules: tuple[Rule, ...]) -> None:
    few = practice(metal)
    assert len(few) < len(rules)
    for case in CASES:
        facts = facts_of({**case, "metal": metal})
        every = judge(rules, facts).rules_of(driven_only=False)
        assert judge(few, facts).rules_of(driven_only=False) == every
