"""Parsers of `grammar/`, with their tables kept beside the grammars so that a question does not wait for them.

`python -m redoxq.parsers` writes the tables anew after a grammar has changed. Tables of another grammar or of another
release of lark are passed over and the parser is built from the grammar itself.
"""

from __future__ import annotations

import hashlib
import json
from collections.abc import Callable
from importlib.resources import files
from importlib.resources.abc import Traversable
from pathlib import Path
from typing import Any

import lark

GRAMMARS: dict[str, dict[str, Any]] = {
    "formula": {"start": "start"},
    "rule": {"start": "rule"},
    "sentence": {"start": "start"},
}
"""Options of each grammar beside those that all share."""

_SHARED: dict[str, Any] = {"parser": "lalr", "lexer": "contextual", "maybe_placeholders": False}


def parser(name: str, transformer: Any = None) -> lark.Lark:
    """Return the parser of `grammar/NAME.lark`.

    Parameters
    ----------
    name : str
        One of `GRAMMARS`.
    transformer : object, optional
        Turns the tree into values while it is built.
    """
    text = _grammar(name).read_text(encoding="utf-8")
    kept = _kept(name, text)
    if kept is None:
        return lark.Lark(text, transformer=transformer, **_SHARED, **GRAMMARS[name])
    # Not part of lark's documented surface: it is what lark's own stand-alone parsers start from.
    rebuild: Callable[..., lark.Lark] = getattr(lark.Lark, "_load_from_dict")  # noqa: B009
    return rebuild(kept["data"], kept["memo"], transformer=transformer)


def _grammar(name: str) -> Traversable:
    return files("redoxq.grammar") / f"{name}.lark"


def _tables(name: str) -> Traversable:
    return files("redoxq.grammar") / f"{name}.tables.json"


def _kept(name: str, text: str) -> dict[str, Any] | None:
    """The tables of a grammar, or None where they were made of something else."""
    try:
        kept = json.loads(_tables(name).read_text(encoding="utf-8"), object_pairs_hook=_whole_keys)
    except (OSError, ValueError):
        return None
    return kept if isinstance(kept, dict) and kept.get("made_of") == _made_of(name, text) else None


def _whole_keys(pairs: list[tuple[str, Any]]) -> dict[str | int, Any]:
    """JSON writes whole numbers as text where they are keys."""
    return {int(key) if key.isdigit() else key: value for key, value in pairs}


def _made_of(name: str, text: str) -> str:
    options = json.dumps({**_SHARED, **GRAMMARS[name]}, sort_keys=True)
    return hashlib.sha256("\n".join((lark.__version__, options, text)).encode()).hexdigest()


def tables_of(name: str) -> str:
    """The tables of a grammar as text, made from the grammar itself."""
    from lark.grammar import Rule
    from lark.lexer import TerminalDef

    text = _grammar(name).read_text(encoding="utf-8")
    data, memo = lark.Lark(text, **_SHARED, **GRAMMARS[name]).memo_serialize([TerminalDef, Rule])
    return json.dumps({"made_of": _made_of(name, text), "data": data, "memo": memo}, separators=(",", ":")) + "\n"


def main() -> None:
    """Write the tables of all grammars."""
    for name in GRAMMARS:
        Path(str(_tables(name))).write_text(tables_of(name), encoding="utf-8")


if __name__ == "__main__":
    main()
