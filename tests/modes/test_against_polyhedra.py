"""The modes are the extreme rays that a general polyhedral library finds."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest
from hypothesis import given, settings

from fluxnet.checks.cone import FormKind, flux_cone
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.modes.cone import Cone
from fluxnet.modes.enumerate import find_modes
from fluxnet.reading.model import read_model

sys.path.insert(0, str(Path(__file__).resolve().parent))
from every_support import canonical
from polyhedra import cone_of, extreme_rays, joined
from small_cones import cones

MODELS = sorted((Path(__file__).resolve().parents[2] / "models").glob("*.flux"))


def both(cone: Cone) -> tuple[set[tuple[int, ...]], set[tuple[int, ...]]]:
    ours = {canonical(cone, mode) for mode in find_modes(cone).values.tolist()}
    return ours, joined(cone, extreme_rays(cone_of(cone)))


@settings(max_examples=200, deadline=None)
@given(cones(most=16))
def test_the_modes_of_a_random_cone(cone: Cone) -> None:
    ours, theirs = both(cone)

    assert ours == theirs


@pytest.mark.parametrize("path", MODELS, ids=lambda path: path.stem)
def test_the_modes_of_each_model(path: Path) -> None:
    network = read_model(path).network
    assert network is not None
    cone = flux_cone(network, stoichiometry(network))
    one_way = {j for f in cone.sides if f.kind is FormKind.DIRECTION for j in f.row}
    modes = Cone(
        cone.reactions,
        tuple(j not in one_way for j in range(len(cone.reactions))),
        tuple(form.row for form in cone.equal),
    )
    ours, theirs = both(modes)

    assert ours
    assert ours == theirs
