"""Balancing of chemical equations over elements and charge, in whole numbers."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import gcd, lcm

from redoxq.matter.formula import Formula

Vector = list[Fraction]


def content(formula: Formula) -> dict[str, int]:
    """Elements and charge (key `charge`) of a formula; an electron is charge alone."""
    return {**dict(formula.atoms), "charge": formula.charge}


def is_balanced(left: Sequence[tuple[int, Formula]], right: Sequence[tuple[int, Formula]]) -> bool:
    """Tell whether both sides hold the same atoms and the same charge."""
    difference: dict[str, int] = {}
    for sign, side in ((1, left), (-1, right)):
        for count, formula in side:
            for key, number in content(formula).items():
                difference[key] = difference.get(key, 0) + sign * count * number
    return not any(difference.values())


def null_vectors(formulas: Sequence[Formula], signs: Sequence[int]) -> list[list[int]]:
    """Whole-number combinations of signed formulas that hold nothing, one for each degree of freedom.

    Parameters
    ----------
    formulas : sequence of Formula
    signs : sequence of int
        +1 on the left, -1 on the right.

    Returns
    -------
    list of list of int
        A basis of the solutions; each with coprime entries and the first of them that is not zero positive.
    """
    keys = sorted({key for formula in formulas for key in content(formula)})
    matrix = [
        [Fraction(sign * content(formula).get(key, 0)) for formula, sign in zip(formulas, signs, strict=True)]
        for key in keys
    ]
    pivots = _reduce(matrix, len(formulas))
    free = [column for column in range(len(formulas)) if column not in pivots]
    return [_whole(_solution(matrix, pivots, column, len(formulas))) for column in free]


def _reduce(matrix: list[Vector], columns: int) -> list[int]:
    """Reduced row echelon form in place; the pivot columns."""
    pivots: list[int] = []
    row = 0
    for column in range(columns):
        pivot = next((k for k in range(row, len(matrix)) if matrix[k][column]), None)
        if pivot is None:
            continue
        matrix[row], matrix[pivot] = matrix[pivot], matrix[row]
        lead = matrix[row][column]
        matrix[row] = [value / lead for value in matrix[row]]
        for k in range(len(matrix)):
            if k != row and matrix[k][column]:
                factor = matrix[k][column]
                matrix[k] = [a - factor * b for a, b in zip(matrix[k], matrix[row], strict=True)]
        pivots.append(column)
        row += 1
    return pivots


def _solution(matrix: list[Vector], pivots: list[int], free: int, columns: int) -> Vector:
    vector = [Fraction(0)] * columns
    vector[free] = Fraction(1)
    for row, column in enumerate(pivots):
        vector[column] = -matrix[row][free]
    return vector


def _whole(vector: Vector) -> list[int]:
    scale = lcm(*(value.denominator for value in vector))
    numbers = [int(value * scale) for value in vector]
    divisor = gcd(*numbers)
    sign = next((1 if number > 0 else -1 for number in numbers if number), 1)
    return [sign * number // divisor for number in numbers]
