"""A run built by hand."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
import pytest

from fluxnet.network.model import Basis, Direction, Quantity, QuantityKind
from fluxnet.rates.covariance import join_errors
from fluxnet.rates.measured import MeasuredRate, Run


@pytest.fixture
def make_run() -> Callable[..., Run]:
    """A run of released species ``a``, ``b``, ... with own sds, one of them relative."""

    def make_run(
        values: Sequence[float],
        own: Sequence[float],
        relative: Sequence[float | None] | None = None,
        shared: float | None = None,
        correlations: np.ndarray | None = None,
    ) -> Run:
        relative = relative or [None] * len(values)
        shifts = None if shared is None else shared * np.array(values)
        covariance = join_errors(own, shifts, correlations)
        rates = tuple(
            MeasuredRate(
                Quantity(QuantityKind.RATE, "abcdef"[k], Direction.OUT), v,
                float(np.sqrt(covariance[k, k])), relative[k],
                own_sd=None if shared is None else own[k],
            )
            for k, v in enumerate(values)
        )  # fmt: skip
        return Run("A", Basis.SPECIFIC, rates, covariance, shared_error=shared)

    return make_run
