"""Species by the direction of what they hold: which of them could close a gap alone."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.contents import CHARGE
from fluxnet.network.line_balance import Contents, LineBalance, held_by, line_functionals
from fluxnet.network.model import Species

__all__ = ["Directions"]

_Direction = tuple[tuple[str, Fraction], ...]


@record
class Directions:
    """The species of a network by the ratios of their amounts in every balance.

    A species can close a gap alone only if its amounts stand to one another as the gaps do.
    """

    by_ratio: Mapping[_Direction, tuple[Species, ...]]
    every: tuple[Species, ...]

    @classmethod
    def of(cls, contents: Contents) -> Directions:
        """Sort the species of a network."""
        held = {s.name: held_by(s, contents) for s in contents.network.species}
        known = {name: content for name, content in held.items() if content is not None}
        functionals = line_functionals(
            {n: c for n, c in known.items() if not c.without_reference}, contents.free
        )
        found: dict[_Direction, list[Species]] = {}
        for species in contents.network.species:
            content = known.get(species.name)
            if content is not None:
                amounts = [(f.name, f.of(content)) for f in functionals]
                found.setdefault(_ratios(amounts), []).append(species)
        return cls({k: tuple(v) for k, v in found.items()}, contents.network.species)

    def along(self, line: LineBalance) -> tuple[Species, ...]:
        """The species that may close a line's gaps alone; all where its gaps hold parameters."""
        gaps = [(b.name, b.gap.constant_value) for b in line.balances]
        numbers = [(name, gap) for name, gap in gaps if gap is not None]
        seldom = len(numbers) < len(gaps) or line.without_reference
        if seldom or any(name in ("O", CHARGE) for name, _ in gaps):
            return self.every
        return self.by_ratio.get(_ratios(numbers), ())


def _ratios(amounts: Iterable[tuple[str, Fraction]]) -> _Direction:
    """Amounts as ratios to the first that is not zero."""
    held = [(name, amount) for name, amount in amounts if amount]
    return tuple((name, amount / held[0][1]) for name, amount in held)
