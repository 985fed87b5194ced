"""Rows of whole numbers in 64 bits, or in Python's own where those would overflow."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import lcm
from typing import Any

import numpy as np
from numpy.typing import NDArray

__all__ = ["Whole", "combined", "reduced", "times", "whole_rows"]

Whole = NDArray[Any]
"""Whole numbers: int64, or Python's own as objects."""

_ROOM = 2.0**62


def whole_rows(rows: Sequence[Sequence[Fraction]], columns: int) -> Whole:
    """Each row in smallest whole numbers.

    Examples
    --------
    >>> whole_rows([[Fraction(1, 2), Fraction(1, 3)]], 2).tolist()
    [[3, 2]]
    """
    scaled = [
        [int(v * lcm(*(w.denominator for w in row))) for v in row] for row in rows
    ]
    fits = all(abs(v) < _ROOM for row in scaled for v in row)
    made = np.array(scaled, dtype=np.int64 if fits else object)
    return reduced(made.reshape(len(rows), columns))


def combined(left: Whole, a: Whole, right: Whole, b: Whole) -> Whole:
    """Rows ``a left + b right`` in smallest whole numbers, exact however large.

    Parameters
    ----------
    left, right
        Shape (n, columns).
    a, b
        Positive factors, shape (n,).
    """
    shared = np.gcd(a, b)
    a, b = a // shared, b // shared
    if left.dtype != object:
        reach = _largest(left) * a.astype(np.float64) + _largest(right) * b.astype(np.float64)
        large = reach >= _ROOM
        if not large.any():
            return reduced(left * a[:, None] + right * b[:, None])
        if large.all():
            return combined(*(x.astype(object) for x in (left, a, right, b)))
        out = np.empty(left.shape, dtype=object)
        out[~large] = combined(left[~large], a[~large], right[~large], b[~large])
        out[large] = combined(left[large], a[large], right[large], b[large])
        return _lighter(out)
    return _lighter(reduced(left * a[:, None] + right * b[:, None]))


def times(rows: Whole, matrix: Whole) -> Whole:
    """The product of two matrices, exact however large.

    Examples
    --------
    >>> times(np.array([[2**40]]), np.array([[2**40]])).tolist() == [[2**80]]
    True
    """
    if rows.dtype != object and matrix.dtype != object:
        reach = float(_largest(rows).max(initial=0.0))
        weight = np.abs(matrix.astype(np.float64)).sum(axis=0).max(initial=0.0)
        if reach * weight < _ROOM:
            return np.asarray(rows @ matrix)
    return np.asarray(rows.astype(object) @ matrix.astype(object))


def reduced(rows: Whole) -> Whole:
    """Each row divided by its greatest common divisor.

    Examples
    --------
    >>> reduced(np.array([[4, -6], [0, 0]])).tolist()
    [[2, -3], [0, 0]]
    """
    if not rows.size:
        return rows
    shared = np.gcd.reduce(rows, axis=1)
    if rows.dtype != object:
        dividing = np.flatnonzero(shared > 1)
        if len(dividing):
            rows[dividing] //= shared[dividing, None]
        return rows
    return rows // np.where(shared == 0, 1, shared)[:, None]


def _largest(rows: Whole) -> NDArray[np.float64]:
    return np.asarray(np.abs(rows).max(axis=1, initial=0), dtype=np.float64)


def _lighter(rows: Whole) -> Whole:
    """Back in 64 bits where all numbers fit."""
    if not rows.size or max(int(rows.max()), -int(rows.min())) < _ROOM:
        return rows.astype(np.int64)
    return rows
