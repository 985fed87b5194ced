"""What a comparison keeps back for other purposes than the product: growth, a by-product."""

from __future__ import annotations

import re
from fractions import Fraction

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Quantity, QuantityKind
from fluxnet.solving.quantities import has_mu
from fluxnet.studies.aims import name_quantity

__all__ = ["Reserve", "read_reserve"]

_FORM = re.compile(
    r"(?P<what>[^=<>]+?)\s*>?=\s*(?P<value>(?:\d{1,15}(?:\.\d{0,15})?|\.\d{1,15})(?:[eE][+-]?\d)?)",
    re.ASCII,
)


@record
class Reserve:
    """At least so much of a rate, of mu, or of a ratio of two rates."""

    quantity: Quantity
    value: Fraction
    words: str


def read_reserve(text: str, network: Network) -> Reserve:
    """What ``mu = 0.05``, ``X / glucose = 0.1`` or ``acetate = 2`` keeps back.

    A ratio is one of moles; a rate is in the unit of the model's basis.

    Raises
    ------
    MisuseError
        Where it is written in another way, or names nothing.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> kept = read_reserve("X / glucose = 0.1", read_model_text(MODEL).network)
    >>> kept.words, kept.value
    ('X out / glucose in >= 0.1', Fraction(1, 10))
    """
    found = _FORM.fullmatch(text.strip())
    if found is None:
        raise MisuseError(
            f"a reserve is written `mu = 0.05` or `X / glucose = 0.1`, not {text.strip()!r}"
        )
    parts = [part.split() for part in found["what"].split(" / ")]
    value = Fraction(found["value"])
    named = [name_quantity(words, network, "a reserve") for words in parts]
    if any(q.kind is QuantityKind.MU for q in named) and not has_mu(network, network.basis):
        raise MisuseError(
            f"there is no mu without biomass, or with rates in {network.basis.value}: reserve a "
            "ratio of the biomass to the substrate"
        )
    if len(named) > 2 or any(q.kind is QuantityKind.SURPLUS for q in named):
        raise MisuseError(f"a reserve is of a rate, mu, a flux or a ratio of two, not {text!r}")
    quantity = named[0]
    if len(named) == 2:
        quantity = Quantity(QuantityKind.RATIO, numerator=named[0], denominator=named[1])
    return Reserve(quantity, value, f"{quantity} >= {found['value']}")
