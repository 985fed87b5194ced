"""A reading's last step: ``?`` solved and lines balanced, by the network's own functions."""

from __future__ import annotations

from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.names import Severity
from fluxnet.network.balance import check_balances
from fluxnet.network.coefficients import check_coefficients
from fluxnet.network.model import Network
from fluxnet.network.unknown import solve_unknowns
from fluxnet.reading.scope import Scope

__all__ = ["balance_reading"]


def balance_reading(network: Network, scope: Scope) -> Network:
    """The network with its ``?`` solved; what is wrong goes to the scope's findings.

    Where lines have faults of their own the others are looked at all the same, and variants
    are applied to what is sound; no notes are made then.
    """
    findings = scope.findings.found
    settled = network
    if has_errors(findings):
        told = _checked(network, scope)
        findings.extend(d for d in told if d.severity is not Severity.NOTE)
    else:
        settled, unsolved = solve_unknowns(network)
        findings.extend((*unsolved, *check_coefficients(settled), *check_balances(settled)))
    if settled.variants:
        from fluxnet.network.variant import check_variants  # most models have none

        findings.extend(check_variants(settled, tuple(findings), scope.doubt))
    return settled


def _checked(network: Network, scope: Scope) -> list[Diagnostic]:
    """Findings on the reactions whose species all have a sound declaration."""
    declared = set(scope.species) - scope.broken
    sound = tuple(
        r for r in network.reactions if all(t.species in declared for _, t in r.terms)
    )
    alone, unsolved = solve_unknowns(replace(network, reactions=sound))
    return [*unsolved, *check_coefficients(alone), *check_balances(alone)]
