"""What the measured values of a run determine, decided in exact arithmetic.

Everything follows from two null spaces: of the equalities (all fluxes that are possible), and
in its coordinates of the measured rows (what no measurement sees).
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from fluxnet.exact.sparse import NullSpace, SparseRow, null_space
from fluxnet.ground.record import record
from fluxnet.solving.equalities import ExactRows

__all__ = ["Structure", "classify"]


@record
class Structure:
    """What is possible, and what of it the measured values see.

    ``space`` holds the fluxes that meet all equalities; ``unseen``, in its coordinates, the
    directions that no soft measured row changes. ``balanceable`` has one entry a measured row
    (in the order of :attr:`ExactRows.soft`, behind them the exact ones): whether the other
    rows test it. ``determined`` has one a flux.
    """

    exact: ExactRows
    space: NullSpace
    unseen: NullSpace
    balanceable: tuple[bool, ...]
    determined: tuple[bool, ...]

    @property
    def rank(self) -> int:
        """How many of the equalities are independent."""
        return self.exact.columns - self.space.dimension

    @property
    def seen(self) -> int:
        """How many independent directions the soft measured rows see."""
        return self.space.dimension - self.unseen.dimension

    @property
    def dof(self) -> int:
        """Degrees of freedom: soft measured rows more than are needed for what they see."""
        return len(self.exact.soft) - self.seen

    def is_determined(self, row: SparseRow) -> bool:
        """Whether the equalities and the measured rows fix the value of a functional.

        Parameters
        ----------
        row
            {column: coefficient} over the fluxes.
        """
        return not self.unseen.image(self.space.image(row))


def classify(exact: ExactRows) -> Structure:
    """Decide what the equalities leave possible and what the measured rows see.

    Parameters
    ----------
    exact
        The rows of a problem: see :func:`fluxnet.solving.equalities.find_equalities`.
    """
    space = null_space(exact.equal_rows(), exact.columns)
    forms = [space.image(exact.rows[i]) for i in exact.soft]
    unseen = null_space(forms, space.dimension)
    sharp = [e.place for e in exact.equalities if e.is_measured]
    if sharp:
        wider = null_space(exact.equal_rows(measured=False), exact.columns)
        forms = [wider.image(exact.rows[i]) for i in (*exact.soft, *sharp)]
    determined = tuple(not unseen.image(form) for form in space.rows)
    return Structure(exact, space, unseen, _tested(forms), determined)


def _tested(forms: Sequence[SparseRow]) -> tuple[bool, ...]:
    """Which forms take part in a linear dependency: those that the others test."""
    turned: dict[int, dict[int, Fraction]] = {}
    for i, form in enumerate(forms):
        for k, value in form.items():
            turned.setdefault(k, {})[i] = value
    return tuple(bool(row) for row in null_space(list(turned.values()), len(forms)).rows)
