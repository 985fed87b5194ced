"""A lumped model, as data: what became of each intermediate and reaction, and what proves it."""

from __future__ import annotations

from enum import Enum
from fractions import Fraction

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.record import record
from fluxnet.network.expression import Expression
from fluxnet.network.model import Network, Reaction
from fluxnet.studies.lump_bundle import Bundle

__all__ = [
    "Dropped", "Eliminated", "Event", "Fate", "Gone", "Kept", "Lump", "LumpProof", "Lumped",
    "Spared", "Weights", "Why",
]  # fmt: skip


Weights = tuple[tuple[str, Expression], ...]


class Why(Enum):
    """Why an intermediate is kept."""

    ASKED = "asked for"
    CROSSES = "passed between compartments"
    LIMITED = "beside a limit or a measured value"
    VARIANT = "beside what a variant changes"
    HELD = "beside a reaction to keep"
    FREE = "any reaction may use it unwritten"
    UNUSED = "no reaction uses it"
    PARAMETER = "a parameter stands in its coefficients"
    SIGN = "a coefficient would not keep its sign"
    BALANCE = "the lumped line would not balance exactly"
    WIDE = "coefficients would lie too far apart"
    GROWTH = "too many reactions would come of it"


@record
class Kept:
    """An intermediate that stays, and why; ``words`` say it in full."""

    species: str
    why: Why
    words: str


@record
class Eliminated:
    """A species taken out: the bundles that passed it on, and those in their place."""

    species: str
    before: tuple[Bundle, ...]
    after: tuple[Bundle, ...]


@record
class Dropped:
    """A bundle that can be spared: others of its compartment make the same.

    ``parts`` are these with their amounts; empty where it makes nothing of nothing.
    """

    bundle: Bundle
    parts: tuple[tuple[Fraction, Bundle], ...]


Event = Eliminated | Dropped


@record
class LumpProof:
    """What was found when every step was reckoned again.

    ``steps`` species taken out, ``sums`` bundles spared, ``lines`` written lines compared with
    the reactions they stand for. ``fault`` says what did not agree; empty where all did.
    """

    steps: int
    sums: int
    lines: int
    fault: str = ""

    @property
    def verified(self) -> bool:
        """Whether everything agreed."""
        return not self.fault


@record
class Lump:
    """A lumped reaction, the reactions that it stands for, and other ways to do the same."""

    reaction: Reaction
    weights: Weights
    others: tuple[Weights, ...] = ()


class Fate(Enum):
    """Why a reaction stands in no line any more."""

    DEAD = "it can never run"
    LOOP = "it only runs in a circle"
    SPARED = "others do the same"


@record
class Gone:
    """A reaction that stands in no line of the lumped model, and why."""

    reaction: str
    fate: Fate


@record
class Spared:
    """Reactions together that others do as well, and these: so they are left out."""

    weights: Weights
    same_as: Weights


@record
class Lumped:
    """A lumped model.

    ``original`` is the network that was lumped, ``network`` what reading ``text`` gives.
    ``loops`` are sets of reactions that made nothing of nothing.
    """

    original: Network
    network: Network
    text: str
    keep: tuple[str, ...]
    eliminated: tuple[str, ...]
    kept: tuple[Kept, ...]
    lumps: tuple[Lump, ...]
    loops: tuple[Weights, ...]
    spared: tuple[Spared, ...]
    gone: tuple[Gone, ...]
    proof: LumpProof
    diagnostics: tuple[Diagnostic, ...] = ()

    @property
    def is_sound(self) -> bool:
        """Whether it is proven to do the same."""
        return self.proof.verified
