"""Where the yield goes: from the electron-limited ceiling down to what can be reached.

Each step is one linear programme more, with the demands of all steps above it and its own. So
a step is what its demand costs once those above are met; in another order the steps would
differ, their sum would not. The numbers are fractions and add up exactly.
"""

from __future__ import annotations

from enum import Enum
from fractions import Fraction

from fluxnet.ground.record import record

__all__ = ["Staircase", "Step", "StepKind", "make_staircase"]


class StepKind(Enum):
    """What a step adds, in the order of the staircase."""

    EXCHANGE = "what may be exchanged"
    ROUTES = "the reactions at hand"
    ENERGY = "energy of the pathway"
    OXYGEN = "oxygen"
    LIMITS = "other limits"
    MAINTENANCE = "maintenance"
    GROWTH = "growth"
    BY_PRODUCTS = "by-products"
    UNEXPLAINED = "not explained"


@record
class Step:
    """What one demand costs, per mole of substrate.

    ``left`` is the yield after it [mol/mol]; ``lost`` what it takes, in moles of product,
    ``carbon`` in C-mol per C-mol of substrate (None where either holds none), ``electrons`` in
    electrons of the product per mole of substrate.
    """

    kind: StepKind
    words: str
    left: Fraction
    lost: Fraction
    carbon: Fraction | None
    electrons: Fraction


@record
class Staircase:
    """From ``ceiling`` to ``reached`` [mol/mol], both with ``electrons`` a mole of product.

    ``carbon`` is the carbon of a mole of product per carbon of a mole of substrate.
    """

    ceiling: Fraction
    reached: Fraction
    electrons: Fraction
    carbon: Fraction | None
    steps: tuple[Step, ...]

    @property
    def adds_up(self) -> bool:
        """Whether the ceiling less all steps is exactly what is reached."""
        return self.ceiling - sum(s.lost for s in self.steps) == self.reached


def make_staircase(
    ceiling: Fraction,
    electrons: Fraction,
    carbon: Fraction | None,
    levels: tuple[tuple[StepKind, str, Fraction], ...],
) -> Staircase:
    """The staircase through some levels.

    Parameters
    ----------
    ceiling
        The electron-limited yield [mol/mol].
    electrons
        Of a mole of product.
    carbon
        Of a mole of product per carbon of a mole of substrate.
    levels
        What each step is, in words too, and the yield after it [mol/mol].

    Examples
    --------
    >>> stairs = make_staircase(Fraction(2), Fraction(12), Fraction(1, 3), (
    ...     (StepKind.ENERGY, "ATP", Fraction(3, 2)), (StepKind.GROWTH, "", Fraction(4, 3))))
    >>> [str(step.lost) for step in stairs.steps], str(stairs.reached), stairs.adds_up
    (['1/2', '1/6'], '4/3', True)
    """
    steps: list[Step] = []
    before = ceiling
    for kind, words, left in levels:
        lost = before - left
        per_carbon = None if carbon is None else lost * carbon
        steps.append(Step(kind, words, left, lost, per_carbon, lost * electrons))
        before = left
    return Staircase(ceiling, before, electrons, carbon, tuple(steps))
