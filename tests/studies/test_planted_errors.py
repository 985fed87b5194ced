"""Is the truth among the suspects? Data sets of our models with one thing wrong in each.

A small sample of each runs always; the large ones are slow. Numbers as they were seen stand in
``planted.txt``: write them anew with ``FLUXNET_WRITE_GOLDEN=1`` and read the difference.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import numpy as np
import pytest

import fluxnet as fx
from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.solving.suspects import first_group, weigh_suspects
from fluxnet.studies.closure import close_rates
from fluxnet.studies.closure_result import RunClosure
from fluxnet.studies.closure_world import identity
from fluxnet.studies.suspect_plan import SuspectPlan

sys.path.insert(0, str(Path(__file__).resolve().parent))

from planting import CASES, HEAD, Planted, draw, truth_of

GOLDEN = Path(__file__).with_name("planted.txt")
FAR = 3.0
FEW = 34


@dataclass(frozen=True)
class Found:
    """What became of one planted error.

    ``apart`` is how many sds the planted error lies from the nearest hypothesis outside of its
    exact twins; ``first`` whether such a one, or a twin of it, stands first; ``size`` the number
    of distinct directions in the first group.
    """

    rejected: bool
    within: bool
    first: bool
    apart: float
    size: int


def close_sets(model: str, variant: str, kind: str, count: int) -> list[tuple[Planted, RunClosure]]:
    truth = truth_of(model, variant)
    sets = list(draw(truth, f"{model} {variant} {kind}", count, planted=kind))
    rates = fx.read_rates_text(HEAD + "".join(s.rows for s in sets), truth.model)
    closed = close_rates(rates.table, network=truth.network, suspects=True)
    by_name = {run.run: run for run in closed.runs}
    return [(one, by_name[one.run]) for one in sets]


def place_of(plan: SuspectPlan, name: str, *, is_rate: bool) -> int:
    """The hypothesis that is true; a species of the model may have the catalogue's name."""
    own = [
        i for i, h in enumerate(plan.hypotheses)
        if h.name == name and (h.row is not None) == is_rate
    ]  # fmt: skip
    if own:
        return own[0]
    entry = identity(name)
    return next(i for i, h in enumerate(plan.hypotheses) if h.name == entry and h.row is None)


@cache
def with_catalogue(kind: str, count: int) -> list[Found]:
    """Planted errors among all hypotheses: measured rates, the model's species, the catalogue."""
    return list(_with_catalogue(kind, count))


@cache
def rates_alone(count: int) -> list[Found]:
    """Planted errors of rates where nothing but a measured rate is suspected."""
    return list(_rates_alone(count))


def _with_catalogue(kind: str, count: int) -> Iterator[Found]:
    for case in CASES:
        for one, run in close_sets(*case, kind, count):
            judged, k = run.sought.judged, run.sought.place
            true = place_of(judged.plan, one.wrong[0], is_rate=kind == "rate")
            number = judged.plan.classes[true]
            arrays = judged.arrays
            apart = float(arrays.separation[k, true] / abs(arrays.sizes[k, true]) * abs(one.size))
            group = np.flatnonzero(judged.group[k]).tolist()
            yield Found(
                rejected=run.test.closes is False,
                within=bool(judged.group[k, true]),
                # the order is that which is shown; only errors far from others are asked for it
                first=apart >= FAR and run.suspects.group[0].direction_number == number,
                apart=apart,
                size=len({judged.plan.classes[i] for i in group}),
            )


def _rates_alone(count: int) -> Iterator[Found]:
    for case in CASES:
        for one, run in close_sets(*case, "rate", count):
            judged, k = run.sought.judged, run.sought.place
            plan = judged.plan
            rates = [i for i, h in enumerate(plan.hypotheses) if h.row is not None]
            numbers = [plan.classes[i] for i in rates]
            arrays = weigh_suspects(judged.whitened, plan.directions[rates], numbers)
            true = next(n for n, i in enumerate(rates) if plan.hypotheses[i].name == one.wrong[0])
            group = first_group(arrays.h_left, np.ones(arrays.h_left.shape, dtype=bool))[k]
            sines = arrays.separation[k, true] / abs(arrays.sizes[k, true])
            yield Found(
                rejected=run.test.closes is False,
                within=bool(group[true]),
                first=numbers[int(arrays.h_left[k].argmin())] == numbers[true],
                apart=float(sines * abs(one.size)),
                size=len({numbers[n] for n in np.flatnonzero(group)}),
            )


