"""A conflict's bill in one sentence."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind, Role
from fluxnet.studies.bill_unit import Coin

__all__ = ["BillPart", "list_words", "tell_bill"]


@record
class BillPart:
    """One line of a bill for the sentence; ``quantity`` is None where it bounds none."""

    name: str
    quantity: Quantity | None
    is_measured: bool
    is_nothing: bool

    @property
    def counts(self) -> bool:
        """Whether it has a worth, or is a ratio: that sets the worths of others."""
        is_ratio = self.quantity is not None and self.quantity.kind is QuantityKind.RATIO
        return is_ratio or not self.is_nothing


def tell_bill(
    network: Network,
    coin: Coin,
    demands: Sequence[BillPart],
    supplies: Sequence[BillPart],
    amounts: tuple[str, str],
) -> str:
    """The sentence; ``amounts`` are the demand and the supply as the bill prints them.

    What brings nothing is named only where nothing else does.
    """
    need, have = amounts
    needing = [p for p in demands if p.counts]
    bringing = [p for p in supplies if p.counts]
    named = list_words(p.name for p in supplies)
    if not coin.noun:
        asked = list_words(p.name for p in needing)
        some = f"at most {have}" if bringing else "nothing"
        left = f"{some} is left{f' by {named}' if named else ''}"
        return f"At least {need} {coin.unit} is asked for by {asked}; {left}."
    subjects = _subjects(network, needing)
    verb = ("bring" if coin.is_surplus else "need") + ("s" if len(subjects) == 1 else "")
    words = f"The {coin.noun} that {list_words(subjects)} {verb}, {need}"
    several = coin.noun == "electrons"
    if bringing:
        are, do = ("are" if several else "is"), ("take" if coin.is_surplus else "bring")
        given = list_words(_subjects(network, bringing))
        basis = _basis(bringing)
        return f"{words}, {are} more than {given} {basis} can {do}, {have} {coin.unit}."
    have_not = ("have" if several else "has") + " nowhere to go"
    nowhere = have_not if coin.is_surplus else "can come from nowhere"
    return f"{words} {coin.unit}, {nowhere}{f' ({named})' if named else ''}."


def _basis(parts: Sequence[BillPart]) -> str:
    """What the amounts of a side rest on."""
    kinds = {part.is_measured for part in parts}
    if len(kinds) == 2:
        return "as measured and limited"
    return "as measured" if True in kinds else "as limited"


def _subjects(network: Network, parts: Sequence[BillPart]) -> list[str]:
    """Growth, upkeep, the uptake of these and the release of those."""
    groups: dict[str, list[str]] = {"": []}
    for part in parts:
        kind, name = _subject(network, part)
        names = groups.setdefault(kind, [])
        if name not in names:
            names.append(name)
    plain = groups.pop("")
    return plain + [f"the {kind} of {list_words(names)}" for kind, names in groups.items()]


def _subject(network: Network, part: BillPart) -> tuple[str, str]:
    """What a line is about: a kind of exchange, or nothing, and the name."""
    quantity = part.quantity
    if quantity is None:
        return "", part.name
    if quantity.kind is QuantityKind.MU:
        return "", "growth"
    if quantity.kind is QuantityKind.RATE:
        species = network.find_species(quantity.name)
        if species is not None and species.role is Role.BIOMASS:
            return "", "growth"
        return "uptake" if quantity.direction is Direction.IN else "release", quantity.name
    return "", part.name if quantity.kind is QuantityKind.RATIO else quantity.name


def list_words(words: Iterable[str]) -> str:
    """Words as one lists them: a, b and c.

    Examples
    --------
    >>> list_words(["a", "b", "c"])
    'a, b and c'
    """
    *others, last = list(words) or [""]
    return f"{', '.join(others)} and {last}" if others else last
