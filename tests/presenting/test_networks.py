"""A bare network does for a model in every function of the Python interface."""

from __future__ import annotations

import numpy as np
import pytest

import fluxnet as fx
from fluxnet.cli.new import MODEL, RATES

MODEL_READ = fx.read_model_text(MODEL)
NETWORK = MODEL_READ.network


def test_a_network_has_its_matrix_with_and_without_labels() -> None:
    frame = NETWORK.frame()

    assert np.array_equal(NETWORK.S, MODEL_READ.S)
    assert np.array_equal(frame.to_numpy(), NETWORK.S)
    assert list(frame.index) == [s.name for s in NETWORK.species]
    assert list(frame.columns) == [r.name for r in NETWORK.reactions]
    first = NETWORK.reactions[0]
    for sign, term in first.terms:
        assert np.sign(frame.loc[term.species, first.name]) == sign
    with pytest.raises(ValueError, match="read-only"):
        NETWORK.S[0, 0] = 1


def test_a_network_is_checked_closed_and_solved_as_its_model_is() -> None:
    rates = fx.read_rates_text(RATES, NETWORK)

    assert str(fx.check(NETWORK)) == str(fx.check(MODEL_READ))
    assert str(fx.closure(rates, network=NETWORK)) == str(fx.closure(rates, MODEL_READ))
    assert str(fx.solve(NETWORK, rates)) == str(fx.solve(MODEL_READ, rates))


def test_a_network_is_written_as_text_that_gives_it_again() -> None:
    text = fx.write_model(NETWORK)

    again = fx.read_model_text(text)
    assert fx.write_model(again) == text
    assert np.array_equal(again.S, NETWORK.S)
    assert [str(m.quantity) for m in again.network.limits] == [
        str(m.quantity) for m in NETWORK.limits
    ]


@pytest.mark.parametrize("wrong", ["model.flux", None, 3])
def test_what_is_no_model_is_misuse(wrong: object) -> None:
    with pytest.raises(fx.MisuseError, match="a model is needed"):
        fx.check(wrong)
    with pytest.raises(fx.MisuseError, match="a model is needed"):
        fx.solve(wrong)
