"""What a check shows: the verdict, what was counted, ATP per substrate, what to measure."""

from __future__ import annotations

from typing import Any

from fluxnet.checks.freedom import Freedom
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Severity
from fluxnet.ground.table import Align, Column, Table
from fluxnet.network.model import Quantity
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.records import diagnostic_record
from fluxnet.presenting.screen import Block, Heading, Mood, Sentence
from fluxnet.studies.check import CheckResult

__all__ = ["check_record", "check_screen", "findings_record"]


def check_screen(result: CheckResult, file: str = "") -> tuple[Block, ...]:
    """Everything below the findings themselves; ``file`` is shown before the title."""
    counts = result.counts
    variant = result.network.variant
    blocks: list[Block] = [
        Heading(f"{': '.join(part for part in (file, result.network.title) if part)}"
                f"{'' if variant == 'base' else f', variant {variant}'}".removeprefix(", ")),
        Sentence(
            f"{_some(counts.reactions, 'reaction')} in "
            f"{_some(counts.compartments, 'compartment')}, {counts.species} species, of which "
            f"{_some(counts.carriers, 'carrier')}; "
            f"{_some(counts.parameters, 'parameter')}, {_some(counts.limits, 'limit')}."
        ),
        _verdict(result.diagnostics),
    ]  # fmt: skip
    if result.most_atp:
        blocks.append(_most_atp(result))
    blocks += [*_freedom(result), _findings(result.diagnostics)]
    return tuple(blocks)


def _findings(diagnostics: tuple[Diagnostic, ...]) -> Table:
    """All findings as data: on screen they stand before everything else, with their lines."""
    keys = ("name", "severity", "message", "file", "line", "column", "end_column", "because",
            "mend", "accepted")  # fmt: skip
    records = [diagnostic_record(diagnostic) for diagnostic in diagnostics]
    rows = tuple(tuple(record[key] for key in keys) for record in records)
    return Table("findings", "Findings", tuple(Column("", key) for key in keys), rows)


def _verdict(diagnostics: tuple[Diagnostic, ...]) -> Sentence:
    live = [d for d in diagnostics if d.accepted is None]
    errors, warnings = (
        sum(d.severity is severity for d in live) for severity in (Severity.ERROR, Severity.WARNING)
    )
    accepted = len(diagnostics) - len(live)
    tail = f" ({_some(accepted, 'accepted warning')})" if accepted else ""
    if errors:
        text = f"Not sound: {_some(errors, 'error')}, {_some(warnings, 'warning')}{tail}."
        return Sentence(text, Mood.BAD, verdict=True)
    if warnings:
        text = f"No error, {_some(warnings, 'warning')}{tail}: every line balances."
        return Sentence(text, Mood.DOUBTFUL, verdict=True)
    if accepted:
        text = f"No error; {_some(accepted, 'accepted warning')}: every line balances."
        return Sentence(text, Mood.GOOD, verdict=True)
    text = "Sound: every line balances, nothing comes out of nothing, nothing is blocked."
    return Sentence(text, Mood.GOOD, verdict=True)


def _most_atp(result: CheckResult) -> Table:
    columns = (
        Column("substrate", "substrate"),
        Column("carrier", "carrier"),
        Column("most, mol/mol", "", align=Align.RIGHT),
        Column("", "amount"),
        Column("by", "conversion", wrap=44),
    )
    rows = tuple(
        (
            most.substrate,
            most.carrier,
            "no end" if most.amount is None else format_number(float(most.amount)),
            None if most.amount is None else float(most.amount),
            most.equation,
        )
        for most in result.most_atp
    )
    return Table("most_energy", "The most that one mole of substrate can make", columns, rows)


