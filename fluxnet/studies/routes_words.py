"""Why a network has no route."""

from __future__ import annotations

from fluxnet.studies.routes_system import RouteSystem

__all__ = ["why_none"]

_MOST = 4


def why_none(system: RouteSystem) -> str:
    """What keeps every reaction from running, as far as single balances tell."""
    network, cone = system.network, system.cone
    told: list[str] = []
    for species in network.balanced:
        uses = [(r, sign) for r in network.reactions for sign, t in r.terms
                if t.species == species.name]  # fmt: skip
        ways = {sign for r, sign in uses} | {-sign for r, sign in uses if r.reversible}
        if len({r.name for r, _ in uses}) == 1 or len(ways) == 1:
            one = uses[0][0].name
            how = "made" if ways == {1} else "used" if ways == {-1} else f"in {one} alone"
            told.append(f"{species.name} is only {how}" if "alone" not in how else
                        f"{species.name} stands {how}")  # fmt: skip
    if told:
        more = f", and {len(told) - _MOST} more" if len(told) > _MOST else ""
        return f"{'; '.join(told[:_MOST])}{more}."
    if not cone.rows:
        return "The model has no reaction that could run."
    return (
        "Every species is made and used somewhere, but no proportion of the reactions balances "
        "all of them: fluxnet check tells which reactions can carry no flux, and why."
    )