def share(found: list[Found], what: str) -> float:
    return float(np.mean([getattr(one, what) for one in found]))


def told(title: str, found: list[Found]) -> str:
    """One line on how it went."""
    apart = [one for one in found if one.apart >= FAR]
    rejected = [one for one in found if one.rejected]
    return (
        f"{title}: {len(found)} sets, truth in the first group {100 * share(found, 'within'):.1f} %"
        f" (of the {len(rejected)} rejected {100 * share(rejected, 'within'):.1f} %), mean size of "
        f"the group {np.mean([one.size for one in found]):.2f} (rejected "
        f"{np.mean([one.size for one in rejected]):.2f}); {len(apart)} lie 3 sd or more from all "
        f"others, first in {sum(one.first for one in apart)}\n"
    )


def test_the_first_group_does_not_grow_unseen():
    text = told("rates alone", rates_alone(FEW))
    text += told("rates, with the catalogue", with_catalogue("rate", FEW))
    text += told("by-products left out", with_catalogue("row", FEW))
    print(text)
    if os.environ.get("FLUXNET_WRITE_GOLDEN"):
        GOLDEN.write_text(text, encoding="utf-8")
    assert text == GOLDEN.read_text(encoding="utf-8")


def test_the_truth_is_in_the_first_group_nearly_as_often_as_is_said():
    found = [*with_catalogue("rate", FEW), *with_catalogue("row", FEW)]
    assert len(found) >= 400
    assert 0.92 <= share(found, "within") <= 0.98


@pytest.mark.slow
def test_the_truth_is_in_the_first_group_in_95_of_100_large_samples():
    found = [*with_catalogue("rate", 500), *with_catalogue("row", 500)]
    print(told("rates and by-products", found))
    assert 0.92 <= share(found, "within") <= 0.98


def first_of_apart(found: list[Found], least: int) -> float:
    apart = [one for one in found if one.apart >= FAR]
    assert len(apart) >= least
    return share(apart, "first")


def test_an_error_far_from_all_others_stands_first_small_sample():
    assert first_of_apart(rates_alone(FEW), 10) >= 0.92
    assert first_of_apart(with_catalogue("row", FEW), 5) >= 0.92


@pytest.mark.slow
def test_an_error_far_from_all_other_rates_stands_first():
    assert first_of_apart(rates_alone(600), 200) >= 0.92


@pytest.mark.slow
def test_an_error_far_from_all_of_the_catalogue_stands_first():
    found = [*with_catalogue("row", 900), *with_catalogue("rate", 900)]
    assert first_of_apart(found, 200) >= 0.92


@pytest.mark.parametrize(
    "count", [100, pytest.param(400, marks=pytest.mark.slow)], ids=["small", "large"]
)
def test_with_nothing_wrong_one_run_in_twenty_is_rejected(count):
    rejected = [
        run.test.closes is False for case in CASES for _, run in close_sets(*case, "none", count)
    ]
    slack = 2.5 * np.sqrt(0.05 * 0.95 / len(rejected))
    assert abs(np.mean(rejected) - 0.05) < max(slack, 0.012)
    if len(rejected) >= 2000:
        assert 0.038 <= np.mean(rejected) <= 0.062


@pytest.mark.slow
def test_something_missing_has_its_carbon_and_electrons_within_their_intervals():
    # of runs in which carbon and electrons tell of it: the interval is one of 95 %
    held: list[bool] = []
    for case in CASES:
        truth = truth_of(*case)
        for one, run in close_sets(*case, "row", 300):
            missing = run.suspects.missing
            species = truth.network.find_species(one.wrong[0])
            carbon = float(species.formula.count("C"))
            if missing is None or missing.low is None or not carbon or missing.carbon < 0:
                continue
            gamma = float(degree_of_reduction(species.formula)) / carbon
            if not species.formula.count("N"):
                held.append(missing.low <= gamma <= missing.high)
    assert len(held) > 400
    assert 0.92 <= np.mean(held) <= 0.98
