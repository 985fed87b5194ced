"""The form in which grams were weighed: free acid, ion, salt, hydrate."""

from __future__ import annotations

import re
from collections.abc import Mapping
from enum import Enum
from fractions import Fraction

from fluxnet.chemistry.compare import free_form
from fluxnet.chemistry.elements import ATOMIC_WEIGHT
from fluxnet.chemistry.formula import Formula
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record

__all__ = ["FREE", "Substance", "WeighedAs", "WeighedForm", "split_form", "weighed_mass"]


class WeighedAs(Enum):
    """What grams are grams of."""

    FREE = "free acid or base"
    ION = "ion"
    SALT = "salt"


@record
class WeighedForm:
    """A form and its crystal water.

    ``partner`` is the other ion of a salt (``sodium``), ``number`` how many of it where that
    was said (``disodium``), ``water`` moles of crystal water, ``words`` the text.
    """

    kind: WeighedAs = WeighedAs.FREE
    partner: str = ""
    number: int | None = None
    water: Fraction = Fraction(0)
    words: str = ""


@record
class Substance:
    """What a conversion needs to know of a species.

    ``formula`` in any form, ``formula_ph7`` the ion where it is known, ``ash`` the fraction of
    the dry weight that the formula leaves out (biomass).
    """

    name: str
    formula: Formula
    formula_ph7: Formula | None = None
    ash: Fraction = Fraction(0)


FREE = WeighedForm()

_CATIONS: dict[str, tuple[dict[str, int], int]] = {
    "sodium": ({"Na": 1}, 1), "potassium": ({"K": 1}, 1), "ammonium": ({"N": 1, "H": 4}, 1),
    "calcium": ({"Ca": 1}, 2), "magnesium": ({"Mg": 1}, 2),
}  # fmt: skip
_ANIONS: dict[str, dict[str, int | Fraction]] = {
    "hydrochloride": {"H": 1, "Cl": 1}, "chloride": {"H": 1, "Cl": 1},
    "sulfate": {"H": 1, "S": Fraction(1, 2), "O": 2},
    "sulphate": {"H": 1, "S": Fraction(1, 2), "O": 2},
}  # fmt: skip
_TIMES = {"": None, "mono": 1, "di": 2, "tri": 3}
_WATERS: dict[str, int | Fraction] = {
    "hemi": Fraction(1, 2), "mono": 1, "sesqui": Fraction(3, 2), "di": 2, "tri": 3, "tetra": 4,
    "penta": 5, "hexa": 6, "hepta": 7, "octa": 8, "deca": 10, "dodeca": 12,
}  # fmt: skip
_SALT = pattern_of(
    rf"\s+as\s+(?P<times>mono|di|tri)?(?P<cation>{'|'.join(_CATIONS)})(?:\s+salt)?$"
    rf"|\s+as\s+(?P<anion>{'|'.join(_ANIONS)})(?:\s+salt)?$"
    r"|\s+as\s+(?P<ion>ion|anion|cation)$|\s+as\s+(?P<free>free\s+(?:acid|base)|acid|base)$",
    re.IGNORECASE,
)
_HYDRATE = pattern_of(
    rf"\s+(?:as\s+)?(?:(?P<number>{'|'.join(_WATERS)})hydrate|(?P<none>anhydrous))$", re.IGNORECASE
)


def split_form(text: str) -> tuple[str, WeighedForm]:
    """A unit's text without the words of its form, and the form.

    Examples
    --------
    >>> split_form("g/L as sodium salt trihydrate")[1].water
    Fraction(3, 1)
    """
    body, water = text, Fraction(0)
    hydrate = _HYDRATE.search(body)
    if hydrate:
        body = body[: hydrate.start()]
        water = Fraction(_WATERS[hydrate["number"].lower()]) if hydrate["number"] else water
    salt = _SALT.search(body)
    if salt:
        body = body[: salt.start()]
    words = text[len(body) :].strip()
    if not words:
        return body, FREE
    if salt and salt["ion"]:
        return body, WeighedForm(WeighedAs.ION, water=water, words=words)
    if salt and (salt["cation"] or salt["anion"]):
        partner = (salt["cation"] or salt["anion"]).lower()
        number = _TIMES[(salt["times"] or "").lower()]
        return body, WeighedForm(WeighedAs.SALT, partner, number, water, words)
    return body, WeighedForm(water=water, words=words)


def weighed_mass(substance: Substance, form: WeighedForm) -> Fraction | None:
    """Grams weighed per mole of a species; None where the species has no such form.

    Grams of an acid or of its ion are grams of the free acid unless the form says otherwise;
    ash is weighed with biomass.

    Examples
    --------
    >>> from fluxnet.chemistry.catalogue import find_compound
    >>> acetate = find_compound("acetate")
    >>> substance = Substance("acetate", acetate.formula, acetate.formula_ph7)
    >>> [float(weighed_mass(substance, split_form("g" + words)[1]))
    ...  for words in ("", " as ion", " as sodium salt")]
    [60.052, 59.044, 82.034]
    """
    ion = substance.formula_ph7 or substance.formula
    if form.kind is WeighedAs.ION:
        counts = dict(ion.counts) if ion.charge else None
    else:
        counts = dict(free_form(substance.formula).counts)
        if form.kind is WeighedAs.SALT:
            counts = _salt(counts, int(ion.charge), form)
    if counts is None:
        return None
    mass = sum((n * _weight(element) for element, n in counts.items()), Fraction(0))
    water = 2 * _weight("H") + _weight("O")
    return (mass + form.water * water) / (1 - substance.ash)


def _salt(
    counts: dict[str, Fraction], charge: int, form: WeighedForm
) -> dict[str, Fraction] | None:
    """The counts of the salt of an acid with a cation, or of a base with an acid."""
    total = dict(counts)
    partner: Mapping[str, int | Fraction]
    if form.partner in _CATIONS:
        partner, strength = _CATIONS[form.partner]
        if charge >= 0 and form.number is None:
            return None
        times = Fraction(form.number) if form.number else Fraction(-charge, strength)
        total["H"] = total.get("H", Fraction(0)) - times * strength
        if total["H"] < 0:
            return None
    else:
        partner, times = _ANIONS[form.partner], Fraction(max(charge, 1))
        if charge < 0:
            return None
    for element, n in partner.items():
        total[element] = total.get(element, Fraction(0)) + times * n
    return total


def _weight(element: str) -> Fraction:
    return Fraction(repr(ATOMIC_WEIGHT[element]))
