"""What a plan is for: a flux, a rate, mu, a yield, or one line of the carrier ledger."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import get_close_matches

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network, Quantity, QuantityKind
from fluxnet.studies.aims import name_quantity
from fluxnet.studies.ledger import LedgerPlace, ledger_places

__all__ = ["Target", "read_target"]


@record
class Target:
    """A quantity (a yield is a ratio), or a line of the ledger."""

    quantity: Quantity | None
    line: LedgerPlace | None = None

    def __str__(self) -> str:
        if self.line is not None:
            return f"net {self.line.carrier} of {self.line.compartment}"
        return str(self.quantity)


def read_target(text: str, network: Network) -> Target:
    """What a user wants to know better.

    ``ethanol``, ``oxphos`` and ``mu`` are named as in an aim; ``ethanol / glucose`` is a
    yield, ``ATP maintenance`` what that compartment makes of ATP less what it spends.

    Raises
    ------
    MisuseError
        Where a name is none of the network's, with the nearest.
    """
    words = text.split()
    if "/" in text and not _is_known(text.strip(), network):
        over, slash, below = text.partition(" / ")
        if not slash:
            over, _, below = text.partition("/")
        parts = [_name(part.split(), network) for part in (over, below)]
        return Target(Quantity(QuantityKind.RATIO, numerator=parts[0], denominator=parts[1]))
    carriers = [c.name for c in network.carriers]
    if len(words) > 1 and words[0] in carriers:
        return Target(None, _find_line(words[0], " ".join(words[1:]), network))
    if len(words) == 2 and words[1] in {c.name for c in network.compartments}:
        raise MisuseError(f"the model has no carrier {words[0]}{_near(words[0], carriers)}")
    if any(c.name == text.strip() for c in network.compartments) and not _is_known(
        text.strip(), network
    ):
        raise MisuseError(_of_compartment(text.strip(), network))
    return Target(_name(words, network))


def _of_compartment(name: str, network: Network) -> str:
    """What of a compartment can be asked for: a line of its ledger, or one of its fluxes."""
    lines = [f'"{p.carrier} {name}"' for p in _lines(network) if p.compartment == name][:1]
    fluxes = [r.name for r in network.reactions if r.compartment == name][:1]
    ways = " or ".join(f"--plan {way}" for way in (*lines, *fluxes))
    return f"{name} is a compartment; write {ways}" if ways else f"{name} is an empty compartment"


def _is_known(name: str, network: Network) -> bool:
    return network.find_species(name) is not None or network.find_reaction(name) is not None


def _name(words: list[str], network: Network) -> Quantity:
    quantity = name_quantity(words, network, "what a plan is for")
    if quantity.kind is QuantityKind.SURPLUS:
        name = quantity.name
        line = next((p for p in _lines(network) if p.carrier == name), None)
        such = "" if line is None else f", such as `{name} {line.compartment}`"
        raise MisuseError(f"{name} is a carrier and balances to 0: name a line of its ledger{such}")
    return quantity


def _find_line(carrier: str, compartment: str, network: Network) -> LedgerPlace:
    places = [p.compartment for p in _lines(network) if p.carrier == carrier]
    if compartment in places:
        return LedgerPlace(carrier, compartment)
    touch = f"those that touch {carrier} are {', '.join(places)}"
    if any(c.name == compartment for c in network.compartments):
        raise MisuseError(f"no reaction of {compartment} touches {carrier}; {touch}")
    raise MisuseError(
        f"the model has no compartment {compartment}{_near(compartment, places)}; {touch}"
    )


def _lines(network: Network) -> tuple[LedgerPlace, ...]:
    return ledger_places(network, stoichiometry(network))


def _near(name: str, known: Iterable[str]) -> str:
    near = get_close_matches(name, list(known), 3, 0.6)
    return f"; near to it are {', '.join(near)}" if near else ""
