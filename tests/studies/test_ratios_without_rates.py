"""Measured ratios in a model of which nothing else is measured: an answer, never a fault."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model_text
from fluxnet.studies.solution import SolveStatus
from fluxnet.studies.solve import solve_network

MODELS = Path(__file__).parents[2] / "models"
YIELD = "\nlimit mu / glucose = 0.1 ± 0.01\n"


@pytest.mark.parametrize(
    ("name", "variant"),
    [("mixed-acid", "anaerobic"), ("mixed-acid", "base"), ("amino-acid", "base")],
)
def test_a_ratio_whose_denominator_its_own_pull_makes_small_is_no_fault(
    name: str, variant: str
) -> None:
    text = (MODELS / f"{name}.flux").read_text("utf-8")
    network = read_model_text(text + YIELD).network
    assert network is not None
    network, _ = apply_variant(network, variant)
    assert network is not None
    (found,) = solve_network(network).runs

    assert found.status is SolveStatus.SOLVED
    assert np.isfinite([flux.value for flux in found.fluxes]).all()
    assert found.residual is not None
    assert found.residual < 1e-9
