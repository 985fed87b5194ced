"""Comparisons of the models that come with it: shown in eighty columns, proven, in order."""

from __future__ import annotations

import pytest

import fluxnet as fx
from fluxnet.network.model import Role
from tests.conftest import MODELS

NAMES = sorted(path.stem for path in MODELS.glob("*.flux"))


@pytest.mark.parametrize("name", NAMES)
def test_any_comparison_of_a_model_fits_eighty_columns_and_is_proven(name: str) -> None:
    model = fx.read_model(MODELS / f"{name}.flux")
    boundary = model.network.boundary
    source = next(
        s.name for s in boundary
        if s.role is Role.SUBSTRATE and s.formula is not None and s.formula.count("C")
    )  # fmt: skip
    products = [s.name for s in boundary if s.role in (Role.PRODUCT, Role.BIOMASS)]
    for product in (products[0], products[-1]):
        found = fx.compare(
            model, product, source, reserve="mu = 0.02", uptake=5, draws=3, staircase=True,
            detail=["all"],
        )  # fmt: skip

        assert max(map(len, str(found).splitlines())) <= 80
        for ability in found.abilities:
            known = [y.moles for y in ability.yields if y.moles is not None]
            assert known == sorted(known, reverse=True)
            assert all(y.proven for y in ability.yields)
            assert ability.final.share is None or ability.final.share <= 1
            if ability.staircase is not None:
                assert ability.staircase.adds_up
                assert all(step.lost >= 0 for step in ability.staircase.steps)
