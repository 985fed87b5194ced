"""The probability on the screen of a solve reads as a sentence."""

from __future__ import annotations

from pathlib import Path

import fluxnet as fx

EXAMPLE = Path(__file__).resolve().parents[2] / "examples" / "1-four-weeks-of-a-diol"


def test_a_tiny_probability_is_below_and_not_equal_to_a_bound():
    model = fx.read_model(EXAMPLE / "tw4.flux")
    text = str(fx.solve(model, fx.read_rates(EXAMPLE / "rates.csv", model)))
    assert "p < 0.001" in text
    assert "= <" not in text
