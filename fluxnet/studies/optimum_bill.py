"""The bill of an optimum: what the limits supply is worth exactly what the aim costs."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.exact.programme import to_fraction
from fluxnet.solving.problem import Problem, Row
from fluxnet.solving.proof import Proven
from fluxnet.solving.words import number_words, quantity_words
from fluxnet.studies.aims import Aim
from fluxnet.studies.bill import Bill, BillLine, BillSide
from fluxnet.studies.optimum_proof import sign_of
from fluxnet.studies.units import rate_unit, sum_unit

__all__ = ["make_optimum_bill"]


def make_optimum_bill(
    problem: Problem, proven: Proven, aim: Aim, unit: str, within: float
) -> Bill | None:
    """Each limit's amount times its price, on the side where it stands; the aim on the other.

    By duality the optimum is the sum of bound times price over all limits that hold it. What
    helps a maximum is supply, what it has to bear is demand, and so is the aim itself; of a
    minimum the aim is the supply. Sums are of exact fractions, and rounded last.

    Returns
    -------
    Bill or None
        None without a proof.
    """
    if not proven.proof.verified:
        return None
    sign, solution = sign_of(aim.sense), proven.solution
    aim_unit = sum_unit(aim.terms, unit)
    lines: list[BillLine] = []
    sums = {side: Fraction(0) for side in BillSide}

    def add(name: str, amount: Fraction, own_unit: str, price: Fraction, helps: bool) -> None:
        side = BillSide.SUPPLY if helps else BillSide.DEMAND
        worth = abs(amount * price)
        sums[side] += worth
        lines.append(
            BillLine(side, name, float(abs(amount)), own_unit, float(abs(price)), float(worth))
        )

    count = len(problem.columns)
    prices = (*solution.gains, *solution.prices)
    for k in (*range(count, len(prices)), *range(count)):
        if not prices[k]:
            continue
        programme = proven.programme
        end = programme.low[k] if prices[k] > 0 else programme.high[k]
        bound = to_fraction(end)
        if not bound:
            continue
        if k < count:
            name = f"flux {problem.columns[k]} at {number_words(bound)}"
            own = unit
        else:
            row = problem.rows[k - count]
            name = _row_name(row, float(bound), within)
            own = rate_unit(row.quantity, unit) if row.quantity is not None else unit
        add(name, bound, own, prices[k], bound * prices[k] < 0)
    own_name = str(aim).removeprefix(f"{aim.sense.value} ")
    if solution.objective:
        own = "" if aim_unit.startswith("(") else aim_unit  # the name tells the terms
        add(own_name, solution.objective, own, Fraction(1), solution.objective > 0)
    lines.sort(key=lambda line: (line.side is BillSide.SUPPLY, line.name != own_name, -line.worth))
    supply, demand = sums[BillSide.SUPPLY], sums[BillSide.DEMAND]
    return Bill(
        unit=aim_unit,
        lines=tuple(lines),
        supply=float(supply),
        demand=float(demand),
        shortfall=float(demand - supply),
        words=_words(sign, float(solution.objective)),
        verified=supply == demand,
    )


def _row_name(row: Row, bound: float, within: float) -> str:
    """A limit as it is written; of a measured value the end of its reach that counts."""
    if not row.sd or row.value is None or row.ratio is not None or row.quantity is None:
        return row.name
    name = quantity_words(row.quantity)
    if bound == row.value:
        return f"{name}, as measured"
    return f"{name}, {row.value:.4g} {'-' if bound < row.value else '+'} {within:g} sd"


def _words(sign: int, objective: float) -> str:
    if not objective:
        return "What the limits supply and what they ask for are worth the same; the aim is 0."
    if sign < 0:
        return "What the limits supply is worth exactly what the aim costs."
    return "What the limits ask for costs exactly what the aim gives."
