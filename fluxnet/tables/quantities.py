"""The quantity that a name in a table means: a rate, mu, a flux, a ratio of two."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field, replace

from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Quantity, QuantityKind, Role, Species
from fluxnet.tables.reckoned import names_total
from fluxnet.tables.vocabulary import (
    Vocabulary,
    direction_of_role,
    find_species,
    fold,
    is_growth_rate,
    nearest_names,
    read_direction,
    split_direction,
)

__all__ = ["QuantityFault", "QuantityReading", "is_quantity_name", "read_quantity", "settle_ratio"]

_SYMBOL = pattern_of(r"[qrQR]_?(?:[SPX]|s|p|x|sub|prod)")
"""Specific rates of the substrate and the product, as textbooks write them."""


@record
class QuantityFault:
    """Why a name or direction makes no quantity."""

    name: Name
    message: str
    mend: str | None = None


@record
class QuantityReading:
    """A quantity with the species that it names, or the fault that forbids one.

    ``assumed`` says that a biomass formula was assumed.
    """

    quantity: Quantity | None
    species: tuple[Species, ...] = ()
    fault: QuantityFault | None = field(default=None)
    assumed: bool = False


def is_quantity_name(name: str, vocabulary: Vocabulary) -> bool:
    """Whether a name (without its direction) means a quantity."""
    name = name.strip()
    if is_growth_rate(name) or _reaction(name, vocabulary) is not None:
        return True
    if name.lower().startswith("flux "):
        return True
    if "/" in name:
        parts = [split_direction(p)[0] for p in name.split("/")]
        return len(parts) == 2 and all(p and is_quantity_name(p, vocabulary) for p in parts)
    return bool(name) and find_species(name, vocabulary) is not None


def read_quantity(name: str, direction: str, vocabulary: Vocabulary) -> QuantityReading:
    """The quantity of a name and a direction word (empty where none is written)."""
    name = name.strip()
    if "/" in name:
        return _ratio(name, direction, vocabulary)
    if is_growth_rate(name):
        if direction and read_direction(direction) is not Direction.OUT:
            return _faulty(
                Name.BAD_DIRECTION, f"mu has no direction `{direction}`", "leave it blank"
            )
        return QuantityReading(Quantity(QuantityKind.MU))
    reaction = _reaction(name, vocabulary)
    if reaction is not None or name.lower().startswith("flux "):
        return _flux(name, reaction, direction, vocabulary)
    return _rate(name, direction, vocabulary)


def _rate(name: str, direction: str, vocabulary: Vocabulary) -> QuantityReading:
    found = find_species(name, vocabulary)
    if found is None:
        return _unknown(name, vocabulary)
    species = found.species
    allowed = direction_of_role(species.role)
    told = read_direction(direction) if direction else allowed
    if told is None:
        words = f"`{direction}` is neither in nor out" if direction else "no direction is written"
        message = f"{words} for {species.name}"
        if not direction:
            message += ", and no role gives it"
        return _faulty(
            Name.BAD_DIRECTION, message, f"write {species.name} in, or {species.name} out"
        )
    if allowed is not None and told is not allowed:
        verb = "taken up" if allowed is Direction.IN else "released"
        return _faulty(
            Name.RATE_AGAINST_ROLE,
            f"{species.name} is a {species.role.value} and can only be {verb}; "
            f"the table says {told.value}",
            f"write {allowed.value}, or declare {species.name} as exchange",
        )
    quantity = Quantity(QuantityKind.RATE, species.name, told)
    return QuantityReading(quantity, (species,), assumed=found.assumed)


def _flux(
    name: str, reaction: str | None, direction: str, vocabulary: Vocabulary
) -> QuantityReading:
    bare = name[5:].strip() if name.lower().startswith("flux ") else name
    reaction = reaction or _reaction(bare, vocabulary)
    if reaction is None:
        if vocabulary.network is None:
            return _faulty(
                Name.UNKNOWN_QUANTITY,
                f"`{name}` is a flux, and no model is given",
                "give the model, or leave the row out",
            )
        known = [r.name for r in vocabulary.network.reactions]
        from difflib import get_close_matches

        near = get_close_matches(bare, known, 3, 0.5)
        mend = f"did you mean {' or '.join('flux ' + n for n in near)}?" if near else None
        return _faulty(Name.UNKNOWN_QUANTITY, f"the model has no reaction {bare}", mend)
    if direction:
        return _faulty(
            Name.BAD_DIRECTION,
            f"the flux of {reaction} runs from left to right and has no direction `{direction}`",
            "leave the direction blank; a flux may be negative",
        )
    return QuantityReading(Quantity(QuantityKind.FLUX, reaction))


def _ratio(name: str, direction: str, vocabulary: Vocabulary) -> QuantityReading:
    sides = [s.strip() for s in name.split("/")]
    if len(sides) != 2 or not all(sides):
        return _faulty(
            Name.UNKNOWN_QUANTITY, f"`{name}` is no ratio of two quantities", "write A / B"
        )
    if direction:
        # the word stood behind the denominator: CO2 out / oxygen in
        sides[1] = f"{sides[1]} {direction}"
    parts: list[Quantity] = []
    species: list[Species] = []
    assumed = False
    for side in sides:
        bare, word = split_direction(side)
        reading = _open_side(bare, vocabulary) if not word else None
        reading = reading or read_quantity(bare, word, vocabulary)
        if reading.quantity is None:
            return reading
        parts.append(reading.quantity)
        species.extend(reading.species)
        assumed = assumed or reading.assumed
    if (parts[0].kind, parts[0].name) == (parts[1].kind, parts[1].name):
        return _faulty(
            Name.UNKNOWN_QUANTITY, f"`{name}` is always 1, and tells nothing", "take the row out"
        )
    quantity = Quantity(QuantityKind.RATIO, numerator=parts[0], denominator=parts[1])
    return QuantityReading(quantity, tuple(species), assumed=assumed)


def _open_side(name: str, vocabulary: Vocabulary) -> QuantityReading | None:
    """A side of a ratio whose direction neither a word nor a role tells; None where one does.

    With a model it is out, as in the model's own ratios; without one it stays open until the
    other rows of the table are known (:func:`settle_ratio`).
    """
    is_rate = not is_growth_rate(name) and _reaction(name, vocabulary) is None
    found = find_species(name, vocabulary) if is_rate else None
    if found is None or direction_of_role(found.species.role) is not None:
        return None
    direction = None if vocabulary.network is None else Direction.OUT
    quantity = Quantity(QuantityKind.RATE, found.species.name, direction)
    return QuantityReading(quantity, (found.species,), assumed=found.assumed)


def settle_ratio(
    quantity: Quantity, told: Mapping[str, Direction], species: Mapping[str, Species]
) -> Quantity:
    """A ratio whose open sides go the way that the table's own rows tell.

    Where no row tells, oxygen goes in and everything else out: CO2 / oxygen is the
    respiratory quotient.
    """

    def settled(side: Quantity | None) -> Quantity | None:
        if side is None or side.kind is not QuantityKind.RATE or side.direction is not None:
            return side
        known = species.get(side.name)
        is_oxygen = known is not None and known.entry == "oxygen"
        usual = Direction.IN if is_oxygen else Direction.OUT
        return replace(side, direction=told.get(side.name, usual))

    return replace(
        quantity,
        numerator=settled(quantity.numerator),
        denominator=settled(quantity.denominator),
    )


def _reaction(name: str, vocabulary: Vocabulary) -> str | None:
    network = vocabulary.network
    if network is None:
        return None
    bare = name[5:].strip() if name.lower().startswith("flux ") else name
    return bare if network.find_reaction(bare) is not None else None


def _unknown(name: str, vocabulary: Vocabulary) -> QuantityReading:
    network = vocabulary.network
    inside = (
        None
        if network is None
        else next((s for s in network.balanced if fold(s.name) == fold(name)), None)
    )
    if inside is not None:
        word = "a carrier" if inside.role is Role.CARRIER else "inside the cell"
        return _faulty(
            Name.UNKNOWN_QUANTITY,
            f"{inside.name} is {word} in the model and does not cross the boundary",
            "declare a boundary species for what is released, with a reaction that makes it",
        )
    if names_total(name) or not any(c.isalpha() for c in name):
        words = "is reckoned from other rows" if names_total(name) else "names no species"
        mend = "take the row out, or start its line with #"
        return _faulty(Name.UNKNOWN_QUANTITY, f"`{name}` {words}", mend)
    if _SYMBOL.fullmatch(name):
        return _faulty(
            Name.UNKNOWN_QUANTITY,
            f"`{name}` does not say which compound it is",
            "write the compound's name with its direction, such as glucose in",
        )
    near = nearest_names(name, vocabulary)
    source = "the catalogue" if network is None else "the model and the catalogue"
    mend = (
        f"did you mean {' or '.join(near)}?"
        if near
        else "write its name in the catalogue (`fluxnet catalogue`), or declare it above the "
        f"table: species {'-'.join(name.split())} FORMULA"
    )
    return _faulty(
        Name.UNKNOWN_QUANTITY, f"{source} know{'s' if network is None else ''} no {name}", mend
    )


def _faulty(name: Name, message: str, mend: str | None) -> QuantityReading:
    return QuantityReading(None, fault=QuantityFault(name, message, mend))
