"""What the names of a table stand for: species of the model, of the table, of the catalogue."""

from __future__ import annotations

import re
import unicodedata

from fluxnet.chemistry.catalogue import CompoundKind, load_catalogue
from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Network, Role, Species

__all__ = [
    "Vocabulary",
    "direction_of_role",
    "fold",
    "nearest_names",
    "read_direction",
    "split_direction",
]

_DIRECTIONS = {
    **dict.fromkeys((
        "in", "uptake", "taken up", "consumed", "consumption", "used", "into", "uptake rate",
        "consumption rate", "aufnahme", "verbrauch",
    ), Direction.IN),
    **dict.fromkeys((
        "out", "release", "released", "produced", "production", "made", "formed", "formation",
        "secreted", "secretion", "evolved", "evolution", "out of", "release rate",
        "production rate", "formation rate", "secretion rate", "evolution rate", "abgabe",
        "bildung", "produktion",
    ), Direction.OUT),
}  # fmt: skip
_TAIL = pattern_of(
    rf"(?P<name>.+?)[\s_]+(?P<direction>{'|'.join(sorted(_DIRECTIONS, key=len, reverse=True))})",
    re.IGNORECASE,
)
_MU = frozenset({"mu", "μ", "growth-rate", "specific-growth-rate"})
_BIOMASS = frozenset({"biomass", "cells", "dry-weight", "cell-dry-weight"})


@record
class Vocabulary:
    """The names that a table may use. ``declared`` are the table's own species."""

    network: Network | None = None
    declared: tuple[Species, ...] = ()


@record
class Found:
    """A species that a name stands for. ``assumed`` marks the common biomass formula."""

    species: Species
    assumed: bool = False


def fold(name: str) -> str:
    """A name without what people vary: case, blanks for hyphens, typographic forms."""
    return re.sub(r"[\s_]+", "-", unicodedata.normalize("NFKC", name).strip()).casefold()


def read_direction(text: str) -> Direction | None:
    """The direction that a word tells, or None."""
    return _DIRECTIONS.get(" ".join(text.lower().split()))


def split_direction(text: str) -> tuple[str, str]:
    """Name and direction word of ``glucose in``; an empty word where there is none.

    Examples
    --------
    >>> split_direction("acetic acid out"), split_direction("mu")
    (('acetic acid', 'out'), ('mu', ''))
    """
    found = _TAIL.fullmatch(text.strip())
    return (found["name"], found["direction"]) if found else (text.strip(), "")


def direction_of_role(role: Role) -> Direction | None:
    """The only direction that a role allows, or None."""
    if role is Role.SUBSTRATE:
        return Direction.IN
    return Direction.OUT if role in (Role.PRODUCT, Role.BIOMASS) else None


def is_growth_rate(name: str) -> bool:
    """Whether a name means the specific growth rate."""
    return fold(name) in _MU


def find_species(name: str, vocabulary: Vocabulary) -> Found | None:
    """The species that a name stands for.

    Looked for as typed in the table's own declarations and in the model; then in both
    whatever the case and blanks; then through the catalogue's synonyms in the model; then in
    the catalogue alone. ``biomass`` means the one biomass species that is declared, and
    without a model or declaration the common formula CH1.8O0.5N0.2.
    """
    name = unicodedata.normalize("NFKC", " ".join(name.split()))
    own = {s.name: s for s in boundary_species(vocabulary)}
    if name in own:
        return Found(own[name])
    folded = [s for n, s in own.items() if fold(n) == fold(name)]
    if len(folded) == 1:
        return Found(folded[0])
    entry = load_catalogue().find(name)
    if fold(name) in _BIOMASS or (entry is not None and entry.kind is CompoundKind.BIOMASS):
        biomass = biomass_species(vocabulary)
        if len(biomass) == 1:
            return Found(biomass[0])
        if not biomass and vocabulary.network is None:
            return Found(assumed_biomass(), assumed=True)
        return None
    network = vocabulary.network
    if network is not None and any(fold(s.name) == fold(name) for s in network.balanced):
        return None
    if entry is None or entry.kind.is_carrier or entry.kind is CompoundKind.BOUND_GROUP:
        return None
    matched = [s for s in own.values() if s.entry == entry.name]
    if matched:
        return Found(matched[0])
    return Found(Species(name, Role.EXCHANGE, entry.formula, entry=entry.name))


def boundary_species(vocabulary: Vocabulary) -> tuple[Species, ...]:
    """The table's own species, then the model's that cross the boundary."""
    network = vocabulary.network
    return vocabulary.declared + (network.boundary if network is not None else ())


def biomass_species(vocabulary: Vocabulary) -> tuple[Species, ...]:
    """The biomass species, of the table or of the model."""
    own = tuple(s for s in vocabulary.declared if s.role is Role.BIOMASS)
    network = vocabulary.network
    model = () if network is None else tuple(s for s in network.boundary if s.role is Role.BIOMASS)
    return model or own


def assumed_biomass() -> Species:
    """Biomass of unknown composition: CH1.8O0.5N0.2 without ash (common practice)."""
    entry = load_catalogue().find("biomass")
    formula = entry.formula if entry is not None else read_formula("CH1.8O0.5N0.2")
    return Species("biomass", Role.BIOMASS, formula, entry="biomass")


def nearest_names(name: str, vocabulary: Vocabulary) -> tuple[str, ...]:
    """Up to three names that a misspelt one may have meant."""
    own = [s.name for s in boundary_species(vocabulary)]
    from difflib import get_close_matches

    near = get_close_matches(name, own, 3, 0.6)
    return tuple(near) if near else tuple(load_catalogue().nearest(name))[:3]
