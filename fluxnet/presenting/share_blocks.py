"""Where errors come from, as shown: a note by default, every flux with ``--shares``."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from fluxnet.ground.table import Cell, Column, Table
from fluxnet.presenting.numbers import format_measured
from fluxnet.presenting.screen import Block, Sentence
from fluxnet.studies.shares import Correlated, Share
from fluxnet.studies.solution import FluxSolution

__all__ = ["correlated_words", "share_blocks", "share_notes", "share_words"]

_MOST_SHARES = 3
_LEAST_SHARE = 0.1
_MOST_GROUPS = 3
_MOST_CARRIERS = 2
_MOST_MEMBERS = 6


def share_words(shares: Sequence[Share]) -> str:
    """The largest sources: ``K_X 52%, PO 35%``."""
    told = [s for s in shares[:_MOST_SHARES] if s.share >= _LEAST_SHARE] or shares[:1]
    return ", ".join(f"{s.source} {s.share:.0%}" for s in told)


def share_notes(run: FluxSolution) -> list[str]:
    """For the first carriers, what the least certain line of their ledger rests on."""
    notes: list[str] = []
    for carrier in list(dict.fromkeys(line.carrier for line in run.ledger))[:_MOST_CARRIERS]:
        lines = [x for x in run.ledger if x.carrier == carrier and x.shares and x.sd]
        if lines:
            most = max(lines, key=lambda x: x.sd or 0.0)
            notes.append(f"± of {carrier}, {most.compartment}, from: {share_words(most.shares)}")
    return notes


def correlated_words(run: FluxSolution) -> list[Block]:
    """The parameters, and the fluxes, that these data tell only together."""
    blocks: list[Block] = [
        Sentence(f"Told only together by these data: {_group(g)}.") for g in run.correlated_numbers
    ]
    groups = run.correlated_fluxes
    if groups:
        told = "; ".join(_group(g) for g in groups[:_MOST_GROUPS])
        more = len(groups) - _MOST_GROUPS
        rest = f"; and {more} more groups, which --json gives" if more > 0 else ""
        blocks.append(Sentence(f"Fluxes that go together within their errors: {told}{rest}."))
    return blocks


def _group(group: Correlated) -> str:
    names = [
        name if r > 0 else f"{name} against them" if len(group.members) > 2 else name
        for name, r in group.members[:_MOST_MEMBERS]
    ]
    if len(group.members) > _MOST_MEMBERS:
        names.append(f"{len(group.members) - _MOST_MEMBERS} more")
    if len(group.members) == 2:
        return f"{names[0]} and {names[1]} (r = {group.members[1][1]:.2f})"
    return f"{', '.join(names[:-1])} and {names[-1]} (|r| above {group.least:.2f})"


def share_blocks(run: FluxSolution, *, shown: bool) -> list[Block]:
    """Every flux and line of the ledger with its sources: shown, or as data alone."""
    columns = (
        Column("flux", "name"),
        Column("value", "", wrap=22),
        Column("its error comes from", "", wrap=44),
    )
    blocks: list[Block] = []
    if shown:
        rows: list[tuple[Cell, ...]] = [
            (name, format_measured(value, sd), share_words(shares))
            for name, value, sd, shares in _all(run)
        ]
        if rows:
            title = f"Where the errors come from [{run.unit}]"
            plain = tuple(Column(c.title, "", wrap=c.wrap) for c in columns)
            blocks.append(Table("", title, plain, tuple(rows)))
    data = tuple(
        (name, share.source, share.share)
        for name, _, _, shares in _all(run)
        for share in shares
    )
    if data:
        keys = tuple(Column("", key) for key in ("name", "source", "share"))
        blocks.append(Table("shares", "Shares of the variance", keys, data))
    return blocks


def _all(run: FluxSolution) -> Iterable[tuple[str, float, float | None, tuple[Share, ...]]]:
    for flux in run.fluxes:
        if flux.shares:
            yield flux.reaction, flux.value, flux.sd, flux.shares
    for line in run.ledger:
        if line.shares:
            yield f"{line.carrier}, {line.compartment}", line.net, line.sd, line.shares
