"""The rules that come with redoxq, and site rules added to them."""

from __future__ import annotations

import re
from functools import cache
from importlib.resources import files
from pathlib import Path

from redoxq.errors import RuleError
from redoxq.rules.language import Block, Rule, read_blocks, split_rules


@cache
def practice(metal: str | None = None, site: tuple[Path, ...] = ()) -> tuple[Rule, ...]:
    """Rules that can bear on a metal.

    Parameters
    ----------
    metal : str, optional
        Symbol; rules that open with `when metal is` another are not even read. All rules when left out.
    site : tuple of Path
        Files of site rules; these are read whole, so that a mistake shows at once.

    Returns
    -------
    tuple of Rule

    Raises
    ------
    RuleError
        For a rule that cannot be read, or an id that stands twice.
    """
    own = (block for block in _own_blocks() if metal is None or metal in _metals(block, metal))
    return read_blocks((*own, *(block for path in site for block in _site_blocks(path))))


@cache
def _own_blocks() -> tuple[Block, ...]:
    folder = files("redoxq.data").joinpath("rules")
    names = sorted(item.name for item in folder.iterdir() if item.name.endswith(".rules"))
    return tuple(block for name in names
                 for block in split_rules(folder.joinpath(name).read_text(encoding="utf-8"), f"rules/{name}"))


def _site_blocks(path: Path) -> tuple[Block, ...]:
    try:
        return split_rules(path.read_text(encoding="utf-8-sig"), str(path))
    except (OSError, UnicodeDecodeError) as error:
        raise RuleError(f"cannot read the rules of {path}: {error}") from error


_OPENING = re.compile(r"when\s+metal\s+is\s+(?:one\s+of\s+\(([^()]*)\)|(\w+))\s+(and\b.*?|)then\b", re.DOTALL)


def _metals(block: Block, asked: str) -> set[str]:
    """Metals that a rule is for; the one asked about where the opening words do not tell."""
    opening = _OPENING.search(re.sub(r"#[^\n]*", "", block.text))
    if opening is None or re.search(r"\bor\b", _without_brackets(opening[3])):
        return {asked}
    return set(re.findall(r"\w+", opening[1] or opening[2]))


def _without_brackets(text: str) -> str:
    shorter = re.sub(r"\([^()]*\)", "", text)
    return text if shorter == text else _without_brackets(shorter)
