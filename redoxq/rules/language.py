"""Rules of practice read from text, with the place of every mistake."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache
from itertools import pairwise
from typing import Any, Final

from lark import Lark, UnexpectedInput

from redoxq.errors import RuleError
from redoxq.parsers import parser
from redoxq.rules.conditions import MOST_ALTERNATIVES, facts_named
from redoxq.rules.reader import Mistake, Reader
from redoxq.rules.rule import Effect, Rule

__all__ = ["Block", "Effect", "Rule", "parse_rules", "read_block", "read_blocks", "split_rules"]

LONGEST: Final = 4000
"""Characters of one rule."""

TOKEN_WORDS: Final = {
    "WORD": "a word", "NUMBER": "a number", "STRING": "a text in quotes", "$END": "the end of the rule",
    "LPAR": "(", "RPAR": ")", "COMMA": ",",
    "COMPARE": "above, below, at least, at most",
}


@dataclass(frozen=True, slots=True)
class Block:
    """The text of one rule, not yet read."""

    text: str
    file: str
    line: int


def parse_rules(text: str, file: str) -> tuple[Rule, ...]:
    """Read the rules of a text.

    Parameters
    ----------
    text : str
    file : str
        Its name, for messages.

    Returns
    -------
    tuple of Rule

    Raises
    ------
    RuleError
        With file, line and a caret under the place: a word out of place, an unknown fact, value, unit,
        effect or source, an id given twice, a condition that can never hold.
    """
    return read_blocks(split_rules(text, file))


def split_rules(text: str, file: str) -> tuple[Block, ...]:
    """Cut a text where a line starts with `rule`, without reading the rules."""
    head, *starts = [match.start() for match in re.finditer(r"^rule\b|\Z", text, re.MULTILINE)]
    if re.sub(r"#[^\n]*", "", text[:head]).strip():
        raise RuleError(f"{file}, line 1: a rule starts with the word rule at the start of a line")
    edges = [head, *starts]
    return tuple(Block(text[start:end], file, text.count("\n", 0, start) + 1)
                 for start, end in pairwise(edges) if text[start:end])


def read_blocks(blocks: Iterable[Block]) -> tuple[Rule, ...]:
    """Read rules that have been cut apart; an id may stand once."""
    rules: dict[str, Rule] = {}
    for block in blocks:
        rule = read_block(block)
        if rule.id in rules:
            first = rules[rule.id]
            raise _placed(f"the rule {rule.id} is there already: {first.file}, line {first.line}", block, 5,
                          5 + len(rule.id))
        rules[rule.id] = rule
    return tuple(rules.values())


@cache
def read_block(block: Block) -> Rule:
    """Read one rule."""
    if len(block.text) > LONGEST:
        raise _placed(f"a rule may have {LONGEST} characters: split it", block, 0, 4)
    try:
        parts: Any = _parser().parse(block.text)
    except UnexpectedInput as error:
        raise _unexpected(error, block) from None
    except Mistake as mistake:
        raise _placed(mistake.message, block, mistake.start, mistake.end) from None
    identity, condition, effects, because, source = parts
    rule = Rule(identity, condition, effects, because, source, block.file, block.line)
    _check(rule, block)
    return rule


def _check(rule: Rule, block: Block) -> None:
    place = (block.text.index("when"), block.text.index("when") + 4)
    alternatives = rule.condition.alternatives()
    if not alternatives:
        raise _placed("this condition can never hold", block, *place)
    if len(alternatives) > MOST_ALTERNATIVES:
        raise _placed("this condition has too many alternatives: split the rule", block, *place)
    if "attacked" in facts_named(rule.condition) and any(effect.settles for effect in rule.effects):
        raise _placed("a rule that asks whether the metal is attacked cannot decide it", block, *place)


def _placed(message: str, block: Block, start: int, end: int) -> RuleError:
    before = block.text.rfind("\n", 0, start) + 1
    line = block.text[before:].split("\n", 1)[0]
    number = block.line + block.text.count("\n", 0, start)
    caret = " " * (start - before) + "^" * max(1, min(end, before + len(line)) - start)
    return RuleError(f"{block.file}, line {number}:\n    {line}\n    {caret}\n{message}")


def _unexpected(error: UnexpectedInput, block: Block) -> RuleError:
    found = (getattr(error, name, None) for name in ("accepts", "allowed", "expected"))
    accepted: set[str] = next(filter(None, found), set())
    names = sorted(TOKEN_WORDS.get(name, name.lower().strip("_")) for name in accepted)
    start = error.pos_in_stream
    if start is None or start < 0 or getattr(getattr(error, "token", None), "type", "") == "$END":
        start = len(block.text.rstrip())
    end = start + len(str(getattr(error, "token", " ")) or " ")
    return _placed("expected " + " or ".join(names), block, start, end)


@cache
def _parser() -> Lark:
    return parser("rule", Reader())
