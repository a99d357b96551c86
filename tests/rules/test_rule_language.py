"""The rule language: what it reads, and what it says of mistakes."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from redoxq.errors import RuleError
from redoxq.rules.facts import Facts
from redoxq.rules.language import LONGEST, Rule, parse_rules

RULE = """\
# pickling line
rule zinc-hydrogen
  when metal is Zn and (oxidant is hydrogen or not air)
  then oxidant idle, caution heat "Mind the   # heat."
  because "It is slow."
  source common practice
"""
CONDITION = "(oxidant is hydrogen or not air)"


def read(text: str) -> Rule:
    (rule,) = parse_rules(text, "site.rules")
    return rule


def where(condition: str, **columns: object) -> list[bool]:
    rule = read(RULE.replace("metal is Zn and " + CONDITION, condition))
    return rule.condition.holds(Facts(columns)).tolist()


def test_parts_of_a_rule() -> None:
    rule = read(RULE)
    assert (rule.id, rule.file, rule.line) == ("zinc-hydrogen", "site.rules", 2)
    assert (rule.because, rule.source) == ("It is slow.", "common practice")
    assert [(effect.kind, effect.subject, effect.text) for effect in rule.effects] == [
        ("oxidant", "idle", ""), ("caution", "heat", "Mind the # heat.")]


def test_hazard_has_gas_topic_and_text() -> None:
    (effect,) = read(RULE.replace('oxidant idle, caution heat', 'hazard H2 fire')).effects
    assert (effect.kind, effect.subject, effect.topic) == ("hazard", "H2", "fire")


@pytest.mark.parametrize(("condition", "expected"), [
    ("pH above 4", [False, False, True]), ("pH > 4", [False, False, True]),
    ("pH at least 4", [False, True, True]), ("pH >= 4", [False, True, True]),
    ("pH below 4", [True, False, False]), ("pH < 4", [True, False, False]),
    ("pH at most 4", [True, True, False]), ("pH <= 4", [True, True, False]),
    ("pH between 0 and 4", [True, True, False]), ("not pH between 0 and 4", [False, False, True]),
    ("not (pH above 0 and pH below 9)", [True, False, True]),
    ("pH below 1 or pH above 8 and pH below 9.5", [True, False, True]),
])
def test_comparisons(condition: str, expected: list[bool]) -> None:
    assert where(condition, pH=[0.0, 4.0, 9.0]) == expected


@pytest.mark.parametrize(("condition", "expected"), [
    ("metal is Zn", [True, False, False]), ("metal is not Zn", [False, True, True]),
    ("metal is one of (Zn, Cd)", [True, True, False]), ("metal is not one of (Zn, Cd)", [False, False, True]),
    ("not metal is Zn", [False, True, True]),
])
def test_words(condition: str, expected: list[bool]) -> None:
    assert where(condition, metal=["Zn", "Cd", "Fe"]) == expected


def test_names_of_solids_with_a_form_stand_in_quotes() -> None:
    assert where('film is one of (PbSO4(s), "HgS(s, red)")', film=["PbSO4(s)", "HgS(s, red)", ""]) == [
        True, True, False]


def test_temperatures_convert() -> None:
    assert where("temperature above 60 C", temperature=[333.0, 333.2]) == [False, True]
    assert where("temperature above 333.15 K", temperature=[333.0, 333.2]) == [False, True]


def test_everyday_words_are_totals_and_absent_ones_nothing() -> None:
    mercury = {"total of Hg(I)": [0.1, 0.0], "total of Hg(II)": [0.1, 0.0]}
    chloride = Facts({"total of Cl(-I)": [0.0, 0.5], **mercury})
    for condition, expected in [("chloride above 0.1 mol/kg", [False, True]),
                                ("total of Cl(-I) above 100 mmol/kg", [False, True]),
                                ("mercury above 0.15 mol/kg", [True, False]),
                                ("cyanide below 1 mol/kg", [True, True]),
                                ("activity of F- above 0", [False, False])]:
        rule = read(RULE.replace("metal is Zn and " + CONDITION, condition))
        assert rule.condition.holds(chloride).tolist() == expected


@pytest.mark.parametrize(("right", "wrong", "says", "caret"), [
    ("oxidant is", "oxidnt is", "Nearest: oxidant", "oxidnt"),
    ("is hydrogen", "is hydrgen", "Nearest: hydrogen", "hydrgen"),
    ("Zn", "Zz", 'no metal is called "Zz"', "Zz"),
    ("oxidant idle", "oxidant idel", "no effect", "oxidant idel"),
    ("oxidant idle", 'oxidant idle "x"', "takes no text", "oxidant idle"),
    ("oxidant idle", "hazard H2 fire", "needs a text", "hazard H2 fire"),
    ("common practice", "NOBODY", "no publication NOBODY", "NOBODY"),
    ("not air", "pH > 9 C", "pH takes no unit", "9 C"),
    ("not air", "temperature > 60", "takes K or C", "60"),
    ("not air", "chloride > 1", "takes mol/kg", "1"),
    ("not air", "chloride below 0 mol/kg", "never below 0", "0 mol/kg"),
    ("not air", "pH between 9 and 3", "wrong way round", "9 and 3"),
    ("not air", "pH", "comes above, below", "pH"),
    ("not air", "metal", "comes is", "metal"),
    ("not air", "pH is hydrogen", "comes above", "pH"),
    (CONDITION, "pH > 9 and pH < 3", "never hold", "when"),
    (CONDITION, "air and not air", "never hold", "when"),
    (CONDITION, "metal is not Zn", "never hold", "when"),
    (CONDITION, "metal is one of (Fe, Cd)", "never hold", "when"),
    (CONDITION, "attacked", "cannot decide", "when"),
    ("(oxidant", "((oxidant", "expected", "then"),
    ("because", "since", "expected", '"Mind the   # heat."'),
])
def test_mistakes_are_pointed_at(right: str, wrong: str, says: str, caret: str) -> None:
    text = RULE.replace(right, wrong, 1)
    with pytest.raises(RuleError) as caught:
        parse_rules(text, "site.rules")
    place, line, carets, *_ = caught.value.message.split("\n")
    assert says in caught.value.message
    number = int(place.removeprefix("site.rules, line ").rstrip(":"))
    assert line[4:] == text.split("\n")[number - 1]
    if says != "expected":
        assert line[carets.index("^"):].startswith(caret)


@pytest.mark.parametrize("missing", [
    "  source common practice\n", '  because "It is slow."\n', "then oxidant idle, ",
])
def test_missing_parts_are_missed(missing: str) -> None:
    with pytest.raises(RuleError, match="expected"):
        parse_rules(RULE.replace(missing, ""), "site.rules")


def test_an_id_stands_once() -> None:
    with pytest.raises(RuleError, match=r"there already: site\.rules, line 2"):
        parse_rules(RULE + RULE, "site.rules")


def test_text_before_the_first_rule() -> None:
    with pytest.raises(RuleError, match="a rule starts with the word rule"):
        parse_rules("zinc\n" + RULE, "site.rules")
    assert parse_rules("# nothing yet\n", "site.rules") == ()


@pytest.mark.parametrize("condition", [
    "(air and " * 2000 + "air" + ")" * 2000,
    " and ".join(f"(pH above {i} or temperature above {i} K)" for i in range(40)),
])
def test_monstrous_conditions_are_refused(condition: str) -> None:
    with pytest.raises(RuleError, match="split"):
        parse_rules(RULE.replace(CONDITION, condition), "site.rules")
    assert len(RULE) < LONGEST


def refusal(text: str) -> str | None:
    try:
        parse_rules(text, "site.rules")
    except RuleError as error:
        return error.message
    return None


@given(st.text(alphabet=st.sampled_from('ruleZn ()",.#\n019<>=\0°é'), max_size=60), st.integers(0, len(RULE)))
def test_any_text_is_read_or_refused(scrap: str, at: int) -> None:
    message = refusal(RULE[:at] + scrap + RULE[at:])
    assert message is None or message.startswith("site.rules, line ")


ATOMS = st.sampled_from([
    "pH above 4", "pH below 9", "pH between 3 and 6", "air", "metal is Zn", "metal is not one of (Zn, Fe)",
    "temperature above 50 C", "chloride at least 1 mol/kg",
])


def larger(inner: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    joined = st.tuples(inner, st.sampled_from(["and", "or"]), inner).map(lambda parts: f"({' '.join(parts)})")
    return inner.map(lambda part: f"not ({part})") | joined


CONDITIONS = st.recursive(ATOMS, larger, max_leaves=6)


@given(CONDITIONS)
def test_a_condition_and_its_negation_part_all_rows(condition: str) -> None:
    grid = np.meshgrid([2.0, 3.0, 4.0, 5.0, 9.0, 12.0], [0.0, 1.0], [298.15, 350.0], [0.0, 1.0], [0, 1, 2])
    pH, air, temperature, chloride, metal = (axis.ravel() for axis in grid)
    facts = Facts({"pH": pH, "air": air > 0, "temperature": temperature, "total of Cl(-I)": chloride,
                   "metal": np.array(["Zn", "Fe", "Cd"])[metal.astype(int)]})
    whole = "metal is Zn and " + CONDITION
    plain, negated = RULE.replace(whole, condition), RULE.replace(whole, f"not ({condition})")
    refused = refusal(plain)
    if refused is None:
        holds = read(plain).condition.holds(facts)
        assert (holds ^ read(plain).condition.negated().holds(facts)).all()
    else:
        assert "never hold" in refused
        assert read(negated).condition.holds(facts).all()
