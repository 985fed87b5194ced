"""Why no composition exists: irreducible sets of reactions that contradict one another."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from enum import Enum
from fractions import Fraction

from fluxnet.checks.composition_rows import Equation
from fluxnet.checks.composition_search import Determined, circuit, is_possible, shrink
from fluxnet.exact.basic import find_nonnegative, largest
from fluxnet.exact.linear import rank, solve
from fluxnet.ground.record import record
from fluxnet.network.contents import ELECTRONS, Functional
from fluxnet.network.model import Reaction

__all__ = ["Balance", "Contradiction", "Reason", "find_contradictions"]

_ZERO = Fraction(0)


class Reason(Enum):
    """Why no composition exists."""

    FAILS = "a balance fails whatever the species hold"
    NEGATIVE = "a count of atoms would be negative"
    EMPTY = "a species would hold nothing"


@record
class Contradiction:
    """Reactions that together rule out every composition; none of them can be left out.

    ``species`` are those without a formula in them, ``balance`` the element or ``electrons``.
    Where a balance fails ``weights`` are multiples of the reactions in whose sum every such
    species cancels, though ``gap`` of the balance is left. ``reason`` NEGATIVE and EMPTY are
    about the first of the species.
    """

    reason: Reason
    reactions: tuple[Reaction, ...]
    species: tuple[str, ...]
    balance: str = ""
    weights: tuple[Fraction, ...] = ()
    gap: Fraction = _ZERO


@record
class Balance:
    """One balance with its equations and what they determine."""

    functional: Functional
    equations: tuple[Equation, ...]
    found: Determined

    @property
    def counts(self) -> bool:
        """Whether its contents are counts of atoms, which cannot be negative."""
        return self.functional.name != ELECTRONS and len(self.functional.weights) == 1

    def forbids(self, members: Iterable[int]) -> bool:
        """Whether no contents, none of them negative, meet these equations."""
        return not is_possible(self.equations, members, counts=True)


    def with_origins(self, members: Iterable[int]) -> set[int]:
        """Equations, and those that the values in them follow from."""
        chosen = set(members)
        names = {n for k in chosen for n in self.equations[k].factors}
        return chosen.union(*(self.found.origins.get(n, ()) for n in names))

    def about(self, name: str) -> set[str]:
        """The reactions on which the content of a species depends, or more."""
        found = self.found
        members = found.origins.get(name)
        chosen = self.with_origins(found.open) if members is None else members
        return {self.equations[k].reaction.name for k in chosen}


def find_contradictions(
    balances: Sequence[Balance], unknown: Sequence[str]
) -> tuple[Contradiction, ...]:
    """Irreducible contradictions that have no reaction in common, the smallest first.

    Each cause is so told once: one wrong coefficient breaks several balances.
    """
    found = [c for b in balances for c in (*_failing(b), *_negative(b))]
    found = [_emptied(c, balances) for c in found] or list(_empty(balances, unknown))
    kept: list[Contradiction] = []
    taken: set[str] = set()
    for one in sorted(found, key=lambda c: len(c.reactions)):
        names = {r.name for r in one.reactions}
        if not names & taken:
            kept.append(one)
            taken |= names
    return tuple(kept)


def _failing(balance: Balance) -> Iterator[Contradiction]:
    """Equations that contradict one another whatever the signs."""
    for clash in balance.found.clashes:
        members, weights = circuit(balance.equations, clash)
        chosen = [balance.equations[k] for k in members]
        gap = sum((w * e.gap for w, e in zip(weights, chosen, strict=True)), _ZERO)
        yield Contradiction(
            Reason.FAILS, tuple(e.reaction for e in chosen), _names(chosen),
            balance.functional.name, weights, gap,
        )  # fmt: skip


def _emptied(found: Contradiction, balances: Sequence[Balance]) -> Contradiction:
    """A smaller cause inside a contradiction: lines that let a species hold nothing at all.

    Only lines in which everything known cancels can do that by themselves.
    """
    names = {r.name for r in found.reactions}
    filled = {e.reaction.name for b in balances for e in b.equations if e.gap}
    hollow = [r for r in found.reactions if r.name in names - filled]

    for name in found.species:

        def impossible(members: Iterable[int], name: str = name) -> bool:
            return _is_empty(balances, name, {hollow[k].name for k in members})

        if hollow and impossible(range(len(hollow))):
            kept = shrink(range(len(hollow)), impossible)
            return Contradiction(Reason.EMPTY, tuple(hollow[k] for k in kept), (name,))
    return found


def _names(equations: Iterable[Equation], first: str = "") -> tuple[str, ...]:
    names = dict.fromkeys(n for e in equations for n in e.factors)
    return (first, *(n for n in names if n != first)) if first else tuple(names)


def _negative(balance: Balance) -> Iterator[Contradiction]:
    """Equations that only a negative count of atoms would meet."""
    if not balance.counts or balance.found.clashes:
        return

    def told(start: Iterable[int], name: str) -> Contradiction:
        chosen = [balance.equations[k] for k in shrink(start, balance.forbids)]
        return Contradiction(
            Reason.NEGATIVE, tuple(e.reaction for e in chosen), _names(chosen, name),
            balance.functional.name,
        )  # fmt: skip

    found = balance.found
    below = [name for name, value in found.values.items() if value < 0]
    for name in below:
        yield told(found.origins[name], name)
    possible = is_possible(balance.equations, found.open, counts=True, found=found)
    if not below and not possible:
        yield told(balance.with_origins(found.open), "")


def _empty(balances: Sequence[Balance], unknown: Iterable[str]) -> Iterator[Contradiction]:
    """Species that could only hold nothing at all."""
    by_name = {e.reaction.name: e.reaction for b in balances for e in b.equations}
    order = list(by_name)
    for name in unknown:
        if not _may_be_empty(balances, name):
            continue

        def impossible(members: Iterable[int], name: str = name) -> bool:
            return _is_empty(balances, name, {order[k] for k in members})

        about = {r for b in balances for r in b.about(name)}
        start = [k for k, r in enumerate(order) if r in about]
        if impossible(start):
            kept = shrink(start, impossible)
            yield Contradiction(Reason.EMPTY, tuple(by_name[order[k]] for k in kept), (name,))


def _may_be_empty(balances: Sequence[Balance], name: str) -> bool:
    """A quick look: it stands in equations, and no balance shows that it can hold something."""
    seen = [b for b in balances if any(name in e.factors for e in b.equations)]
    free = any(name not in b.found.values and not b.counts for b in seen)
    holds = any(b.found.values.get(name, _ZERO) for b in seen)
    return len(seen) == len(balances) and not free and not holds


def _is_empty(balances: Sequence[Balance], name: str, reactions: set[str]) -> bool:
    """Whether these reactions force every content of a species to be zero."""
    for balance in balances:
        chosen = [e for e in balance.equations if e.reaction.name in reactions]
        names = list(dict.fromkeys([name, *(n for e in chosen for n in e.factors)]))
        rows = [[e.factors.get(n, _ZERO) for n in names] for e in chosen]
        rights = [-e.gap for e in chosen]
        if balance.counts:
            if find_nonnegative(rows, rights, len(names)) is None:
                return False
            if largest(rows, rights, len(names), 0) != 0:
                return False
        elif not _is_forced(rows, rights, len(names)):
            return False
    return True


def _is_forced(rows: list[list[Fraction]], rights: list[Fraction], columns: int) -> bool:
    """Whether the first unknown is zero in every solution of the equations."""
    unit = [Fraction(int(j == 0)) for j in range(columns)]
    solution = solve(rows, rights, columns)
    pinned = rank([*rows, unit], columns) == rank(rows, columns)
    return solution is not None and pinned and solution[0] == 0
