"""The parser tables kept beside the grammars are those of the grammars."""

from importlib.resources import files

import lark
import pytest

from redoxq import parsers


@pytest.mark.parametrize("name", sorted(parsers.GRAMMARS))
def test_kept_tables_parse_as_the_grammar_does(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    sample = {"formula": "K4[Fe(CN)6]", "sentence": "zinc in 0.5 M copper sulfate"}.get(name, "rule")
    kept = parsers.parser(name)
    monkeypatch.setattr(parsers, "_kept", lambda *_: None)
    built = parsers.parser(name)

    def outcome(parser: lark.Lark) -> object:
        try:
            return parser.parse(sample)
        except lark.UnexpectedInput as error:
            return type(error), error.pos_in_stream

    assert outcome(kept) == outcome(built)


@pytest.mark.parametrize("name", sorted(parsers.GRAMMARS))
def test_kept_tables_are_of_this_grammar(name: str) -> None:
    """Run `python -m redoxq.parsers` after changing a grammar."""
    text = (files("redoxq.grammar") / f"{name}.lark").read_text("utf-8")
    kept = (files("redoxq.grammar") / f"{name}.tables.json").read_text("utf-8")
    if f'"made_of":"{parsers._made_of(name, text)}"' not in kept:
        # Tables of another release of lark are passed over by the program; those of another grammar are stale.
        with pytest.MonkeyPatch.context() as patch:
            found = {
                version
                for version in ("1.3.1", lark.__version__)
                if not patch.setattr(lark, "__version__", version)
                and f'"made_of":"{parsers._made_of(name, text)}"' in kept
            }
        assert found, f"grammar/{name}.tables.json is not of grammar/{name}.lark"


def test_a_grammar_without_tables_is_still_read(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(parsers, "_made_of", lambda *_: "another")
    assert parsers.parser("formula").parse("H2O")
