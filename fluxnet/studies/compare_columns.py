"""The columns of a family: each reaction once for each set of numbers it is made at."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.model import Parameter, Reaction

__all__ = ["Columns", "FamilyColumn"]


@record
class FamilyColumn:
    """One reaction at the numbers of the cases that have it; ``uncertain`` are those with ±."""

    reaction: Reaction
    made: tuple[tuple[str, Fraction], ...]
    numbers: Mapping[str, Fraction]
    uncertain: tuple[Parameter, ...]


class Columns:
    """Columns as they are collected."""

    def __init__(self) -> None:
        self.found: list[FamilyColumn] = []
        self._at: dict[object, int] = {}
        self._seen: dict[object, int] = {}
        self._plain: dict[int, int] = {}
        self._names: dict[int, tuple[str, ...]] = {}
        self._kept: list[object] = []

    def place(self, reaction: Reaction, parameters: Mapping[str, Parameter]) -> int:
        """The column of a reaction at the values of its parameters."""
        place = self._plain.get(id(reaction))
        if place is not None:
            return place
        names = self._names.get(id(reaction))
        if names is None:
            used = (t.coefficient.parameters for _, t in reaction.terms if t.coefficient)
            names = self._names[id(reaction)] = tuple(sorted(frozenset().union(*used)))
        own = tuple(parameters[n] for n in names)
        quick = (id(reaction), *map(id, own))
        place = self._seen.get(quick)
        if place is None:
            place = self._seen[quick] = self._new(reaction, own)
            if not own:
                self._plain[id(reaction)] = place
        return place

    def _new(self, reaction: Reaction, own: tuple[Parameter, ...]) -> int:
        numbers = {p.name: p.value for p in own}
        made: dict[str, Fraction] = {}
        for sign, term in reaction.terms:
            assert term.coefficient is not None
            value = sign * term.coefficient.exact(numbers)
            made[term.species] = made.get(term.species, Fraction(0)) + value
        uncertain = tuple(p for p in own if p.sd)
        spread = tuple((p.name, p.value, p.sd, p.low, p.high) for p in uncertain)
        key = (reaction.name, reaction.reversible, frozenset(made.items()), spread)
        place = self._at.setdefault(key, len(self.found))
        if place == len(self.found):
            self.found.append(FamilyColumn(reaction, tuple(made.items()), numbers, uncertain))
        # Kept, so that their identities are not given anew.
        self._kept += [reaction, own]
        return place
