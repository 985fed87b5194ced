"""Random small cones for property tests."""

from __future__ import annotations

from fractions import Fraction

from hypothesis import strategies as st

from fluxnet.modes.cone import Cone

NUMBERS = [Fraction(n) for n in (0, 0, 0, 0, 1, -1, 1, -1, 2, -3)] + [Fraction(-7, 5)]


@st.composite
def cones(draw: st.DrawFn, most: int = 9) -> Cone:
    columns = draw(st.integers(1, most))
    rows = draw(st.integers(0, max(1, columns - 2)))
    line = st.lists(st.sampled_from(NUMBERS), min_size=columns, max_size=columns)
    drawn = [draw(line) for _ in range(rows)]
    both = draw(st.lists(st.sampled_from([True, False, False]), min_size=columns,
                         max_size=columns))  # fmt: skip
    return Cone(
        tuple(f"r{j}" for j in range(columns)),
        tuple(both),
        tuple({j: v for j, v in enumerate(row) if v} for row in drawn),
    )
