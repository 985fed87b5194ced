"""Chi-squared tails against the library of special functions, and against a printed table."""

from __future__ import annotations

import math

import numpy as np
import pytest
import scipy.special
import scipy.stats

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.statistics import chi_squared_quantile, chi_squared_tail, chi_squared_tails

# Critical values at 0.50, 0.75, 0.90, 0.95, 0.975, 0.99 of a textbook table (Table 3.5, p. 85;
# read), rounded: half a unit of the last digit. Its first number is printed 0.46, a slip: the
# median for 1 dof is 0.45494 (0.455 rounded once more); the correct digits stand here.
PRINTED = {
    1: ("0.455", "1.32", "2.71", "3.84", "5.02", "6.63"),
    2: ("1.39", "2.77", "4.61", "5.99", "7.38", "9.21"),
    3: ("2.37", "4.11", "6.25", "7.81", "9.35", "11.3"),
    4: ("3.36", "5.39", "7.78", "9.49", "11.1", "13.3"),
    5: ("4.35", "6.63", "9.24", "11.1", "12.8", "15.1"),
}
COLUMNS = (0.50, 0.75, 0.90, 0.95, 0.975, 0.99)


@pytest.mark.parametrize("dof", [1, 2, 3, 4, 5, 6, 7, 10, 31, 100, 501])
def test_the_tail_is_that_of_the_special_functions(dof):
    for h in (0.0, 1e-9, 0.01, 0.5, 1.0, dof / 2, dof, 2.0 * dof, 60.0, 900.0):
        expected = scipy.special.chdtrc(dof, h)
        assert chi_squared_tail(h, dof) == pytest.approx(expected, rel=1e-11, abs=1e-300)


@pytest.mark.parametrize("dof", [1, 2, 5, 8])
def test_many_tails_at_once_are_the_single_ones(dof):
    values = np.array([[0.0, 0.3, 1.0], [4.0, 55.0, math.inf]])
    single = [[chi_squared_tail(h, dof) for h in row] for row in values.tolist()]
    assert np.allclose(chi_squared_tails(values, dof), single, rtol=1e-13, atol=0)


@pytest.mark.parametrize("dof", sorted(PRINTED))
def test_critical_values_are_those_of_the_printed_table(dof):
    for p, printed in zip(COLUMNS, PRINTED[dof], strict=True):
        decimals = len(printed.split(".")[1])
        tolerance = 0.5 * 10**-decimals + 1e-9
        assert chi_squared_quantile(p, dof) == pytest.approx(float(printed), abs=tolerance)


@pytest.mark.parametrize("dof", [1, 2, 3, 8, 40])
def test_the_quantile_is_the_inverse_of_the_tail(dof):
    for p in (0.0, 0.01, 0.5, 0.9, 0.95, 0.999):
        quantile = chi_squared_quantile(p, dof)
        assert quantile == pytest.approx(scipy.stats.chi2.ppf(p, dof), rel=1e-10)


def test_nonsense_is_refused():
    for h, dof in ((-1.0, 2), (math.nan, 2), (1.0, 0)):
        with pytest.raises(MisuseError):
            chi_squared_tail(h, dof)
        with pytest.raises(MisuseError):
            chi_squared_tails(np.array([h]), dof)
    for p in (-0.1, 1.0, math.nan):
        with pytest.raises(MisuseError):
            chi_squared_quantile(p, 2)
