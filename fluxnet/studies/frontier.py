"""The exact trade-off between two quantities: every break point, variant by variant."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction

import numpy as np

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.network.model import Network
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.linear import Programme
from fluxnet.solving.parametric import Extreme, Path, PathEnd, follow
from fluxnet.solving.parametric_proof import Break, prove_path
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import Proof, exact_sums
from fluxnet.solving.unbounded import explain_unbounded
from fluxnet.solving.words import number_words
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.frontier_axis import Axis, read_axis, refuse_same, slope_unit
from fluxnet.studies.frontier_best import find_stretches, tell_stretches
from fluxnet.studies.frontier_cases import common_parts, find_cases, first_that_knows, read_axes
from fluxnet.studies.frontier_notes import shut_others, tell_forced_uptake, tell_sources
from fluxnet.studies.frontier_over import find_moved_limit, read_setting, set_to, with_room
from fluxnet.studies.frontier_result import (
    Curve,
    CurveStatus,
    Frontier,
    FrontierPoint,
    OverKind,
    Setting,
)
from fluxnet.studies.frontier_words import change_words, hold_words, tell_curve, tell_curves
from fluxnet.studies.telling import tell_unbounded

__all__ = ["find_frontier"]

_WITHIN = 2.0


def find_frontier(
    network: Network,
    x: str,
    y: str | None = None,
    *,
    across: Sequence[str] = (),
    least: bool = False,
    over: str | None = None,
    start: float | None = None,
    stop: float | None = None,
    only: Sequence[str] = (),
    progress: Progress = silent,
) -> Frontier:
    """The most (least) y for each x, as break points proven in exact arithmetic.

    Parameters
    ----------
    network
        The unchanged model; it has no errors.
    x, y
        As :func:`fluxnet.studies.frontier_axis.read_axis` reads them. With ``over`` x may
        stand alone: then its best value is followed while the limit or parameter moves.
    across
        Lists of variants such as ``"base | anaerobic"``; of several all combinations.
    least
        The least y for each x.
    over
        A limit's quantity, or a parameter, to be moved from ``start`` to ``stop``. With x and y
        there is one curve at each end of that range, and one in the middle.
    start, stop
        Without ``over``: the part of x that is asked for.
    only
        The carbon sources that may be taken up; all others are shut. Empty: as the model has it.

    Raises
    ------
    MisuseError
        Where a name is unknown, x is y, or a range makes no sense.
    InputError
        Where no combination of variants makes a network.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   ethanol, acetate
    ... exchange  CO2
    ... compartment all
    ...     ferment : glucose -> 2 ethanol + 2 CO2
    ...     acetify : glucose -> 3 acetate
    ... limit glucose <= 10
    ... ''').network
    >>> found = find_frontier(network, "acetate", "ethanol")
    >>> [(p.x, p.y, p.slope_after) for p in found.curves[0].points][0]
    (0.0, 20.0, -0.6666666666666666)
    """
    extreme = Extreme.LEAST if least else Extreme.MOST
    if y is None and over is None:
        raise MisuseError("name two quantities, or one and what is moved: --over LIMIT")
    found, skipped, warnings = find_cases(network, across)
    common = common_parts(found)
    cases = tuple((name, label, shut_others(case, only)) for name, label, case in found)
    setting = None
    if over is not None:
        setting = read_setting(over, first_that_knows(cases, over), start, stop)
    texts = (x,) if y is None else (x, y)
    frame = read_axes(cases, texts)
    if len(frame) > 1:
        refuse_same(*frame)
        if start is not None and stop is not None and start > stop:
            raise MisuseError(f"the range from {start:g} to {stop:g} is empty")
    if setting is not None and len(frame) > 1:
        cases = tuple(
            (variant, f"{label}, {words}" if len(found) > 1 else words, there)
            for variant, label, case in cases
            for value in (setting.start, (setting.start + setting.stop) / 2, setting.stop)
            for there, words in (set_to(case, setting, value),)
        )
        start = stop = None
    curves: list[Curve] = []
    upper = frame[-1]
    lower = frame[0]
    if len(frame) == 1 and setting is not None:
        lower = Axis((), _setting_name(setting), setting.unit)
    below = setting.name if setting is not None and len(frame) == 1 else lower.name
    unit = slope_unit(upper, below, lower.unit)
    for k, (variant, label, case) in enumerate(cases):
        progress("curves", k, len(cases))
        try:
            axes = tuple(read_axis(text, case) for text in texts)
        except MisuseError as fault:
            words = f"{label or variant}: {fault}."
            curves.append(Curve(variant, label or variant, CurveStatus.ABSENT, (), words))
            continue
        if len(axes) == 1 and setting is not None:
            curve = _over(case, axes[0], setting, extreme, unit, lower.name)
        else:
            curve = _trade(case, axes[0], axes[-1], extreme, start, stop, unit)
        curves.append(replace(curve, variant=variant, label=label or variant))
    words = tell_curves(curves, lower.name, upper.name, extreme, " * ".join(common))
    is_choice = setting is None or len(frame) == 1
    stretches = find_stretches(curves, extreme) if is_choice else ()
    notes = [*warnings, tell_sources([case for _, _, case in cases], frame)]
    if setting is None:
        notes.append(tell_forced_uptake(curves, lower, upper, extreme, cases[0][2]))
    return Frontier(
        lower, upper, extreme, setting, tuple(curves), unit, words, skipped, common, stretches,
        tell_stretches(stretches, lower.name, lower.unit), tuple(n for n in notes if n),
    )


def _setting_name(setting: Setting) -> str:
    return f"limit on {setting.name}" if setting.kind is OverKind.LIMIT else setting.name


Range = tuple[float | None, float | None]


def _trade(
    network: Network, x: Axis, y: Axis, extreme: Extreme, start: float | None,
    stop: float | None, unit: str,
) -> Curve:  # fmt: skip
    """One curve of y over x."""
    built = build_problem(network, None, within=_WITHIN)
    problem = open_carriers(built, Aim(Sense.MAXIMISE, x.terms + y.terms))
    along, cost = aim_cost(built, x.aim()), aim_cost(built, y.aim())
    rows, (exact, aim) = exact_sums(built, [x.terms, y.terms])
    path = follow(problem, along, cost, extreme, start, stop)
    if not path.pieces:
        return _without(path, built, problem, x, y, (start, stop))
    proven = prove_path(path, rows, exact, aim, along, cost, start, stop, within=_WITHIN)
    words = tell_curve(proven.breaks, x.name, y.name, y.unit, unit, extreme)
    ends = (
        _end_words(f"the least {x.name}", hold_words(proven.low_holds, problem),
                   proven.breaks[0].x, start, is_end=path.low_places is not None),
        _end_words(f"the most {x.name}", hold_words(proven.high_holds, problem),
                   proven.breaks[-1].x, stop, is_end=path.high_places is not None),
    )  # fmt: skip
    return _told(path, proven.breaks, problem, words, ends, proven.proof)


def _end_words(what: str, held: str, found: float, asked: float | None, *, is_end: bool) -> str:
    """What an end of x is: that of all x there is, or where the range asked for ends."""
    if not is_end:
        return "asked for"
    if asked is not None and abs(found - asked) > 1e-9 * max(1.0, abs(asked)):
        what += f" there is (not {number_words(asked)})"
    return f"{what}: {held}" if held else what


def _told(
    path: Path, breaks: Sequence[Break], problem: Problem, words: str, ends: tuple[str, str],
    proof: Proof,
) -> Curve:  # fmt: skip
    """A curve with what changes at its points in words."""
    points: list[FrontierPoint] = []
    for k, one in enumerate(breaks):
        changes = change_words(one.changes, problem)
        if k == 0:
            changes = tuple(c for c in (ends[0], *changes) if c)
        if k == len(breaks) - 1 and k:
            changes = tuple(c for c in (*changes, ends[1]) if c)
        exact = one.exact
        points.append(FrontierPoint(
            one.x, one.y, one.slope_before, one.slope_after, changes,
            None if exact is None else str(exact.x), None if exact is None else str(exact.y),
        ))  # fmt: skip
    status = CurveStatus.POINT if len(points) == 1 else CurveStatus.TRACED
    return Curve("", "", status, tuple(points), words, proof)


def _without(path: Path, built: Built, problem: Problem, x: Axis, y: Axis, range_: Range) -> Curve:
    """Why there is no curve."""
    if path.end is PathEnd.INFEASIBLE:
        if range_ != (None, None) and Programme(problem).is_feasible():
            ends = " to ".join("any" if end is None else f"{end:g}" for end in range_)
            words = f"No fluxes have {x.name} in the range asked for, {ends}."
        else:
            words = (
                "No fluxes meet all limits: `fluxnet solve MODEL --maximise "
                f"{y.name.split()[0]}` tells which cannot hold together."
            )
        return Curve("", "", CurveStatus.INFEASIBLE, (), words)
    axis = x if path.end is PathEnd.X_ENDLESS else y
    cost = aim_cost(built, axis.aim())
    row = np.append(cost, np.zeros(len(problem.columns) - len(cost)))
    reason = explain_unbounded(problem, row if path.upwards else -row)
    aim = Aim(Sense.MAXIMISE if path.upwards else Sense.MINIMISE, axis.terms)
    words = tell_unbounded(aim, reason, built.network)
    return Curve("", "", CurveStatus.UNBOUNDED, (), words)


def _over(
    network: Network, y: Axis, setting: Setting, extreme: Extreme, unit: str, name: str
) -> Curve:
    """The best y while a limit or a parameter moves."""
    if setting.kind is OverKind.PARAMETER:
        from fluxnet.studies.frontier_sweep import sweep_parameter

        return sweep_parameter(network, y, setting, extreme, unit)
    moved = find_moved_limit(setting.name, network)
    built = build_problem(moved.network, None, within=_WITHIN)
    x = Axis(((Fraction(1), moved.quantity),), name, setting.unit)
    problem = open_carriers(built, Aim(Sense.MAXIMISE, x.terms + y.terms))
    rows, (exact, aim) = exact_sums(built, [x.terms, y.terms])
    problem, along, cost, exact = with_room(
        problem, moved.room, aim_cost(built, x.aim()), aim_cost(built, y.aim()), exact
    )
    range_ = (setting.start, setting.stop)
    path = follow(problem, along, cost, extreme, *range_)
    if not path.pieces:
        return _without(path, built, problem, x, y, range_)
    proven = prove_path(path, rows, exact, aim, along, cost, *range_, within=_WITHIN)
    words = tell_curve(proven.breaks, name, y.name, y.unit, unit, extreme)
    first, last = proven.breaks[0].x, proven.breaks[-1].x
    ends = tuple(
        "" if found == asked else f"nothing is feasible {beyond} it"
        for found, asked, beyond in (
            (first, setting.start, "below"), (last, setting.stop, "above"),
        )
    )  # fmt: skip
    return _told(path, proven.breaks, problem, words, (ends[0], ends[1]), proven.proof)
