"""What the measured values of a run determine, decided in exact arithmetic.

Everything follows from two null spaces: of the equalities (all fluxes that are possible), and
in its coordinates of the measured rows (what no measurement sees).
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import gcd, lcm

from fluxnet.exact.sparse import NullSpace, SparseRow, null_space
from fluxnet.ground.record import record
from fluxnet.solving.equalities import ExactRows

__all__ = ["Relation", "Structure", "classify", "find_relations"]

_LONGEST = 4
"""Relations of more terms than this tell nobody anything."""

_Key = tuple[tuple[int, Fraction], ...]


@record
class Relation:
    """A combination of undetermined fluxes that is determined: pairs (column, coefficient)."""

    terms: tuple[tuple[int, Fraction], ...]


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


def find_relations(structure: Structure) -> tuple[Relation, ...]:
    """Short sums of undetermined fluxes that are determined, the plainest first.

    Fluxes that the balances alone hold proportional (a chain) are told once, by the first of
    them; sums that the balances alone hold at zero (a branching point) are not told. Of the
    pairs within a group of fluxes that move together the plainest that link them are told.
    """
    exact = structure.exact
    zeros = [exact.rows[e.place] for e in exact.equalities if not e.value]
    plain = null_space(zeros, exact.columns)
    chains: set[_Key] = set()
    forms: dict[int, dict[int, Fraction]] = {}
    together: dict[_Key, list[int]] = {}
    for j, own in enumerate(structure.space.rows):
        form = structure.unseen.image(own)
        chain = _direction(plain.rows[j])
        if form and chain not in chains:
            chains.add(chain)
            forms[j] = form
            together.setdefault(_direction(form), []).append(j)
    found: list[Relation] = []
    for members in together.values():
        found += _plainest_pairs(members, forms, plain)
    leaders = [members[0] for members in together.values()]
    for terms in _dependencies(leaders, forms):
        if len(terms) <= _LONGEST and plain.image(terms):
            found.append(_plainest(terms, together, forms, plain))
    return tuple(sorted(found, key=_effort))


def _plainest_pairs(
    members: Sequence[int], forms: dict[int, dict[int, Fraction]], plain: NullSpace
) -> list[Relation]:
    """The plainest pairs that link fluxes which move together, as few as link them all."""
    pairs: list[Relation] = []
    for place, a in enumerate(members):
        for b in members[place + 1 :]:
            k = min(forms[a])
            terms = {a: -forms[b][k] / forms[a][k], b: Fraction(1)}
            if plain.image(terms):
                pairs.append(_relation(terms))
    group = {j: j for j in members}
    chosen: list[Relation] = []
    for pair in sorted(pairs, key=_effort):
        a, b = (group[j] for j, _ in pair.terms)
        if a != b:
            chosen.append(pair)
            group = {j: a if g == b else g for j, g in group.items()}
    return chosen


def _plainest(
    terms: dict[int, Fraction],
    together: dict[_Key, list[int]],
    forms: dict[int, dict[int, Fraction]],
    plain: NullSpace,
) -> Relation:
    """The relation with each flux replaced by the one moving with it that reads most plainly."""
    best = _relation(terms)
    for leader in list(terms):
        k = min(forms[leader])
        for other in together[_direction(forms[leader])][1:]:
            trial = {j: c for j, c in best.terms if j != leader}
            factor = dict(best.terms).get(leader)
            if factor is None:
                continue
            trial[other] = factor * forms[leader][k] / forms[other][k]
            if plain.image(trial) and _effort(_relation(trial)) < _effort(best):
                best = _relation(trial)
                break
    return best


def _effort(relation: Relation) -> tuple[int, bool, Fraction]:
    """How hard a relation is to read: its length, whether it is a difference, its numbers."""
    factors = [c for _, c in relation.terms]
    return len(factors), min(factors) < 0, sum((abs(c) for c in factors), Fraction(0))


def _direction(form: SparseRow) -> _Key:
    """A form up to its factor."""
    pairs = sorted(form.items())
    return tuple((k, value / pairs[0][1]) for k, value in pairs)


def _dependencies(
    members: Sequence[int], forms: dict[int, dict[int, Fraction]]
) -> list[dict[int, Fraction]]:
    """A basis of the combinations of forms that vanish, as {column: coefficient}."""
    turned: dict[int, dict[int, Fraction]] = {}
    for place, column in enumerate(members):
        for k, value in forms[column].items():
            turned.setdefault(k, {})[place] = value
    space = null_space(list(turned.values()), len(members))
    return [
        {members[p]: row[k] for p, row in enumerate(space.rows) if k in row}
        for k in range(space.dimension)
    ]


def _relation(terms: dict[int, Fraction]) -> Relation:
    """The combination in whole numbers without a common factor, the first one positive."""
    denominator = lcm(*(c.denominator for c in terms.values()))
    numbers = {j: int(c * denominator) for j, c in sorted(terms.items())}
    factor = Fraction(1, gcd(*numbers.values()))
    if next(iter(numbers.values())) < 0:
        factor = -factor
    return Relation(tuple((j, n * factor) for j, n in numbers.items()))
