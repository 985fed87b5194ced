"""What a closure knows of a run: its rows as releases of species in moles, and relations."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Species

__all__ = ["ClosureRow", "ClosureRows", "RatioRow", "Weights", "balance_unit"]


@record
class ClosureRow:
    """One row of a run.

    ``name`` is the species, ``mu``, or a ratio; ``species`` is None for a growth rate that is
    the sum over several biomass species, and for a ratio. ``released`` is the moles of the
    species that one unit of the row's value releases, negative for uptake. ``place`` is its
    index among the run's measured rates, None where it has no value; ``order`` that among all
    rows. ``spread`` marks a value that no row of the table has: what an uncertain ash content
    takes from a growth rate, a part 0 ± ``spread`` of it.
    """

    name: str
    species: str | None
    direction: Direction | None
    unit: str
    released: Fraction
    place: int | None = None
    order: int = 0
    entry: str | None = None
    spread: float = 0.0

    @property
    def is_measured(self) -> bool:
        """Whether it has a value with an error, or an exact one."""
        return self.place is not None or self.spread > 0


@record
class Weights:
    """Weights of the rows in a sum; of a relation the sum is zero."""

    measured: tuple[Fraction, ...]
    unmeasured: tuple[Fraction, ...]


@record
class RatioRow:
    """A row that is a ratio A / B of two rates; ``over`` and ``below`` are A and B by the others.

    ``row`` is the index, among the measured rows, of the value t in A - r B = t: measured as
    0 ± s B, so that what is left of t is the adjustment of the ratio times B. It is None where
    the ratio was not measured. ``is_told`` is False for what
    ash takes of mu, which is no row of the table.
    """

    name: str
    unit: str
    order: int
    over: Weights
    below: Weights
    value: Fraction | None = None
    row: int | None = None
    is_told: bool = True


@record
class ClosureRows:
    """All rows of a run that closure uses.

    ``ties`` are relations among rows that are no balances: mu is the growth of the biomass,
    A - r B = t. ``left_out`` names rows that closure cannot use, ``aside`` the species whose
    rows were left out on request.
    """

    measured: tuple[ClosureRow, ...]
    unmeasured: tuple[ClosureRow, ...]
    species: tuple[Species, ...]
    ties: tuple[Weights, ...]
    ratios: tuple[RatioRow, ...] = ()
    left_out: tuple[str, ...] = ()
    aside: tuple[str, ...] = ()


def balance_unit(unit: str, name: str) -> str:
    """The unit of a balance, from that of the rates.

    Examples
    --------
    >>> balance_unit("mmol/g/h", "carbon"), balance_unit("C-mol/C-mol/h", "electrons")
    ('C-mmol/g/h', 'e-mol/C-mol/h')
    """
    amount, slash, per = unit.partition("/")
    prefix = {"carbon": "C-", "electrons": "e-"}.get(name, "")
    return prefix + amount.strip().removeprefix("C-") + slash + per
