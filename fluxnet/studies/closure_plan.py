"""What one closure computes, for all runs with the same rows: balances, redundancy, names."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.formula import Formula, degree_of_reduction
from fluxnet.ground.record import record
from fluxnet.network.contents import (
    CHARGE,
    ELECTRONS,
    Content,
    Functional,
    content_of_formula,
    in_order_of_balances,
    without_free,
)
from fluxnet.network.model import Direction, Network
from fluxnet.studies.closure_batch import ClosureMatrices
from fluxnet.studies.closure_result import World
from fluxnet.studies.closure_rows import (
    ClosureRow,
    ClosureRows,
    RatioRow,
    Weights,
    balance_unit,
)
from fluxnet.studies.closure_structure import Redundancy, find_redundancy
from fluxnet.studies.closure_world import (
    NitrogenSource,
    describe_world,
    free_formulas,
    identity,
)

__all__ = ["BalanceSystem", "ClosurePlan", "PlannedBalance", "plan_closure"]

_NAMES = {"C": "carbon", "N": "nitrogen", "P": "phosphorus", "S": "sulfur"}
_SEEN_NOT = ("H", "O", CHARGE)


@record
class PlannedBalance:
    """A balance that is shown: its name, unit, and the unmeasured species that take part."""

    name: str
    unit: str
    missing: tuple[str, ...]


@record
class BalanceSystem:
    """The balances of a run as sums over its rows: ``measured`` A_m, ``unmeasured`` A_u.

    The first rows are the balances of ``functionals``, behind them stand relations that are no
    balances. ``amounts`` is all that any species with a row, or free, holds; ``taken`` are the
    identities of those with a row and of the free ones. ``shift`` is what the electron balance
    adds for each nitrogen.
    """

    functionals: tuple[Functional, ...]
    amounts: tuple[str, ...]
    shift: Fraction
    taken: tuple[str, ...]
    measured: tuple[tuple[Fraction, ...], ...]
    unmeasured: tuple[tuple[Fraction, ...], ...]

    def of_formula(self, formula: Formula) -> tuple[Fraction, ...] | None:
        """What one mole of a compound releases into each row.

        None where no balance has a place for one of its elements.
        """
        content = content_of_formula(formula)
        others = set(content.amounts).difference(self.amounts, _SEEN_NOT)
        if others - {ELECTRONS} or content.without_reference:
            return None
        nitrogen = content.amounts.get("N", Fraction(0))
        released = tuple(
            f.of(content) + (self.shift * nitrogen if f.name == ELECTRONS else 0)
            for f in self.functionals
        )
        return (*released, *(Fraction(0),) * (len(self.measured) - len(released)))


@record
class ClosurePlan:
    """The exact structure of a closure and the matrices made of it.

    Values are in the order of ``measured``, calculated ones in that of ``unmeasured``.
    ``known`` tells for each ratio whether both its rates are measured or calculable.
    """

    measured: tuple[ClosureRow, ...]
    unmeasured: tuple[ClosureRow, ...]
    ratios: tuple[RatioRow, ...]
    known: tuple[bool, ...]
    balances: tuple[PlannedBalance, ...]
    redundancy: Redundancy
    matrices: ClosureMatrices
    world: World
    reference: str
    notes: tuple[str, ...]
    system: BalanceSystem


def plan_closure(
    rows: ClosureRows,
    exact: Sequence[bool],
    unit: str,
    source: NitrogenSource,
    network: Network | None = None,
) -> ClosurePlan:
    """Plan the closure of runs that have these rows.

    Parameters
    ----------
    rows
        The rows of a run; see :func:`fluxnet.studies.closure_collect.collect_rows`.
    exact
        For each measured row whether its value is exact.
    unit
        The unit of the run.
    source
        The nitrogen source: free where it has no row, and the reference of the electrons.
    """
    species = rows.species
    free = free_formulas(species, source)
    contents = [_content(s.formula) for s in species]
    free_contents = [_content(f) for f in free.values()]
    unseen = sorted({e for c in contents for e in c.without_reference})
    amounts = _amounts(contents + free_contents, counts_electrons=not unseen)
    shift, reference = _reference(source, source.name in free)
    functionals = without_free(amounts, free_contents)
    names = [_NAMES.get(f.name, f.name) for f in functionals]
    by_name = {s.name: c for s, c in zip(species, contents, strict=True)}
    measured_rows: list[tuple[Fraction, ...]] = []
    unmeasured_rows: list[tuple[Fraction, ...]] = []
    for functional in functionals:
        extra = shift if functional.name == ELECTRONS and "N" in amounts else Fraction(0)
        value = {
            name: functional.of(c) + extra * c.amounts.get("N", Fraction(0))
            for name, c in by_name.items()
        }
        measured_rows.append(_over(rows.measured, value))
        unmeasured_rows.append(_over(rows.unmeasured, value))
    shown = _in_order_shown(names)
    tied_measured = [tie.measured for tie in rows.ties]
    tied_unmeasured = [tie.unmeasured for tie in rows.ties]
    system = BalanceSystem(
        functionals, tuple(amounts), shift if "N" in amounts else Fraction(0),
        tuple(identity(s.name, s.entry) for s in species)
        + tuple(source.entry if name == source.name else identity(name) for name in free),
        (*measured_rows, *tied_measured), (*unmeasured_rows, *tied_unmeasured),
    )  # fmt: skip
    redundancy = find_redundancy(system.measured, system.unmeasured, exact)
    width = len(rows.measured)
    over = [_by_measured(ratio.over, redundancy.weights) for ratio in rows.ratios]
    below = [_by_measured(ratio.below, redundancy.weights) for ratio in rows.ratios]
    matrices = ClosureMatrices(
        redundancy=_floats(redundancy.rows, width, scaled=True),
        calculated=_floats([w or (Fraction(0),) * width for w in redundancy.weights], width),
        contents=_floats([measured_rows[i] for i in shown], width),
        inward=np.array([row.direction is Direction.IN for row in rows.measured], dtype=np.bool_),
        balanceable=np.array(redundancy.balanceable, dtype=np.bool_),
        exact=np.array(exact, dtype=np.bool_),
        over=_floats([row or (Fraction(0),) * width for row in over], width),
        below=_floats([row or (Fraction(0),) * width for row in below], width),
    )
    balances = tuple(
        PlannedBalance(
            names[i],
            balance_unit(unit, names[i]),
            tuple(
                row.name
                for row, content in zip(rows.unmeasured, unmeasured_rows[i], strict=True)
                if content
            ),
        )
        for i in shown
    )
    notes = _notes(rows, source, unseen, is_free=source.name in free)
    return ClosurePlan(
        rows.measured, rows.unmeasured, rows.ratios,
        tuple(a is not None and b is not None for a, b in zip(over, below, strict=True)),
        balances, redundancy, matrices,
        describe_world(species, free, source, network, rows.aside), reference, notes, system,
    )  # fmt: skip


def _by_measured(
    weights: Weights, unmeasured: Sequence[tuple[Fraction, ...] | None]
) -> tuple[Fraction, ...] | None:
    """A sum over the rows as one over measured values; None where these do not fix it."""
    total = list(weights.measured)
    for weight, known in zip(weights.unmeasured, unmeasured, strict=True):
        if weight and known is None:
            return None
        if weight and known is not None:
            total = [t + weight * k for t, k in zip(total, known, strict=True)]
    return tuple(total)


def _notes(
    rows: ClosureRows, source: NitrogenSource, unseen: Sequence[str], *, is_free: bool
) -> tuple[str, ...]:
    """What the reader should know of how the balances were made."""
    notes = [
        f"electrons are not balanced: {element} has no reference state" for element in unseen
    ]
    if is_free and source.formula.count("C"):
        notes.append(
            f"{source.name} brings carbon with its nitrogen: the carbon balance is made without it"
        )
    formulas = {s.name: s.formula for s in rows.species}
    for row in (*rows.measured, *rows.unmeasured):
        formula = formulas.get(row.species or "")
        if not is_free or row.direction is not Direction.IN or formula is None:
            continue
        if formula.count("N") and not formula.count("C"):
            notes.append(
                f"{row.name} is taken up while {source.name} is free: where {row.name} is the "
                f"nitrogen source, name it (--nitrogen {row.name}), and nitrogen is balanced"
            )
    return tuple(notes)


def _content(formula: Formula | None) -> Content:
    return Content({}, {}) if formula is None else content_of_formula(formula)


def _amounts(contents: Sequence[Content], *, counts_electrons: bool) -> list[str]:
    """The amounts that are balanced: water and protons are free, so H, O and charge are not."""
    found = {a for content in contents for a in content.amounts if a not in _SEEN_NOT}
    if not counts_electrons:
        found.discard(ELECTRONS)
    return in_order_of_balances(found)


def _reference(source: NitrogenSource, free: bool) -> tuple[Fraction, str]:
    """The electrons per nitrogen to add so that the source holds none, and its name.

    A source that holds carbon is its own reference only where it is free (its carbon then
    goes with its nitrogen); with a row electrons are counted against ammonia.
    """
    electrons = degree_of_reduction(source.formula)
    if free:
        return Fraction(0), source.name  # the balances are made without it
    if source.formula.count("C") or electrons is None:
        return Fraction(0), "ammonia"
    return -electrons / source.formula.count("N"), source.name


def _over(rows: Sequence[ClosureRow], value: Mapping[str, Fraction]) -> tuple[Fraction, ...]:
    """The content that one unit of each row releases."""
    return tuple(
        row.released * value[row.species] if row.species is not None else Fraction(0)
        for row in rows
    )


def _in_order_shown(names: Sequence[str]) -> list[int]:
    """Carbon, nitrogen, electrons, then the others in their order."""
    first = ("carbon", "nitrogen", ELECTRONS)
    order = [names.index(n) for n in first if n in names]
    return order + [i for i, n in enumerate(names) if n not in first]


def _floats(
    rows: Sequence[Sequence[Fraction]], width: int, *, scaled: bool = False
) -> NDArray[np.float64]:
    """Rows as floats; scaled to a largest entry of 1 where only their space matters."""
    array = np.zeros((len(rows), width))
    for i, row in enumerate(rows):
        largest = max((abs(x) for x in row), default=Fraction(1)) if scaled else Fraction(1)
        array[i] = [float(x / (largest or 1)) for x in row]
    return array

