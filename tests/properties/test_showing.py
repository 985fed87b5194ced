"""Showing any result never raises, whatever rates, limits and aims it came from."""

from __future__ import annotations

import io
import json
import math
from collections.abc import Callable
from typing import Any

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from rich.console import Console

import fluxnet as fx
from fluxnet.cli.new import MODEL

SPECIES = {"glucose": "in", "oxygen": "in", "CO2": "out", "ethanol": "out", "ammonia": "in"}
AIMS = ("mu", "ethanol", "in CO2", "ATP", "NADH", "oxphos", "in glucose", "2 ethanol - X")

PLANS = ("mu", "in CO2", "oxphos", "ethanol / glucose", "CO2 / oxygen", "mu / glucose",
         "ATP catabolism", "NADH anabolism")  # fmt: skip

sizes = st.one_of(
    st.just(0.0), st.floats(1e-3, 100), st.floats(1e-9, 1e9), st.integers(0, 10).map(float)
)
sds = st.sampled_from(["", "0", "0.1", "5 %", "80 %", "1e-6"])
limits = st.lists(
    st.sampled_from(
        [
            "limit glucose <= 2", "limit glucose = 1", "limit oxygen <= 0", "limit mu >= 0.1",
            "limit ethanol >= 3", "limit CO2 out <= 1", "limit CO2 / oxygen = 1.05 ± 0.03",
            "limit growth <= 0.5", "limit ferment between 0.1 and 0.2",
        ]
    ),
    unique=True, max_size=3,
)  # fmt: skip


@st.composite
def tables(draw: st.DrawFn) -> str:
    rows = ["run,species,direction,rate,sd,unit"]
    for run in draw(st.lists(st.sampled_from("AB"), min_size=1, max_size=2, unique=True)):
        for name in draw(st.lists(st.sampled_from(list(SPECIES)), unique=True, max_size=5)):
            value = draw(st.one_of(st.none(), sizes))
            rows.append(
                f"{run},{name},{SPECIES[name]},{'' if value is None else repr(value)},"
                f"{draw(sds) if value is not None else ''},mmol/g/h"
            )
        if draw(st.booleans()):
            rows.append(f"{run},mu,,{draw(sizes)!r},{draw(sds)},1/h")
    return "\n".join(rows) + "\n"


def finite(value: Any) -> bool:
    """Whether a document holds no NaN and no infinity."""
    if isinstance(value, dict):
        return all(finite(item) for item in value.values())
    if isinstance(value, list):
        return all(finite(item) for item in value)
    return not isinstance(value, float) or math.isfinite(value)


def show(ask: Callable[[], fx.Answer[Any]]) -> None:
    """Every face of an answer, at a width that is usual and at a narrow one; or what is wrong."""
    try:
        answer = ask()
    except fx.InputError as fault:
        told = fault
    else:
        show_faces(answer)
        return
    assert told.diagnostics
    assert str(told)


def show_faces(answer: fx.Answer[Any]) -> None:
    assert str(answer).strip()
    assert "nan" not in str(answer).split()
    assert answer._repr_html_().startswith("<div>")
    assert finite(json.loads(answer.to_json()))
    for key in answer.tables:
        assert answer.to_frame(key).shape[0] == len(answer.tables[key].rows)
    for width in (40, 80):
        Console(file=io.StringIO(), width=width).print(answer)


@given(tables(), limits, st.sampled_from(["closure", "closure of the model", "fit"]))
@settings(max_examples=120, suppress_health_check=[HealthCheck.too_slow], deadline=None)
def test_showing_a_closure_or_a_fit_never_raises(table: str, lines: list[str], what: str) -> None:
    def ask() -> fx.Answer[Any]:
        model = fx.read_model_text("\n".join([MODEL, *lines]) + "\n")
        rates = fx.read_rates_text(table, model)
        if what == "fit":
            return fx.solve(model, rates)
        return fx.closure(rates, model if what == "closure of the model" else None)

    show(ask)


@given(st.one_of(st.none(), tables()), limits, st.sampled_from(AIMS), st.booleans(),
       st.sampled_from([0.0, 0.5, 2.0, 50.0]), st.sampled_from([1.0, 0.9, 0.0]))  # fmt: skip
@settings(max_examples=60, suppress_health_check=[HealthCheck.too_slow], deadline=None)
def test_showing_an_optimum_never_raises(
    table: str | None, lines: list[str], aim: str, upward: bool, within: float, fraction: float
) -> None:
    def ask() -> fx.Answer[Any]:
        model = fx.read_model_text("\n".join([MODEL, *lines]) + "\n")
        rates = None if table is None else fx.read_rates_text(table, model)
        asked = {"maximise" if upward else "minimise": aim}
        return fx.solve(model, rates, within=within, fraction=fraction, **asked)

    show(ask)


@given(st.one_of(st.none(), tables()), limits, st.sampled_from(PLANS),
       st.sampled_from([0.05, 1e-6, 0.99]))  # fmt: skip
@settings(max_examples=100, suppress_health_check=[HealthCheck.too_slow], deadline=None)
def test_showing_a_plan_never_raises(
    table: str | None, lines: list[str], wanted: str, error: float
) -> None:
    def ask() -> fx.Answer[Any]:
        model = fx.read_model_text("\n".join([MODEL, *lines]) + "\n")
        rates = None if table is None else fx.read_rates_text(table, model)
        return fx.solve(model, rates, plan=wanted, plan_error=error)

    show(ask)


@given(st.lists(st.sampled_from(MODEL.splitlines()), unique=True, max_size=4), limits)
@settings(max_examples=60, suppress_health_check=[HealthCheck.too_slow], deadline=None)
def test_showing_a_check_never_raises(lost: list[str], lines: list[str]) -> None:
    kept = [line for line in MODEL.splitlines() if line not in lost]

    show(lambda: fx.check(fx.read_model_text("\n".join([*kept, *lines]) + "\n")))
