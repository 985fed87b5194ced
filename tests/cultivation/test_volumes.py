"""Streams of every form become one cumulated amount, each with the error that it has."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.cultivation.volumes import cumulated, kept_fraction, read_flow, resets
from fluxnet.ground.errors import MisuseError
from fluxnet.rates.cultivation import Form, SeriesKind, make_series

NODES = np.array([0.0, 2.0, 4.0])


def test_a_totaliser_that_does_not_start_at_zero_counts_from_the_first_node() -> None:
    scale = make_series(SeriesKind.FEED, "feed", "kg", [-1, 0, 4], [7.0, 7.1, 7.5], form=Form.TOTAL)

    assert cumulated(scale, NODES)[0] == pytest.approx([0.0, 0.2, 0.4])


def test_a_sample_is_taken_after_it_was_measured() -> None:
    taken = make_series(
        SeriesKind.SAMPLE, "", "L", [0, 2, 3, 4], [0.1, 0.1, 0.2, 0.1], form=Form.EVENT
    )
    total, share = cumulated(taken, NODES)

    assert total == pytest.approx([0.0, 0.1, 0.4])
    assert share == pytest.approx([1.0, (0.1 * 1 + 0.2 * 0.5) / 0.3])


def test_what_removal_keeps_is_the_product_of_what_each_sample_left() -> None:
    level = np.array([[1.0, 0.9, 0.8]])
    kept, after = kept_fraction(
        level, [(SeriesKind.SAMPLE, np.array([[0.0, 0.1, 0.2]]), np.ones(2))]
    )

    assert kept[0] == pytest.approx([1.0, 0.9, 0.9 * (1 - 0.1 / 0.9)])
    assert after[0] == pytest.approx([0.9, 0.8])


def test_a_reset_is_seen_and_noise_is_not() -> None:
    noisy = [0.0, 0.100, 0.099, 0.2, 0.0, 0.1]
    total = make_series(SeriesKind.BASE, "base", "L", range(6), noisy, form=Form.TOTAL)

    assert resets(total).tolist() == [4]


def test_density_turns_kilograms_into_litres_with_its_error() -> None:
    scale = make_series(SeriesKind.FEED, "feed", "kg", [0, 4], [0.0, 1.2], form=Form.TOTAL)
    flow = read_flow(scale, NODES, by_mass=False, density=1.2, density_sd=0.024)

    assert flow.total == pytest.approx([0.0, 0.5, 1.0])
    assert flow.shift[-1] == pytest.approx(0.02)
    with pytest.raises(MisuseError):
        read_flow(
            make_series(SeriesKind.FEED, "feed", "g", [0, 4], [0, 1], form=Form.TOTAL), NODES,
            by_mass=False, density=1.0,
        )  # fmt: skip
