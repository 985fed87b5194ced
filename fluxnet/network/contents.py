"""What one mole of a species brings into a balance, and the balances that a line must keep."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction

from fluxnet.chemistry.elements import VALENCE
from fluxnet.chemistry.formula import Formula, degree_of_reduction
from fluxnet.exact.linear import kernel
from fluxnet.ground.record import record
from fluxnet.network.model import CargoKind, Species

__all__ = [
    "CHARGE", "ELECTRONS", "NOTHING", "PHOSPHATE", "Content", "Functional", "content_of",
    "content_of_formula", "in_order_of_balances", "without_free",
]  # fmt: skip

ELECTRONS = "electrons"
CHARGE = "charge"
_FIRST = ("C", "N", "S", "P")
_LAST = ("O", CHARGE, ELECTRONS)
_ZERO = Fraction(0)


@record
class Content:
    """What one mole of a species holds.

    ``amounts`` gives moles by element, and beside them ``electrons`` (the degree of
    reduction) and ``charge``; zeros are left out. ``half_units`` gives half a unit of the last
    written decimal by element. ``without_reference`` are elements whose electrons cannot be
    counted; then ``electrons`` is missing and means nothing.
    """

    amounts: Mapping[str, Fraction]
    half_units: Mapping[str, Fraction]
    without_reference: tuple[str, ...] = ()


NOTHING = Content({}, {})
PHOSPHATE = Content({"P": Fraction(1), "O": Fraction(4), "H": Fraction(3)}, {})
"""Phosphate as the acid; it holds no electrons, being its own reference."""


def content_of_formula(formula: Formula) -> Content:
    """The content of one mole of a composition.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> content = content_of_formula(read_formula("C2H3O2 charge -1"))
    >>> {name: int(amount) for name, amount in content.amounts.items()}
    {'C': 2, 'H': 3, 'O': 2, 'charge': -1, 'electrons': 8}
    """
    amounts = dict(formula.counts)
    if formula.charge:
        amounts[CHARGE] = formula.charge
    electrons = degree_of_reduction(formula)
    if electrons:
        amounts[ELECTRONS] = electrons
    return Content(
        amounts,
        dict(formula.half_units),
        tuple(e for e in formula.elements if e not in VALENCE),
    )


def content_of(species: Species) -> Content | None:
    """The content of one mole of a species, of a carrier its cargo; None where none is known.

    Examples
    --------
    >>> from fluxnet.network.model import Cargo, Role
    >>> nadh = Species("NADH", Role.CARRIER, cargo=Cargo(CargoKind.ELECTRONS, Fraction(2)))
    >>> content_of(nadh).amounts
    {'electrons': Fraction(2, 1)}
    >>> content_of(Species("pool", Role.INSIDE)) is None
    True
    """
    if species.cargo is not None:
        if species.cargo.kind is CargoKind.ENERGY:
            return NOTHING
        if species.cargo.kind is CargoKind.ELECTRONS:
            return Content({ELECTRONS: species.cargo.electrons}, {})
        return content_of_formula(species.cargo.formula)
    return None if species.formula is None else content_of_formula(species.formula)


@record
class Functional:
    """One balance: a weighted sum of a content's amounts, named after its leading amount.

    Without free species each is one amount alone. A free species makes a balance one in which
    it does not count: with free glutamate the carbon that comes and goes with nitrogen is
    taken off.
    """

    name: str
    weights: tuple[tuple[str, Fraction], ...]

    def of(self, content: Content) -> Fraction:
        """Its value for one mole of a content."""
        if len(self.weights) == 1:
            return content.amounts.get(self.name, _ZERO)
        return sum((w * content.amounts.get(k, _ZERO) for k, w in self.weights), _ZERO)

    def half_unit(self, content: Content) -> Fraction:
        """The most by which the rounding of the formula's counts can move its value."""
        if not content.half_units:
            return _ZERO
        weights = dict(self.weights)
        electrons = weights.get(ELECTRONS, _ZERO)
        return sum(
            (
                abs(weights.get(element, _ZERO) + electrons * VALENCE.get(element, 0)) * half
                for element, half in content.half_units.items()
            ),
            _ZERO,
        )


def in_order_of_balances(amounts: Iterable[str]) -> list[str]:
    """Carbon, nitrogen, sulfur, phosphorus, the other elements, water, charge, electrons.

    Examples
    --------
    >>> in_order_of_balances({"electrons", "O", "Fe", "N", "C"})
    ['C', 'N', 'Fe', 'O', 'electrons']
    """
    found = set(amounts)
    middle = sorted(found.difference(_FIRST, _LAST))
    return [a for a in (*_FIRST, *middle, *_LAST) if a in found]


def without_free(amounts: Sequence[str], free: Iterable[Content]) -> tuple[Functional, ...]:
    """The balances over some amounts in which none of the free species counts.

    ``amounts`` are in the order of balances. A free species that holds one of them alone takes
    that balance away; another joins balances, the rarest amount of it being taken out.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> ammonia = content_of_formula(read_formula("NH3"))
    >>> [f.name for f in without_free(["C", "N", "electrons"], [ammonia])]
    ['C', 'electrons']
    """
    vectors = [[content.amounts.get(a, _ZERO) for a in amounts] for content in free]
    vectors = [v for v in vectors if any(v)]
    lost = {
        amounts[next(j for j, x in enumerate(v) if x)]
        for v in vectors
        if sum(1 for x in v if x) == 1
    }
    kept = [a for a in amounts if a not in lost]
    place = [amounts.index(a) for a in kept]
    vectors = [v for v in ([vector[j] for j in place] for vector in vectors) if any(v)]
    if not vectors:
        return tuple(Functional(a, ((a, Fraction(1)),)) for a in kept)
    rare_first = [a for a in kept if a not in ("C", *_LAST)][::-1]
    order = rare_first + [a for a in kept if a not in rare_first]
    turned = [[v[kept.index(a)] for a in order] for v in vectors]
    found: list[Functional] = []
    for solution in kernel(turned, len(order)):
        weights = tuple((a, w) for a, w in zip(order, solution, strict=True) if w)
        found.append(Functional(weights[-1][0], weights))
    return tuple(sorted(found, key=lambda f: kept.index(f.name)))
