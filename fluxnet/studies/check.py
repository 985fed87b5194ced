"""The whole check of a model: every question about the network, each cause told once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction

from fluxnet.checks.blocked import Blocked, find_blocked
from fluxnet.checks.blocked_words import tell_blocked
from fluxnet.checks.carriers import tell_one_way_carriers
from fluxnet.checks.composition import CompositionResult, find_compositions
from fluxnet.checks.composition_words import tell_compositions, without_settled
from fluxnet.checks.cone import flux_cone
from fluxnet.checks.energy import MostEnergy, find_most_energy, tell_too_much_energy
from fluxnet.checks.freedom import Freedom, Known, measure_freedom
from fluxnet.checks.graph import (
    DeadEnd,
    Part,
    find_dead_ends,
    find_parts,
    tell_dead_ends,
    tell_parts,
)
from fluxnet.checks.interior import find_interior
from fluxnet.checks.nothing import Loop, Made, find_from_nothing, tell_from_nothing
from fluxnet.checks.twins import check_twins
from fluxnet.checks.unused import check_substrates, check_unused
from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order, silence
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.ground.source import Source
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network
from fluxnet.rates.measured import Run

__all__ = ["CheckResult", "Counts", "check_network"]

_STEPS = (
    "dead ends and twins", "what can run", "something from nothing", "blocked reactions",
    "energy per substrate", "degrees of freedom", "compositions",
)


@record
class Counts:
    """How large the model is."""

    species: int
    reactions: int
    compartments: int
    carriers: int
    parameters: int
    limits: int


@record
class CheckResult:
    """All that the check found.

    ``diagnostics`` are those of the reader and of the checks, errors first, accepted ones
    marked. ``freedom`` tells the degrees of freedom, what is determined, and what to measure;
    ``most_atp`` the most ATP per mole of each substrate; ``blocked`` the reactions without
    flux by cause; ``loops`` what makes something out of nothing; ``dead_ends`` and ``parts``
    what the drawing shows; ``compositions`` those that the lines imply or rule out.
    ``verified``: what can run and what cannot was proven in exact arithmetic throughout.
    """

    network: Network
    diagnostics: tuple[Diagnostic, ...]
    counts: Counts
    freedom: Freedom
    most_atp: tuple[MostEnergy, ...]
    blocked: tuple[Blocked, ...]
    loops: tuple[Loop, ...]
    dead_ends: tuple[DeadEnd, ...]
    parts: tuple[Part, ...]
    compositions: CompositionResult
    verified: bool

    @property
    def sound(self) -> bool:
        """Whether no error was found."""
        return not has_errors(self.diagnostics)

    @property
    def blocked_reactions(self) -> tuple[str, ...]:
        """All reactions that can carry no flux, in the order of the model."""
        names = {name for group in self.blocked for name in group.reactions}
        return tuple(r.name for r in self.network.reactions if r.name in names)


def check_network(
    network: Network,
    diagnostics: Sequence[Diagnostic] = (),
    *,
    rates: Run | None = None,
    sources: Sequence[Source] = (),
    progress: Progress = silent,
) -> CheckResult:
    """Check a network whose lines are read, balanced and solved.

    Parameters
    ----------
    diagnostics
        Those that reading gave, to be told together with the rest.
    rates
        A run: which fluxes its measured rates determine, and what is missing.
    sources
        The texts the network was read from, for the lines that diagnostics show.

    Raises
    ------
    ValueError
        Where a ``?`` of the network is not solved.
    ArithmeticError
        Where the linear solver gives up.
    """

    def step(k: int) -> None:
        progress(_STEPS[k] if k < len(_STEPS) else "done", k, len(_STEPS))

    step(0)
    stoich = stoichiometry(network)
    starved = check_substrates(network)
    dead_ends = find_dead_ends(network, stoich)
    closed = {name for end in dead_ends for name in end.blocked}
    parts = tuple(
        p for p in find_parts(network, stoich) if closed.isdisjoint(p.reactions)
    )
    told = [
        *diagnostics,
        *starved,
        *tell_dead_ends(network, dead_ends),
        *tell_one_way_carriers(network, dead_ends),
        *(() if starved else tell_parts(network, parts)),
        *check_twins(network, stoich),
        *check_unused(network),
    ]
    step(1)
    cone = flux_cone(network, stoich)
    interior = find_interior(cone)
    step(2)
    nothing = find_from_nothing(network, stoich)
    told.extend(tell_from_nothing(network, nothing.loops))
    step(3)
    blocked: tuple[Blocked, ...] = ()
    if not starved:
        blocked = find_blocked(network, cone, interior, dead_ends, parts)
        told.extend(tell_blocked(network, blocked, proven=interior.verified))
    step(4)
    most = find_most_energy(network, stoich)
    told.extend(tell_too_much_energy(network, most))
    step(5)
    freedom = measure_freedom(network, stoich, interior.space, _known(rates))
    step(6)
    compositions = find_compositions(network)
    told = [
        *without_settled(told, network, compositions),
        *tell_compositions(network, _without_causes(compositions, nothing.loops)),
    ]
    step(7)
    return CheckResult(
        network=network,
        diagnostics=in_order(silence(_with_lines(told, sources), network.acceptances)),
        counts=Counts(
            len(network.species),
            len(network.reactions),
            len(network.compartments),
            len(network.carriers),
            len(network.parameters),
            len(network.limits),
        ),
        freedom=freedom,
        most_atp=most,
        blocked=blocked,
        loops=nothing.loops,
        dead_ends=dead_ends,
        parts=parts,
        compositions=compositions,
        verified=interior.verified and nothing.verified and all(m.verified for m in most),
    )


def _without_causes(compositions: CompositionResult, loops: Sequence[Loop]) -> CompositionResult:
    """Without the contradictions that a loop shows already.

    Matter or electrons from nothing rule out every composition of the species on the way, so
    that both name the same reactions; the loop says it more plainly.
    """
    shown = {name for loop in loops if loop.kind is not Made.ENERGY for name in loop.reactions}
    return replace(
        compositions,
        contradictions=tuple(
            c for c in compositions.contradictions
            if shown.isdisjoint(r.name for r in c.reactions)
        ),
    )


def _known(run: Run | None) -> tuple[Known, ...]:
    if run is None:
        return ()
    return tuple(
        Known(rate.quantity, Fraction(rate.value))
        for rate in run.measured
        if rate.value is not None
    )


def _with_lines(
    diagnostics: Sequence[Diagnostic], sources: Sequence[Source]
) -> list[Diagnostic]:
    """Each diagnostic with the user's own line, where the text is at hand."""
    texts = {source.file: source for source in sources}
    return [
        replace(d, source_line=texts[d.span.file].line(d.span.line))
        if d.source_line is None and d.span.line and d.span.file in texts
        else d
        for d in diagnostics
    ]


