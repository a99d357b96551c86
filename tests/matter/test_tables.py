"""Tables of data: how they are read, and what is wrong with one."""

from __future__ import annotations

import csv
import io
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from redoxq.errors import DataError
from redoxq.matter import tables
from redoxq.matter.tables import data_folder, data_version, number_in, read_table, rows_of, table_names


def test_quoted_cells_hold_commas_and_quotes() -> None:
    (row,) = rows_of('name,note\nbrine,"strong, ""cold"""\n', "mine.csv")
    assert row == {"name": "brine", "note": 'strong, "cold"'}


def test_short_rows_end_in_blank_cells_and_empty_lines_are_passed_over() -> None:
    assert rows_of("name,note\nbrine\n\n", "mine.csv") == ({"name": "brine", "note": ""},)


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("", "first row"),
        ("name,,note\n", "first row"),
        ("name,name\n", "column name stands twice"),
        ("name,note\nbrine,a,b\n", "row 2"),
    ],
)
def test_a_table_that_breaks_the_rules_is_told(text: str, told: str) -> None:
    with pytest.raises(DataError, match=told) as raised:
        rows_of(text, "mine.csv")
    assert raised.value.message.startswith("mine.csv")


@pytest.mark.parametrize(("text", "value"), [("1", 1.0), ("-2.5", -2.5), (".5", 0.5), ("1e-3", 1e-3), (" ", None)])
def test_numbers(text: str, value: float | None) -> None:
    assert number_in({"G": text}, "G", "mine.csv", 2) == value


@pytest.mark.parametrize("text", ["nan", "inf", "1_000", "1,5", "low", "0x10", "٣"])
def test_what_is_no_number_is_told(text: str) -> None:
    with pytest.raises(DataError, match=r"mine\.csv, row 7, column G"):
        number_in({"G": text}, "G", "mine.csv", 7)


@given(st.lists(st.lists(st.text(st.characters(codec="utf-8", exclude_characters="\r\n\x00")), min_size=2, max_size=2)))
def test_what_is_written_is_read(rows: list[list[str]]) -> None:
    text = io.StringIO()
    csv.writer(text).writerows([["name", "note"], *rows])
    kept = [row for row in rows if any(row)]
    assert [list(row.values()) for row in rows_of(text.getvalue(), "mine.csv")] == kept


def test_every_table_is_read() -> None:
    names = [node.name for node in data_folder().iterdir() if node.name.endswith(".csv")] + table_names("species")
    assert all(read_table(name) for name in names)


def test_the_version_is_that_of_the_tables(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    def version() -> str:
        data_version.cache_clear()
        return data_version()

    installed = version()
    assert len(installed) == tables.VERSION_LENGTH
    (tmp_path / "species").mkdir()
    (tmp_path / "species" / "mine.csv").write_text("formula\n")
    monkeypatch.setattr(tables, "data_folder", lambda: tmp_path)
    first = version()
    (tmp_path / "species" / "mine.csv").write_text("formula\nCu\n")
    second = version()
    (tmp_path / "notes.txt").write_text("no table")
    assert len({installed, first, second}) == 3
    assert version() == second
    monkeypatch.undo()
    assert version() == installed
