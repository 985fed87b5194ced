"""What could be wrong in a run that its relations reject: the suspects, as data."""

from __future__ import annotations

from enum import Enum

from fluxnet.ground.record import record
from fluxnet.network.model import Direction
from fluxnet.studies.readings import Reading

__all__ = ["MissingContent", "Standing", "Suspect", "SuspectKind", "SuspectPair", "Suspects"]


class SuspectKind(Enum):
    """What a suspect is.

    ``MEASURED_RATE``: a gross error in a measured value. ``UNMEASURED_SPECIES``: a species
    that is released or taken up, and has no row. ``PARAMETER``: a wrong number of the model.
    ``CARRIER``: a carrier that is made or spent by what no reaction of the model has.
    """

    MEASURED_RATE = "measured_rate"
    UNMEASURED_SPECIES = "unmeasured_species"
    PARAMETER = "parameter"
    CARRIER = "carrier"


class Standing(Enum):
    """How a suspect stands before the data are looked at; the list is in this order.

    ``MEASURED``: a measured value or a parameter. ``MODEL``: a species that the model makes or
    spends. ``COMMON``: a common by-product, or air. ``RARE``: any other compound that cells
    release or that a medium may hold. ``IMPOSSIBLE``: its size has the wrong sign, or a limit
    forbids it.
    """

    MEASURED = "measured"
    MODEL = "model"
    COMMON = "common"
    RARE = "rare"
    IMPOSSIBLE = "impossible"


@record
class Suspect:
    """One thing that could be wrong, by itself.

    Of a measured value ``size`` is the error: measured less what it ``would_be``, in its
    direction and unit. Of a species it is what is released (``direction`` OUT) or taken up
    (IN), positive; of a carrier what is spent, negative where it is made. ``h_left`` is the
    test value that remains, ``p`` the chance of so large a gain where nothing is wrong,
    ``separation`` the distance to the nearest suspect of another direction in sds (None where
    there is no other). ``direction_number`` is the same for those that these measurements can
    never tell apart: each of them has the others as its ``twins``. ``group`` is 1 for those
    that cannot be told from the best one at 5 %, 2 for the others. ``readings`` are causes in
    the laboratory that make such an error, the most plausible first. ``is_declared``: a
    product of the model that has no row.
    """

    kind: SuspectKind
    name: str
    direction: Direction | None
    size: float
    sd: float
    unit: str
    h_left: float
    p: float
    separation: float | None
    standing: Standing
    group: int
    direction_number: int
    measured: float | None = None
    would_be: float | None = None
    would_be_sd: float | None = None
    why_not: str | None = None
    twins: tuple[str, ...] = ()
    readings: tuple[Reading, ...] = ()
    is_declared: bool = False

    @property
    def possible(self) -> bool:
        """Whether its size makes sense."""
        return self.standing is not Standing.IMPOSSIBLE

    @property
    def label(self) -> str:
        """Its name with its direction."""
        return self.name if self.direction is None else f"{self.name} {self.direction.value}"


@record
class SuspectPair:
    """Two things that could be wrong together, each needed; sizes are those beside the other."""

    first: Suspect
    second: Suspect
    h_left: float


@record
class MissingContent:
    """What something that was not measured would hold, if that is what is wrong.

    ``gamma`` is its electrons per carbon, with the ends of its 95 % interval; None: no end. An
    interval that does not exclude the balance without carbon has neither end.
    """

    gamma: float
    low: float | None
    high: float | None
    carbon: float
    carbon_sd: float
    unit: str


@record
class Suspects:
    """All suspects of one run, and what can be said of them together.

    ``group`` are those that cannot be told from the best one at 5 %, the most plausible first;
    ``others`` the measured values and parameters that can. ``left`` counts all others that can.
    ``tried`` counts all suspects, ``distinct`` their directions. ``explained`` tells whether
    any possible one by itself brings the test value below its 5 % limit; where none does,
    ``pairs`` holds pairs that do best. ``with_model`` tells whether a model was asked what it
    can make. ``passed`` are limits that fluxes would still pass with suspects that are for this
    reason not possible.
    """

    h: float
    dof: int
    group: tuple[Suspect, ...]
    others: tuple[Suspect, ...]
    left: int
    tried: int
    distinct: int
    explained: bool
    pairs: tuple[SuspectPair, ...] = ()
    pairs_left: int = 0
    missing: MissingContent | None = None
    with_model: bool = False
    passed: tuple[str, ...] = ()

    @property
    def all(self) -> tuple[Suspect, ...]:
        """The group, then the measured values and parameters outside of it."""
        return (*self.group, *self.others)

    def find(self, name: str) -> Suspect | None:
        """The first suspect of that name, or None."""
        return next((s for s in self.all if s.name == name), None)
