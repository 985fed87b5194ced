"""The answer to "do carbon, nitrogen and electrons close?": one frozen result."""

from __future__ import annotations

from dataclasses import field
from typing import TYPE_CHECKING

from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.record import record
from fluxnet.network.model import Direction
from fluxnet.rates.kinds import RateKind

if TYPE_CHECKING:
    from fluxnet.studies.suspect_result import Suspects
    from fluxnet.studies.suspects_closure import SoughtSuspects

__all__ = ["Balance", "ClosedRate", "Closure", "ClosureTest", "RunClosure", "World"]


@record
class World:
    """What is taken to be exchanged beside the species that have a row.

    ``free`` are exchanged in any amount; ``not_exchanged`` are those of O2, CO2, H2, of the
    model's products and of the rows left out on request that are taken not to be exchanged at
    all, because they have no row. ``nitrogen`` is the nitrogen source, free or with a row.
    """

    free: tuple[str, ...]
    not_exchanged: tuple[str, ...]
    nitrogen: str = "ammonia"


@record
class Balance:
    """What comes in and goes out of one balance, as measured.

    ``name`` is ``carbon``, ``nitrogen``, ``electrons`` or an element. For electrons ``taken``
    is what substrates give and ``released`` what products and acceptors take. ``gap`` is
    released less taken; ``z`` is the gap over its sd, None where the sd is zero. ``recovery``
    and its sd are in per cent, None where nothing is taken up. Where something that was not
    measured (``missing``) takes part, z and recovery are None: the others say nothing of it.
    """

    name: str
    unit: str
    taken: float
    released: float
    gap: float
    sd: float
    z: float | None
    recovery: float | None
    recovery_sd: float | None
    missing: tuple[str, ...] = ()


@record
class ClosureTest:
    """The test of all balances at once.

    ``h`` is chi-squared with ``dof`` degrees of freedom when nothing is wrong; ``limit`` is
    its 0.95 quantile. All but ``dof`` are None without redundancy. Where exact values
    contradict one another ``h`` is None and ``closes`` is False.
    """

    h: float | None
    dof: int
    p: float | None
    limit: float | None
    closes: bool | None


@record
class ClosedRate:
    """One rate with a row, or a ratio of two: as measured, and as the balances would have it.

    ``species`` is the species, ``mu`` or the ratio. A magnitude in ``direction`` (None for mu
    and ratios), in ``unit``; below zero it is reversed.
    ``measured`` and ``sd`` are None where it was not measured; ``sd`` is that of the table (the
    test takes a relative one of the reconciled value). ``reconciled`` and its sd are None
    where nothing determines the rate, or exact values contradict one another. ``z`` is the
    change over its sd, positive where the rate was raised; None where no balance tests it.
    """

    species: str
    direction: Direction | None
    unit: str
    measured: float | None
    sd: float | None
    reconciled: float | None
    reconciled_sd: float | None
    z: float | None
    kind: RateKind

    @property
    def is_reversed(self) -> bool:
        """Whether it came out against its direction."""
        return self.reconciled is not None and self.reconciled < 0


@record
class RunClosure:
    """The closure of one run.

    ``or_index`` is None where oxygen or another acceptor has a row. ``reference`` is the
    nitrogen compound that counts as holding no electrons. ``contradictions`` name exact values
    that cannot hold together, one entry a relation; ``left_out`` are rows that closure cannot
    use. ``words`` is the verdict. ``sought`` holds what was weighed to find ``suspects``.
    ``residual`` is the largest imbalance of the reconciled rates, relative to their terms.
    """

    run: str
    unit: str
    balances: tuple[Balance, ...]
    or_index: float | None
    test: ClosureTest
    world: World
    rates: tuple[ClosedRate, ...]
    reference: str
    words: str
    contradictions: tuple[tuple[str, ...], ...] = ()
    left_out: tuple[str, ...] = ()
    notes: tuple[str, ...] = ()
    residual: float = 0.0
    extras: tuple[tuple[str, str], ...] = ()
    sought: SoughtSuspects | None = field(default=None, repr=False, compare=False)

    @property
    def is_sound(self) -> bool:
        """Whether nothing rejects the rates (without redundancy nothing can)."""
        return self.test.closes is not False

    @property
    def suspects(self) -> Suspects | None:
        """What could be wrong, as records made anew; None where it was not looked for."""
        return None if self.sought is None else self.sought.tell()

    def find_balance(self, name: str) -> Balance | None:
        """The balance of that name, or None."""
        return next((b for b in self.balances if b.name == name), None)

    def find_rate(self, species: str) -> ClosedRate | None:
        """The first rate of that species, or None."""
        return next((r for r in self.rates if r.species == species), None)


@record
class Closure:
    """The closures of all runs that were asked for, and what could not be done."""

    runs: tuple[RunClosure, ...]
    diagnostics: tuple[Diagnostic, ...] = ()

    @property
    def is_sound(self) -> bool:
        """Whether every run could be closed, and none is rejected."""
        return not has_errors(self.diagnostics) and all(run.is_sound for run in self.runs)
