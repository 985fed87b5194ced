"""All that is checked line by line, in one call: ``?`` solved, signs, balances, variants."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.names import Severity
from fluxnet.network.balance import check_balances
from fluxnet.network.coefficients import check_coefficients
from fluxnet.network.model import Network, Reaction
from fluxnet.network.unknown import solve_unknowns
from fluxnet.network.variant import check_variants

__all__ = ["settle_lines"]


def settle_lines(
    network: Network, told: Iterable[Diagnostic] = ()
) -> tuple[Network, tuple[Diagnostic, ...]]:
    """Solve the ``?`` of a network and check each line by itself.

    Parameters
    ----------
    network
        A network as read.
    told
        What reading it has found. Reactions on lines with an error, and those with a species
        declared on such a line, are left out, so that each cause is told once and a fault in
        one line hides none in another.

    Returns
    -------
    Network
        With its ``?`` solved.
    tuple of Diagnostic
        The new findings. With errors in ``told`` variants are not tried and no notes are made.
    """
    told = tuple(told)
    faulty = {
        (d.span.file, d.span.line) for d in told if d.severity is Severity.ERROR and d.span.line
    }
    spoilt = {s.name for s in network.species if (s.span.file, s.span.line) in faulty}
    spoilt |= {p.name for p in network.parameters if (p.span.file, p.span.line) in faulty}
    declared = {s.name for s in network.species} | {p.name for p in network.parameters}
    sound = tuple(
        r
        for r in network.reactions
        if (r.span.file, r.span.line) not in faulty and _names(r) <= declared - spoilt
    )
    solved, found = solve_unknowns(replace(network, reactions=sound))
    findings = [*found, *check_coefficients(solved), *check_balances(solved)]
    if has_errors(told):
        return network, in_order(d for d in findings if d.severity is not Severity.NOTE)
    after = replace(network, reactions=solved.reactions)
    if not has_errors(findings):
        findings.extend(check_variants(after))
    return after, in_order(findings)


def _names(reaction: Reaction) -> frozenset[str]:
    """All species and parameters that a reaction names."""
    names = {term.species for _, term in reaction.terms}
    for _, term in reaction.terms:
        if term.coefficient is not None:
            names |= term.coefficient.parameters
    return frozenset(names)
