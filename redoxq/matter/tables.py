"""Tables of `data/`, read with their own checks, and the version of all of them together."""

from __future__ import annotations

import csv
import hashlib
import io
import math
from functools import cache
from importlib.resources import files
from importlib.resources.abc import Traversable

from redoxq.errors import DataError

Row = dict[str, str]

VERSION_LENGTH = 12


def data_folder() -> Traversable:
    """The folder of tables and rules inside the installed package."""
    return files("redoxq.data")


@cache
def read_table(name: str) -> tuple[Row, ...]:
    """Read a table of `data/`.

    Parameters
    ----------
    name : str
        Path below `data/`, such as `species/copper.csv`.

    Returns
    -------
    tuple of dict
        One a row, text as it stands.

    Raises
    ------
    DataError
        With file, row and column.
    """
    node = data_folder()
    for part in name.split("/"):
        node = node / part
    return rows_of(node.read_text("utf-8"), name)


def rows_of(text: str, name: str) -> tuple[Row, ...]:
    """Split the text of a table into rows, each as wide as the header."""
    reader = csv.reader(io.StringIO(text))
    header = next(reader, None)
    if not header or any(not column.strip() for column in header):
        raise DataError(f"{name}: the first row must name every column.")
    if twice := [column for column in header if header.count(column) > 1]:
        raise DataError(f"{name}: the column {twice[0]} stands twice.")
    rows = []
    for number, cells in enumerate(reader, 2):
        if not any(cells):
            continue
        if len(cells) > len(header):
            raise DataError(
                f"{name}, row {number}: {len(cells)} cells under {len(header)} columns.",
                hint="Put text that holds a comma between double quotes.",
            )
        cells += [""] * (len(header) - len(cells))
        rows.append(dict(zip(header, cells, strict=True)))
    return tuple(rows)


def number_in(row: Row, column: str, name: str, line: int) -> float | None:
    """The number in a cell; None where it is blank."""
    text = row.get(column, "").strip()
    if not text:
        return None
    try:
        number = float(text)
    except ValueError:
        number = math.nan
    if not math.isfinite(number) or "_" in text or not text.isascii():
        raise DataError(f'{name}, row {line}, column {column}: "{text}" is not a number.')
    return number


def table_names(folder: str) -> list[str]:
    """Names of the tables in a folder of `data/`, sorted."""
    return sorted(f"{folder}/{node.name}" for node in (data_folder() / folder).iterdir() if node.name.endswith(".csv"))


@cache
def data_version() -> str:
    """Hash of all tables and rules, so that an answer tells what it was made of."""
    digest = hashlib.sha256()
    for node in sorted(_files(data_folder()), key=lambda pair: pair[0]):
        digest.update(node[0].encode())
        digest.update(node[1].read_bytes())
    return digest.hexdigest()[:VERSION_LENGTH]


def _files(folder: Traversable, prefix: str = "") -> list[tuple[str, Traversable]]:
    found = []
    for node in folder.iterdir():
        if node.is_dir() and not node.name.startswith("_"):
            found += _files(node, f"{prefix}{node.name}/")
        elif node.name.endswith((".csv", ".rules")):
            found.append((prefix + node.name, node))
    return found
