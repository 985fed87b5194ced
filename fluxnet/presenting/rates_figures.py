"""Figures of a cultivation: specific rates over time, gas rates, carbon used and found."""

from __future__ import annotations

import re
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.result import Course, CultivationRates
from fluxnet.presenting.figures import look_of, new_figure, refuse_figure, styled, write_figure
from fluxnet.studies.rates import FoundRates

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_rates", "figure_paths"]

Array = NDArray[np.float64]

_GAS = ("OUR", "CER")
_MOST_MARKS = 60
_BAND = "Bands: one standard deviation, of errors that all times share as well."


def figure_paths(found: FoundRates, folder: Path) -> tuple[Path, ...]:
    """The files that the figures of all cultivations become."""
    return tuple(
        folder / f"{_plain(one.name)}-{kind}.svg" for one in found.found for kind in _kinds(one)
    )


def draw_rates(found: FoundRates, folder: Path, *, force: bool = False) -> tuple[Path, ...]:
    """Draw every figure into a folder.

    Raises
    ------
    MisuseError
        Where a file cannot be written (:func:`fluxnet.presenting.figures.refuse_figure`).
    """
    paths = figure_paths(found, folder)
    for path in paths:
        refuse_figure(path, force=force)
    with styled():
        for one in found.found:
            for kind in _kinds(one):
                path = folder / f"{_plain(one.name)}-{kind}.svg"
                if kind == "carbon":
                    _draw_carbon(one, path, force)
                else:
                    _draw_courses(one, kind, path, force)
    return paths


def _plain(name: str) -> str:
    return re.sub(r"[^\w.-]+", "-", name).strip("-") or "cultivation"


def _kinds(one: CultivationRates) -> tuple[str, ...]:
    kinds = [kind for kind in ("rates", "gas") if _courses(one, kind)]
    return (*kinds, *(["carbon"] if any(a.title == "carbon" for a in one.accounts) else []))


def _courses(one: CultivationRates, kind: str) -> list[Course]:
    wanted = [c for c in one.courses if c.unit == "mmol/g/h" and kind == "rates"]
    return wanted or [c for c in one.courses if c.name in _GAS and kind == "gas"]


def _draw_courses(one: CultivationRates, kind: str, path: Path, force: bool) -> None:
    courses = _courses(one, kind)
    unit = courses[0].unit
    title = f"{one.name}: " + ("specific rates" if kind == "rates" else "gas rates")
    told = [
        f"{c.name} from {c.value[0]:.3g} to {c.value[-1]:.3g} {unit}"
        for c in courses
        if c.time.size
    ]
    finding = f"Over {courses[0].time[-1]:.3g} h: {', '.join(told)}."
    foot = f"{_BAND} Positive: out of the cells." if kind == "rates" else _BAND
    figure, axes = new_figure(title, finding, foot, 0.14)
    for k, course in enumerate(courses):
        _line(axes, k, course.name, course.time, course.value, course.sd)
    if kind == "rates":
        axes.axhline(0.0, color="#888888", linewidth=0.8)
    _finish(axes, f"rate [{unit}]")
    write_figure(figure, path, title, finding, force=force)


def _draw_carbon(one: CultivationRates, path: Path, force: bool) -> None:
    account = next(a for a in one.accounts if a.title == "carbon")
    used, found = float(account.expected[-1]), float(account.found[-1])
    title = f"{one.name}: carbon used and found"
    share = f" ({100 * found / used:.1f} %)" if used > 0 else ""
    finding = f"{used:.4g} C-mmol were used, {found:.4g} found again{share}."
    figure, axes = new_figure(title, finding, f"{_BAND} It is that of the difference.", 0.14)
    none: Array = np.zeros(account.time.size)
    _line(axes, 0, "used", account.time, account.expected, none)
    _line(axes, 1, "found", account.time, account.found, account.expected_sd)
    made = [x for x in account.lines if x.amount[-1] > 0]
    for k, line in enumerate(made, start=2):
        _line(axes, k, line.name, account.time, line.amount, none)
    _finish(axes, "carbon [C-mmol]")
    write_figure(figure, path, title, finding, force=force)


def _line(axes: Axes, place: int, name: str, time: Array, value: Array, sd: Array) -> None:
    look = look_of(place)
    axes.plot(
        time, value, color=look.colour, linestyle=look.dash, linewidth=1.6, label=name,
        marker=look.marker, markersize=4, markevery=max(1, time.size // _MOST_MARKS * 6 + 5),
    )  # fmt: skip
    if sd.any():
        axes.fill_between(time, value - sd, value + sd, color=look.colour, alpha=0.2, linewidth=0)


def _finish(axes: Axes, label: str) -> None:
    axes.set_xlabel("time since inoculation [h]")
    axes.set_ylabel(label)
    axes.legend(loc="center left", bbox_to_anchor=(1.01, 0.5), frameon=False)