def _freedom(result: CheckResult) -> list[Block]:
    freedom = result.freedom
    blocks: list[Block] = [
        Sentence(
            f"The balances leave {_some(freedom.dimension, 'degree')} of freedom. "
            + _needed(freedom.needed, freedom.fixed)
        )
    ]
    if not freedom.boundary_enough:
        blocks.append(
            Sentence(
                "Rates across the boundary alone do not determine every flux: the reactions "
                "named have twins or run in circles, or stand beside routes with the same result."
            )
        )
    if freedom.measured:
        blocks.append(
            Sentence(
                f"The run's rates leave {freedom.left} of them open and hold "
                f"{_some(freedom.redundancy, 'redundant value')}; determined: "
                f"{', '.join(freedom.determined) or 'no flux'}."
            )
        )
        if freedom.missing:
            missing = ", ".join(map(str, freedom.missing))
            blocks.append(Sentence(f"To determine the rest, measure also: {missing}."))
    return [*blocks, *_testing(freedom)]


def _testing(freedom: Freedom) -> list[Block]:
    """What to measure so that an error in any measured value shows."""
    blocks: list[Block] = []
    if freedom.measured and not (freedom.untested or freedom.to_test):
        blocks.append(Sentence("Each of these values is tested by the others."))
    if freedom.to_test:
        values = "these values" if freedom.measured else "them"
        count = _some(freedom.redundancy_then, "redundant value")
        blocks.append(
            Sentence(
                f"To have {values} tested, so that an error in one shows, measure also: "
                f"{', '.join(map(str, freedom.to_test))} ({count} then)."
            )
        )
    if freedom.never_tested:
        names = ", ".join(map(str, freedom.never_tested))
        blocks.append(Sentence(f"An error in {names} shows in no rate across the boundary."))
    return blocks


def _needed(needed: tuple[Quantity, ...], fixed: tuple[Quantity, ...]) -> str:
    beside = f" beside {', '.join(map(str, fixed))}, which limits give" if fixed else ""
    if not needed:
        return f"Nothing need be measured{beside}."
    return f"To determine every flux, measure{beside}: {', '.join(map(str, needed))}."


def _some(count: int, what: str) -> str:
    return f"{count} {what}{'' if count == 1 else 's'}"


def findings_record(diagnostics: tuple[Diagnostic, ...]) -> dict[str, Any]:
    """The body of a ``check/1`` document where no network could be made."""
    return {
        "diagnostics": [diagnostic_record(d) for d in diagnostics],
        "variant": "base",
        "counts": None,
        "freedom": None,
        "most_energy": [],
        "blocked": [],
        "loops": [],
        "compositions": [],
        "verified": None,
    }


def check_record(result: CheckResult) -> dict[str, Any]:
    """The body of a ``check/1`` document."""
    counts, freedom = result.counts, result.freedom
    return {
        "diagnostics": [diagnostic_record(d) for d in result.diagnostics],
        "variant": result.network.variant,
        "counts": {
            "species": counts.species,
            "reactions": counts.reactions,
            "compartments": counts.compartments,
            "carriers": counts.carriers,
            "parameters": counts.parameters,
            "limits": counts.limits,
        },
        "freedom": {
            "dimension": freedom.dimension,
            "measured_needed": [str(q) for q in freedom.needed],
            "fixed": [str(q) for q in freedom.fixed],
            "measured": [str(q) for q in freedom.measured],
            "left": freedom.left,
            "redundancy": freedom.redundancy,
            "determined": list(freedom.determined),
            "undetermined": list(freedom.undetermined),
            "missing": [str(q) for q in freedom.missing],
            "untested": [str(q) for q in freedom.untested],
            "to_test": [str(q) for q in freedom.to_test],
            "redundancy_then": freedom.redundancy_then,
            "never_tested": [str(q) for q in freedom.never_tested],
        },
        "most_energy": [
            {
                "substrate": most.substrate,
                "carrier": most.carrier,
                "amount": most.amount,
                "conversion": [
                    {"species": name, "coefficient": amount} for name, amount in most.conversion
                ],
                "free_energy_kJ_mol": most.free_energy,
                "verified": most.verified,
            }
            for most in result.most_atp
        ],
        "blocked": list(result.blocked_reactions),
        "loops": [
            {"makes": loop.species, "reactions": list(loop.reactions)}
            for loop in result.loops
        ],
        "compositions": [
            {"species": implied.species, "contents": dict(implied.contents)}
            for implied in result.compositions.implied
        ],
        "verified": result.verified,
    }
