"""What holds for every closure, whatever the rates."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.network.model import Basis, Direction, Quantity, QuantityKind, Role, Species
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.studies.closure import close_rates
from fluxnet.studies.closure_batch import ClosureMatrices, close_many
from fluxnet.studies.closure_structure import Redundancy, find_redundancy

Array = NDArray[np.float64]
NAMES = ["glucose", "ethanol", "acetate", "lactate", "CO2", "oxygen", "ammonia", "glutamate",
         "glycerol", "hydrogen", "biomass", "urea", "nitrate"]  # fmt: skip
numbers = st.floats(0.01, 100)
rationals = st.integers(-6, 6).map(Fraction) | st.fractions(-4, 4, max_denominator=20)


@st.composite
def runs(draw: st.DrawFn) -> RatesTable:
    """A run with three to eight species of the catalogue, some blank, some exact."""
    names = draw(st.lists(st.sampled_from(NAMES), min_size=3, max_size=8, unique=True))
    species, rates = [], []
    for name in names:
        compound = load_catalogue().find(name)
        assert compound is not None
        species.append(Species(name, Role.EXCHANGE, compound.formula, entry=compound.name))
        quantity = Quantity(QuantityKind.RATE, name, draw(st.sampled_from(Direction)))
        value = draw(numbers)
        blank = draw(st.integers(0, 3)) == 0
        rates.append(
            MeasuredRate(quantity, None, None) if blank
            else MeasuredRate(quantity, value, value * draw(st.floats(0.01, 0.2)))
        )  # fmt: skip
    if all(r.value is None for r in rates):
        rates[0] = MeasuredRate(rates[0].quantity, 1.0, 0.1)
    return RatesTable((Run("A", Basis.AMOUNT, tuple(rates), unit="mmol"),), species=tuple(species))


@given(runs())
@settings(deadline=None)
def test_reconciled_rates_balance_where_all_rates_are_known(table: RatesTable) -> None:
    (run,) = close_rates(table).runs
    if any(rate.reconciled is None for rate in run.rates):
        return
    has_ammonia = any(rate.species == "ammonia" for rate in run.rates)
    for element in ("C", "N", "electrons") if has_ammonia else ("C", "electrons"):
        terms = []
        for rate in run.rates:
            compound = load_catalogue().find(rate.species)
            assert compound is not None
            content = (
                degree_of_reduction(compound.formula) if element == "electrons"
                else compound.formula.count(element)
            )  # fmt: skip
            sign = -1 if rate.direction is Direction.IN else 1
            terms.append(sign * float(content or 0) * float(rate.reconciled or 0))
        # rates that come out as zero leave the rounding of the others
        assert abs(sum(terms)) <= 1e-8 * sum(abs(t) for t in terms) + 1e-10


@given(runs())
@settings(deadline=None)
def test_reconciling_never_makes_an_error_larger(table: RatesTable) -> None:
    (run,) = close_rates(table).runs
    for rate in run.rates:
        if rate.sd is not None and rate.reconciled_sd is not None:
            assert rate.reconciled_sd <= rate.sd * (1 + 1e-9)


@given(runs(), st.floats(0.001, 1000))
@settings(deadline=None)
def test_another_unit_changes_no_verdict(table: RatesTable, factor: float) -> None:
    (run,) = table.runs
    scaled = tuple(
        rate if rate.value is None or rate.sd is None
        else MeasuredRate(rate.quantity, rate.value * factor, rate.sd * factor)
        for rate in run.rates
    )  # fmt: skip
    other = RatesTable((Run("A", Basis.AMOUNT, scaled, unit="mmol"),), species=table.species)
    one, two = close_rates(table).runs[0].test, close_rates(other).runs[0].test
    assert one.dof == two.dof
    if one.h is not None and two.h is not None:
        assert abs(one.h - two.h) <= 1e-7 * max(one.h, 1.0)


@given(runs())
@settings(deadline=None)
def test_the_order_of_rows_changes_no_value(table: RatesTable) -> None:
    (run,) = table.runs
    turned = Run("A", Basis.AMOUNT, run.rates[::-1], unit="mmol")
    one = close_rates(table).runs[0]
    two = close_rates(RatesTable((turned,), species=table.species)).runs[0]
    assert one.test.dof == two.test.dof
    assert {r.species: r.kind for r in one.rates} == {r.species: r.kind for r in two.rates}
    if one.test.h is not None and two.test.h is not None:
        assert abs(one.test.h - two.test.h) <= 1e-7 * max(one.test.h, 1.0)


def matrices_of(found: Redundancy, width: int) -> ClosureMatrices:
    rows = np.array([[float(x) for x in row] for row in found.rows]).reshape(-1, width)
    return ClosureMatrices(
        rows, np.zeros((0, width)), np.zeros((0, width)), np.full(width, False),
        np.array(found.balanceable), np.full(width, False),
    )  # fmt: skip


@given(
    st.lists(st.lists(rationals, min_size=6, max_size=6), min_size=1, max_size=4),
    st.lists(st.fractions(Fraction(1, 50), 50, max_denominator=50), min_size=4, max_size=4),
    st.lists(numbers, min_size=5, max_size=5),
)
@settings(deadline=None)
def test_h_does_not_change_when_balances_are_scaled(
    balances: list[list[Fraction]], factors: list[Fraction], values: list[float]
) -> None:
    """Five measured values and an unmeasured one; the balances times any factors."""
    measured = [row[:5] for row in balances]
    unmeasured = [row[5:] for row in balances]
    scaled = list(zip(balances, factors, strict=False))
    plain = find_redundancy(measured, unmeasured, [False] * 5)
    times = find_redundancy(
        [[x * f for x in row[:5]] for row, f in scaled],
        [[x * f for x in row[5:]] for row, f in scaled], [False] * 5,
    )  # fmt: skip
    assert plain.dof == times.dof
    assert plain.balanceable == times.balanceable
    y = np.array([values])
    one = close_many(matrices_of(plain, 5), y, 0.1 * y)
    two = close_many(matrices_of(times, 5), y, 0.1 * y)
    if plain.dof:
        assert np.allclose(one.h, two.h, rtol=1e-6, atol=1e-8)
        assert np.allclose(one.reconciled, two.reconciled, rtol=1e-6, atol=1e-8)


@given(
    st.lists(st.lists(rationals, min_size=7, max_size=7), min_size=1, max_size=5),
    st.lists(st.booleans(), min_size=4, max_size=4),
)
@settings(deadline=None)
def test_the_degrees_of_freedom_are_the_rank_of_the_projected_balances(
    balances: list[list[Fraction]], exact: list[bool]
) -> None:
    """Against R = E_m - E_u E_u^+ E_m in floating point, with exact values eliminated."""
    found = find_redundancy([r[:4] for r in balances], [r[4:] for r in balances], exact)
    em = np.array([[float(x) for x in row[:4]] for row in balances])
    eu = np.array([[float(x) for x in row[4:]] for row in balances])
    projected = em - eu @ np.linalg.pinv(eu, rcond=1e-9) @ em
    free = projected[:, [not e for e in exact]]
    rank = np.linalg.matrix_rank(free, tol=1e-8) if free.size else 0
    assert found.dof == rank
    for relation in (*found.rows, *found.contradictions):
        row = np.array([float(x) for x in relation])
        weights, *_ = np.linalg.lstsq(projected.T, row, rcond=1e-9)
        assert np.allclose(weights @ projected, row, atol=1e-7)
    for relation in found.contradictions:
        assert not any(x for x, e in zip(relation, exact, strict=True) if not e)
