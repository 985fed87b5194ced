"""Sums and differences of undetermined fluxes that are themselves determined.

Of all such combinations only those are told that a person can read: of two or three fluxes, in
small whole numbers. They are the shortest dependencies among what each flux leaves unseen,
found in exact arithmetic; of the plainest of them as many are told as are independent.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from math import gcd, lcm

from fluxnet.exact.sparse import NullSpace, SparseRow, null_space
from fluxnet.ground.record import record
from fluxnet.solving.classify import Structure

__all__ = ["Relation", "find_relations"]

_MOST = 12
"""So many relations at most are found."""
_LARGEST = 6
"""A combination with a larger coefficient tells nobody anything."""

_Form = dict[int, int]
_Key = tuple[tuple[int, int], ...]


@record
class Relation:
    """A combination of undetermined fluxes that is determined: pairs (column, coefficient).

    The coefficients are whole numbers without a common factor, the first one positive.
    """

    terms: tuple[tuple[int, int], ...]

    @property
    def effort(self) -> tuple[int, bool, int]:
        """How hard it is to read: its length, whether it is a difference, its numbers."""
        factors = [c for _, c in self.terms]
        return len(factors), min(factors) < 0, sum(map(abs, factors))


def find_relations(structure: Structure) -> tuple[Relation, ...]:
    """Readable combinations of undetermined fluxes that are determined, the plainest first.

    They are independent of one another. Fluxes that the balances alone hold proportional (a
    chain) are told once, by the first of them; combinations that the balances alone hold at
    zero (a branching point) are not told.
    """
    exact = structure.exact
    zeros = [exact.rows[e.place] for e in exact.equalities if not e.value]
    plain = structure.space
    if len(zeros) < len(exact.equalities):
        plain = null_space(zeros, exact.columns)
    found = sorted(_readable(_leaders(structure, plain)), key=lambda relation: relation.effort)
    used = sorted({j for relation in found for j, _ in relation.terms})
    forms = _common(used, plain.rows)
    chosen: list[Relation] = []
    steps: list[tuple[int, _Form]] = []
    for relation in found:
        form: _Form = {}
        for j, c in relation.terms:
            form = _combined(1, form, c, forms[j])
        rest = _reduced(form, steps)
        if rest:
            steps.append((min(rest), rest))
            chosen.append(relation)
            if len(chosen) == _MOST:
                break
    return tuple(chosen)


def _leaders(structure: Structure, plain: NullSpace) -> dict[int, _Form]:
    """What each undetermined flux leaves unseen, over one common denominator.

    Of fluxes that the balances alone hold proportional only the first is kept.
    """
    chains: set[_Key] = set()
    forms: dict[int, SparseRow] = {}
    for j, own in enumerate(structure.space.rows):
        form = structure.unseen.image(own)
        if form and (chain := _direction(_whole(plain.rows[j]))[0]) not in chains:
            chains.add(chain)
            forms[j] = form
    return _common(forms, forms)


def _common(
    columns: Iterable[int], forms: Mapping[int, SparseRow] | Sequence[SparseRow]
) -> dict[int, _Form]:
    """Forms in whole numbers, over one common denominator."""
    wanted = list(columns)
    common = lcm(*(v.denominator for j in wanted for v in forms[j].values()))
    return {
        j: {k: v.numerator * (common // v.denominator) for k, v in forms[j].items()}
        for j in wanted
    }


def _readable(forms: Mapping[int, _Form]) -> Iterator[Relation]:
    """The dependencies of two or three forms whose coefficients are small."""
    columns = list(forms)
    for place, a in enumerate(columns):
        first = forms[a]
        k = min(first)
        parallel: dict[_Key, list[tuple[int, int, int]]] = {}
        for b in columns[place + 1 :]:
            other = forms[b]
            # first[k] b - other[k] a has nothing in coordinate k
            rest = _combined(first[k], other, -other.get(k, 0), first)
            if not rest:
                yield from _small({a: -other[k], b: first[k]})
                continue
            key, size = _direction(rest)
            for c, its_k, its_size in parallel.setdefault(key, []):
                # size (first[k] c - its_k a) - its_size (first[k] b - other[k] a) = 0
                weight = its_size * other.get(k, 0) - size * its_k
                if weight:
                    yield from _small({a: weight, c: size * first[k], b: -its_size * first[k]})
            parallel[key].append((b, other.get(k, 0), size))


def _small(terms: Mapping[int, int]) -> Iterator[Relation]:
    """The relation of these coefficients, where they are small enough to be read."""
    factor = gcd(*terms.values())
    numbers = sorted((j, c // factor) for j, c in terms.items())
    if max(abs(c) for _, c in numbers) <= _LARGEST:
        sign = 1 if numbers[0][1] > 0 else -1
        yield Relation(tuple((j, sign * c) for j, c in numbers))


def _combined(weight: int, form: _Form, other_weight: int, other: _Form) -> _Form:
    """The sum of two forms, each times its weight; empty where it vanishes."""
    total = {i: weight * v for i, v in form.items()}
    for i, v in other.items():
        total[i] = total.get(i, 0) + other_weight * v
    return {i: v for i, v in total.items() if v}


def _reduced(form: _Form, steps: Iterable[tuple[int, _Form]]) -> _Form:
    """What is left of a form when those before it are taken out; empty where it is their sum."""
    for pivot, row in steps:
        if pivot in form:
            form = _combined(row[pivot], form, -form[pivot], row)
            size = gcd(*form.values())
            form = {k: v // size for k, v in form.items()}
    return form


def _whole(row: SparseRow) -> _Form:
    """A row in whole numbers."""
    common = lcm(*(v.denominator for v in row.values()))
    return {k: v.numerator * (common // v.denominator) for k, v in row.items()}


def _direction(form: _Form) -> tuple[_Key, int]:
    """A form without its factor, and the factor."""
    size = gcd(*form.values()) * (1 if form[min(form)] > 0 else -1)
    return tuple(sorted((k, v // size) for k, v in form.items())), size
