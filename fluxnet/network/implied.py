"""Water, protons and base that a net conversion of boundary species implies.

No reaction writes them, but where no carrier is left they follow from the species: oxygen is
closed by water and charge by protons, every species in its form at pH 7, carbon dioxide as
gas, biomass uncharged; phosphate and other free species are implied where their elements
are left over.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Generic, TypeVar

from fluxnet.chemistry.formula import Formula
from fluxnet.exact.linear import independent_rows, solve
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.contents import CHARGE, ELECTRONS, Content, content_of_formula
from fluxnet.network.model import Network
from fluxnet.network.water import form_at_ph_seven, free_forms

__all__ = ["Implied", "find_implied"]

Number = TypeVar("Number", Fraction, float)

_ZERO = Fraction(0)


@record
class Implied(Generic[Number]):
    """What a conversion makes besides the species written, in the unit of their amounts.

    ``water`` and ``protons`` are made (negative: used). ``free`` are free species that close
    what is left of their elements, without zeros. ``base`` is the base that neutralises the
    protons, ``acid`` the acid where protons are used. ``ammonia`` is the ammonia taken up as
    nitrogen source; taken up as ammonium it leaves a proton, which is among ``protons``, so
    that ammonia fed as the base is ``ammonia_fed`` in all: the base includes the nitrogen
    source, which is not added once more. ``residual`` is what is left of each element and of
    electrons (zero where every line balances exactly).
    """

    water: Number
    protons: Number
    free: tuple[tuple[str, Number], ...]
    base: Number
    acid: Number
    ammonia: Number
    ammonia_fed: Number
    residual: tuple[tuple[str, Number], ...]


def find_implied(network: Network, releases: Mapping[str, Number]) -> Implied[Number]:
    """The water, protons and base that amounts of boundary species imply.

    Parameters
    ----------
    network
        Where the species are declared, and which species are free.
    releases
        Amount of each boundary species made (negative: used), in moles or a rate in moles.
        Exact numbers give exact answers.

    Returns
    -------
    Implied
        In the unit of ``releases``.

    Raises
    ------
    MisuseError
        If a species is unknown, or has no formula.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> from fluxnet.network.model import Basis, Role, Species
    >>> species = tuple(Species(n, Role.EXCHANGE, read_formula(f)) for n, f in
    ...     (("ethanol", "C2H6O"), ("oxygen", "O2"), ("CO2", "CO2")))
    >>> net = Network("", Basis.SPECIFIC, species, (), (), ())
    >>> one = Fraction(1)
    >>> find_implied(net, {"ethanol": -one, "oxygen": -3 * one, "CO2": 2 * one}).water
    Fraction(3, 1)
    """
    forms = {name: _form(network, name) for name in releases}
    if not releases:
        raise MisuseError("a conversion of no species implies nothing")
    zero = type(next(iter(releases.values())))(0)
    total: dict[str, Number] = {}
    for name, amount in releases.items():
        _add(total, content_of_formula(forms[name]), amount)
    free = _free_amounts(free_forms(network), total, zero)
    for _, content, amount in free:
        _add(total, content, amount)
    water = -total.pop("O", zero)
    protons = -total.pop(CHARGE, zero)
    hydrogen = total.pop("H", zero) + 2 * water + protons
    ammonia = sum(
        (-amount for name, amount in releases.items() if amount < 0 and _is_ammonia(forms[name])),
        zero,
    )
    total["H"] = hydrogen
    return Implied(
        water=water,
        protons=protons,
        free=tuple((name, amount) for name, _, amount in free if amount),
        base=max(zero, protons),
        acid=max(zero, -protons),
        ammonia=ammonia,
        ammonia_fed=max(ammonia, protons),
        residual=tuple(total.items()),
    )


def _form(network: Network, name: str) -> Formula:
    species = network.find_species(name)
    form = None if species is None else form_at_ph_seven(species)
    if form is None:
        raise MisuseError(f"{name} has no formula: its water and protons cannot be counted")
    return form


def _is_ammonia(form: Formula) -> bool:
    return form.elements in (("N", "H"), ("H", "N")) and form.count("N") == 1


def _add(total: dict[str, Number], content: Content, amount: Number) -> None:
    """Add an amount of a content to a sum."""
    for name, share in content.amounts.items():
        factor = type(amount)(share)
        total[name] = total[name] + factor * amount if name in total else factor * amount


def _free_amounts(
    free: Sequence[tuple[str, Content]], total: Mapping[str, Number], zero: Number
) -> list[tuple[str, Content, Number]]:
    """The amounts of free species that close what is left of their elements and electrons."""
    closed = [
        a
        for a in dict.fromkeys(a for _, content in free for a in content.amounts)
        if a not in ("H", "O", CHARGE)
    ]
    closed.sort(key=lambda a: a == ELECTRONS)
    rows = [[content.amounts.get(a, _ZERO) for _, content in free] for a in closed]
    chosen = independent_rows(rows, len(free))
    amounts: list[tuple[str, Content, Number]] = []
    for k, (name, content) in enumerate(free):
        unit = [Fraction(int(j == k)) for j in range(len(free))]
        turned = [[rows[i][j] for i in chosen] for j in range(len(free))]
        weights = solve(turned, unit, len(chosen))
        amount = zero
        for weight, i in zip(weights or (), chosen, strict=False):
            amount = amount - type(zero)(weight) * total.get(closed[i], zero)
        amounts.append((name, content, amount))
    return amounts
