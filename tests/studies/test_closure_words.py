"""The verdict is one short sentence that claims no more than the balances tell."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

from fluxnet.studies.closure_result import Balance, ClosureTest
from fluxnet.studies.closure_words import verdict

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import AEROBIC, ETHANOL, balance, close

AGREE = ClosureTest(1.5625, 1, 0.2113, 3.8415, True)
REJECT = ClosureTest(13.2, 2, 0.00136, 5.991, False)
UNTESTED = ClosureTest(None, 0, None, None, None)


def told(name: str, recovery: float | None, sd: float = 2.0, missing: tuple[str, ...] = (),
         taken: float = 100.0, released: float = 90.0) -> Balance:  # fmt: skip
    z = None if recovery is None or not sd else (recovery - 100) / sd
    return Balance(name, "mmol", taken, released, released - taken, sd, z, recovery, sd, missing)


@pytest.mark.parametrize(
    ("balances", "test", "contradictions", "words"),
    [
        (
            [told("carbon", 97, 4.04), told("electrons", 101, 1.23)], AGREE, (),
            "Carbon closes to 97 ± 4 %, electrons to 101.0 ± 1.2 %; the rates agree "
            "(h = 1.56 on 1 degree of freedom, p = 0.21).",
        ),
        (
            [told("electrons", 101, 2)], AGREE, (),
            "Electrons close to 101.0 ± 2.0 %; the rates agree (h = 1.56 on 1 degree of "
            "freedom, p = 0.21).",
        ),
        (
            [told("carbon", 80), told("electrons", 81)], REJECT, (),
            "Carbon (80.0 ± 2.0 %) and electrons (81.0 ± 2.0 %) do not close; the rates "
            "contradict one another (h = 13.2 on 2 degrees of freedom, limit 5.99, p = 0.0014): "
            "one is wrong, or something exchanged has no row.",
        ),
        (
            [told("carbon", 100)], REJECT, (),
            "Carbon closes to 100.0 ± 2.0 %; yet the rates contradict one another (h = 13.2 on "
            "2 degrees of freedom, limit 5.99, p = 0.0014): one is wrong, or something exchanged "
            "has no row.",
        ),
        (
            [told("carbon", None, missing=("CO2",)), told("electrons", None, missing=("oxygen",))],
            UNTESTED, (),
            "Carbon has no recovery (CO2 not measured), electrons none (oxygen not measured); no "
            "rate can be tested, since nothing is redundant.",
        ),
        (
            [told("carbon", None, missing=("A", "B", "C")),
             told("electrons", None, missing=("A", "B", "C"))], UNTESTED, (),
            "Carbon and electrons have no recovery (A, B and C not measured); no rate can be "
            "tested, since nothing is redundant.",
        ),
        (
            [told("nitrogen", None, taken=0.0)], REJECT, (("A in", "B out"), ("A in", "C out")),
            "No nitrogen is taken up; values given as exact contradict one another: A in and B "
            "out, and A in and C out.",
        ),
        (
            [told("carbon", None, taken=0.0), told("electrons", None, taken=0.0)], REJECT, (),
            "No carbon and no electrons are taken up; the rates contradict one another (h = 13.2 "
            "on 2 degrees of freedom, limit 5.99, p = 0.0014): one is wrong, or something "
            "exchanged has no row.",
        ),
        (
            [told("carbon", 0.0, 0.0, released=0.0)], ClosureTest(2164.2, 2, 0.0, 5.991, False), (),
            "Carbon (0 %) does not close; the rates contradict one another (h = 2164 on 2 degrees "
            "of freedom, limit 5.99, p < 0.001): one is wrong, or something exchanged has no row.",
        ),
    ],
)  # fmt: skip
def test_the_verdict(
    balances: list[Balance],
    test: ClosureTest,
    contradictions: tuple[tuple[str, ...], ...],
    words: str,
) -> None:
    assert verdict(balances, test, contradictions) == words


def test_a_verdict_begins_with_a_capital_and_ends_with_a_period() -> None:
    for run in (close(AEROBIC), close(ETHANOL), close(ETHANOL, without=("glucose",))):
        assert run.words[0].isupper()
        assert run.words.endswith(".")
        assert "no proof" not in run.words


def test_what_was_measured_of_a_balance_that_lacks_a_rate_is_no_recovery() -> None:
    run = close(ETHANOL.replace("A,CO2,out,19.6,0.4", "A,CO2,out,,"))
    carbon = balance(run, "carbon")
    assert (carbon.recovery, carbon.recovery_sd, carbon.z) == (None, None, None)
    assert carbon.gap == pytest.approx(2 * 18.6 - 60)
    assert "carbon has no recovery (CO2 not measured)" in run.words
    assert "62" not in run.words
    assert balance(run, "electrons").recovery == pytest.approx(93)


def test_one_exact_value_does_not_contradict_another() -> None:
    failed = ClosureTest(None, 1, None, None, False)
    assert verdict([], failed, [("CO2 out",)]) == (
        "CO2 out is given as exact, and no balance allows it."
    )
    assert verdict([], failed, [("CO2 out", "glucose in")]) == (
        "Values given as exact contradict one another: CO2 out and glucose in."
    )
