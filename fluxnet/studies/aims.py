"""What is to be made as large or as small as possible."""

from __future__ import annotations

import re
from collections.abc import Sequence
from difflib import get_close_matches
from enum import Enum
from fractions import Fraction

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind, Role

__all__ = ["Aim", "Sense", "name_quantity", "read_aim"]

_NUMBER = re.compile(
    r"[+-]?(?:\d{1,30}/0*[1-9]\d{0,29}"
    r"|(?:\d{1,30}(?:\.\d{0,30})?|\.\d{1,30})(?:[eE][+-]?\d\d?)?)",
    re.ASCII,
)
_SIGN = re.compile(r"\s([+-])\s")
_REACH = 10**9
"""No weight is larger, and none smaller than one by it: the other terms would vanish."""


class Sense(Enum):
    """Which way the aim goes."""

    MAXIMISE = "maximise"
    MINIMISE = "minimise"


@record
class Aim:
    """A weighted sum of quantities, to be made as large or as small as possible."""

    sense: Sense
    terms: tuple[tuple[Fraction, Quantity], ...]

    @property
    def surplus(self) -> tuple[str, ...]:
        """The carriers whose surplus takes part."""
        return tuple(q.name for _, q in self.terms if q.kind is QuantityKind.SURPLUS)

    def __str__(self) -> str:
        parts = [(w < 0, f"{abs(w)} " * (abs(w) != 1) + _words(q)) for w, q in self.terms]
        (less, first), *others = parts
        rest = "".join(f" {'-' if minus else '+'} {words}" for minus, words in others)
        return f"{self.sense.value} {'-' if less else ''}{first}{rest}"


def read_aim(text: str, sense: Sense, network: Network) -> Aim:
    """The aim that a user names: ``ethanol``, ``in glucose``, ``mu``, ``oxphos``, ``ATP``.

    A boundary species stands for its release, or its uptake after ``in``; a substrate for its
    uptake; a carrier for its surplus; ``flux oxphos`` is the reaction as screens name it. A
    weighted sum is ``2 ethanol + lactate``, a difference ``ethanol - acetate``.

    Raises
    ------
    MisuseError
        Where a name is none of the network's, with the nearest.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   lactate
    ... carrier   ATP  carries energy
    ... compartment a
    ...     lump   : glucose -> 2 lactate + 2 ATP
    ... compartment b
    ...     upkeep : ATP -> nothing
    ... limit glucose <= 10
    ... ''').network
    >>> str(read_aim("2 lactate - in glucose", Sense.MAXIMISE, network))
    'maximise 2 lactate out - glucose in'
    >>> str(read_aim("ATP", Sense.MAXIMISE, network))
    'maximise surplus of ATP'
    """
    first, *others = _SIGN.split(text)
    signs = (1, *(-1 if sign == "-" else 1 for sign in others[::2]))
    parts = (first, *others[1::2])
    terms = tuple(_read_term(p.split(), k, network) for k, p in zip(signs, parts, strict=True))
    return Aim(sense, terms)


def _read_term(words: Sequence[str], sign: int, network: Network) -> tuple[Fraction, Quantity]:
    weight = Fraction(sign)
    rest = list(words)
    if len(rest) > 1 and _NUMBER.fullmatch(rest[0]):
        weight *= _read_weight(rest.pop(0))
    if "/" in rest:
        raise MisuseError(
            "an aim is no ratio: fix the lower part with a limit, and aim at the upper one"
        )
    return weight, name_quantity(rest, network)


def name_quantity(words: Sequence[str], network: Network, what: str = "an aim") -> Quantity:
    """The one quantity that some words name: ``ethanol``, ``in CO2``, ``mu``, ``flux oxphos``.

    Raises
    ------
    MisuseError
        Where they name none of the network's, with the nearest.
    """
    rest, direction = list(words), None
    if len(rest) > 1 and rest[0] in ("in", "out"):
        direction = Direction(rest.pop(0))
    elif len(rest) > 1 and rest[-1] in ("in", "out"):
        direction = Direction(rest.pop())
    if len(rest) == 2 and rest[0] == "flux" and network.find_reaction(rest[1]) is not None:
        return Quantity(QuantityKind.FLUX, rest[1])
    if len(rest) != 1:
        raise MisuseError(f"{what} is a name, not {' '.join(words) or 'nothing'!r}")
    return _find_quantity(rest[0], direction, network)


def _read_weight(text: str) -> Fraction:
    weight = Fraction(text)
    if weight and not Fraction(1, _REACH) <= abs(weight) <= _REACH:
        raise MisuseError(f"the weight {text} is out of reach: weights lie between 1e-9 and 1e9")
    return weight


def _find_quantity(name: str, direction: Direction | None, network: Network) -> Quantity:
    if name == "mu":
        return Quantity(QuantityKind.MU)
    species = network.find_species(name)
    if species is not None and species.role.is_boundary:
        usual = Direction.IN if species.role is Role.SUBSTRATE else Direction.OUT
        return Quantity(QuantityKind.RATE, name, direction or usual)
    if species is not None and species.role is Role.CARRIER:
        return Quantity(QuantityKind.SURPLUS, name)
    if network.find_reaction(name) is not None:
        return Quantity(QuantityKind.FLUX, name)
    if species is not None:
        raise MisuseError(
            f"{name} is an inside species and cannot leave the cell; name a boundary species, "
            "a reaction, a carrier or mu"
        )
    known = [s.name for s in network.species] + [r.name for r in network.reactions]
    near = get_close_matches(name, known, 3, 0.6)
    hint = f"; near to it are {', '.join(near)}" if near else ""
    raise MisuseError(f"the model has no {name}{hint}")


def _words(quantity: Quantity) -> str:
    if quantity.kind is QuantityKind.SURPLUS:
        return f"surplus of {quantity.name}"
    return str(quantity)
