"""Intermediates taken out of a network, one after another, until only those are left that stay."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.progress import Progress, silent
from fluxnet.network.balance_words import join
from fluxnet.network.line_balance import contents_of_network
from fluxnet.network.model import Network, Role
from fluxnet.studies.lump_bundle import Bundle, bundles_of, eliminated, pivot_of
from fluxnet.studies.lump_holds import Holds, settings_of
from fluxnet.studies.lump_lines import refusal_of
from fluxnet.studies.lump_result import Dropped, Eliminated, Event, Kept, Why
from fluxnet.studies.lump_spare import sum_of

__all__ = ["Elimination"]

_MOST_GROWTH = 60


class Elimination:
    """The bundles that a network has become, and the steps to there.

    Each step is exact. What it makes is looked at before it counts: a line must be one that the
    language can hold, at the parameters' values and in every variant.
    """

    def __init__(self, network: Network, holds: Holds) -> None:
        self.network = network
        self.holds = holds
        self.bundles = list(bundles_of(network))
        self.events: list[Event] = []
        self.taken: list[str] = []
        self._contents = contents_of_network(network)
        self.settings = settings_of(network)

    def run(self, progress: Progress = silent) -> tuple[Kept, ...]:
        """Take out what can be taken out; the intermediates that stay, each with its reason."""
        inside = [s.name for s in self.network.species if s.role is Role.INSIDE]
        refused: dict[str, Kept] = {}
        while True:
            waiting = [name for name in inside if name not in self.taken]
            progress("taking out intermediates", len(self.taken), len(inside))
            chosen = self._next(waiting, refused)
            if chosen is None:
                # What is spared may leave a species in one compartment alone.
                if not self._spare():
                    break
                refused.clear()
                continue
            told = self._take(chosen)
            if told is None:
                refused.clear()
            else:
                refused[chosen] = told
        return tuple(refused[name] for name in waiting if name in refused)

    def _next(self, waiting: Sequence[str], refused: dict[str, Kept]) -> str | None:
        """The species whose going makes the fewest reactions; why others stay is put down."""
        sizes: list[tuple[int, int]] = []
        for k, name in enumerate(waiting):
            if name in refused:
                continue
            told = self._stays(name)
            if told is not None:
                refused[name] = told
                continue
            sizes.append((_growth(name, self._users(name)), k))
        return waiting[min(sizes)[1]] if sizes else None

    def _users(self, species: str) -> list[Bundle]:
        return [b for b in self.bundles if species in b.net]

    def _stays(self, species: str) -> Kept | None:
        """Why a species has to stay whatever would come of it, or None."""
        held = self.holds.species.get(species)
        if held is not None:
            return Kept(species, *held)
        written = any(
            t.species == species
            for b in self.bundles if b.original is not None
            for _, t in b.original.terms
        )
        users = self._users(species)
        if not users and not written:
            return Kept(species, Why.UNUSED, "no reaction uses it")
        found = {b.compartment for b in users}
        places = [c.name for c in self.network.compartments if c.name in found]
        if len(places) > 1:
            return Kept(species, Why.CROSSES, f"passed between {join(places)}")
        for name in (n for b in users for n in b.weights):
            if name in self.holds.reactions:
                why, words = self.holds.reactions[name]
                return Kept(species, why, f"{name}, which it stands in, {words}")
        if pivot_of(species, users) is None:
            return _parameter_in(species, users)
        return None

    def _take(self, species: str) -> Kept | None:
        """Take a species out, or say why not."""
        users = self._users(species)
        if _growth(species, users) > _MOST_GROWTH:
            makers, takers = _makers_and_users(species, users)
            words = f"without it {makers * takers} reactions would stand for {len(users)}"
            return Kept(species, Why.GROWTH, words)
        after = eliminated(species, users)
        if after is None:
            raise AssertionError(f"{species} stays, which was to be told before")
        ids = {id(b) for b in users}
        rest = [b for b in self.bundles if id(b) not in ids]
        left, dropped = self._thinned(list(after), rest)
        for bundle in left:
            refusal = refusal_of(bundle, self._contents, self.settings)
            if refusal is not None:
                return Kept(species, *refusal)
        self.events += [Eliminated(species, tuple(users), after), *dropped]
        self.bundles = [*rest, *left]
        self.taken.append(species)
        return None

    def _thinned(
        self, new: list[Bundle], rest: Sequence[Bundle]
    ) -> tuple[list[Bundle], list[Dropped]]:
        """New bundles without those that are sums of others which run on no other reactions."""
        dropped: list[Dropped] = []
        for bundle in sorted(new, key=lambda b: -len(b.weights)):
            own = bundle.weights.keys()
            others = [
                b for b in (*rest, *new)
                if b is not bundle and b.compartment == bundle.compartment
                and b.weights.keys() <= own and not self._is_held(b)
            ]
            parts = sum_of(bundle, others)
            if parts is not None:
                dropped.append(Dropped(bundle, parts))
                new = [b for b in new if b is not bundle]
        return new, dropped

    def _spare(self) -> bool:
        """Drop what is a sum of whatever others of its compartment; original reactions stay."""
        before = len(self.bundles)
        for bundle in sorted(self.bundles, key=lambda b: (-len(b.weights), -len(b.net))):
            if bundle.original is not None:
                continue
            others = [
                b for b in self.bundles
                if b is not bundle and b.compartment == bundle.compartment
                and not self._is_held(b)
            ]
            parts = sum_of(bundle, others)
            if parts is not None:
                self.events.append(Dropped(bundle, parts))
                self.bundles = [b for b in self.bundles if b is not bundle]
        return len(self.bundles) < before

    def _is_held(self, bundle: Bundle) -> bool:
        return any(name in self.holds.reactions for name in bundle.weights)


def _makers_and_users(species: str, bundles: Sequence[Bundle]) -> tuple[int, int]:
    """How many bundles make a species, and how many use it."""
    sizes = [number for b in bundles if (number := b.of(species).constant_value) is not None]
    makers = sum(size > 0 for size in sizes)
    return makers, len(sizes) - makers


def _growth(species: str, bundles: Sequence[Bundle]) -> int:
    """By how many the bundles would grow if a species went, at most."""
    if pivot_of(species, bundles) is not None:
        return -1
    makers, users = _makers_and_users(species, bundles)
    return makers * users - makers - users


def _parameter_in(species: str, bundles: Sequence[Bundle]) -> Kept | None:
    """Why a parameter keeps a species that no reaction running both ways could take up."""
    for bundle in bundles:
        amount = bundle.of(species)
        if amount.constant_value is None:
            names = " + ".join(bundle.weights)
            words = f"its coefficient in {names} is {amount}"
            return Kept(species, Why.PARAMETER, words)
    return None
