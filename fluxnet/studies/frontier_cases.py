"""The networks of a trade-off: combinations of variants, and the quantities in each."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import product

from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.ground.names import Name, Severity
from fluxnet.network.model import Network
from fluxnet.network.variant import BASE, apply_variant
from fluxnet.studies.frontier_axis import Axis, read_axis
from fluxnet.studies.frontier_over import find_moved_limit

__all__ = ["Cases", "common_parts", "find_cases", "first_that_knows", "read_axes"]

Cases = tuple[tuple[str, str, Network], ...]
"""Name, label and network of each combination of variants."""

_MOST_CURVES = 200


def find_cases(
    network: Network, across: Sequence[str]
) -> tuple[Cases, tuple[tuple[str, str], ...], tuple[str, ...]]:
    """All combinations of variants: name, label and network; those that make none; warnings."""
    if not across:
        return ((BASE, "", network),), (), ()
    lists = [[part.strip() for part in text.split("|")] for text in across]
    if any(not name for names in lists for name in names):
        raise MisuseError(f"a variant's name is missing in --across {' '.join(across)!r}")
    combinations = list(product(*lists))
    if len(combinations) > _MOST_CURVES:
        raise MisuseError(
            f"{len(combinations)} combinations are more than a figure can show: take at most "
            f"{_MOST_CURVES}"
        )
    found: list[tuple[str, str, Network]] = []
    skipped: list[tuple[str, str]] = []
    faults: list[Diagnostic] = []
    warnings: dict[str, None] = {}
    for names in combinations:
        parts = dict.fromkeys(p.strip() for n in names for p in n.split("*") if p.strip() != BASE)
        label = " * ".join(parts) or BASE
        changed, told = apply_variant(network, label)
        unknown = [d for d in told if d.name is Name.UNKNOWN_VARIANT]
        if unknown:
            raise InputError(tuple(unknown))
        if changed is None:
            errors = [d for d in told if has_errors([d])]
            faults += errors
            skipped.append((label, "; ".join(d.message for d in errors)))
            continue
        warnings |= dict.fromkeys(
            f"{d.message[:1].upper()}{d.message[1:]}."
            for d in told
            if d.severity is Severity.WARNING and d.accepted is None
        )
        if set(parts) not in [set(known.split(" * ")) - {BASE} for known, _, _ in found]:
            found.append((label, label, changed))
    if len(found) > 1:
        found = [(name, _shortened(name, common_parts(found)), there) for name, _, there in found]
    if not found:
        raise InputError(tuple(dict.fromkeys(faults)))
    return tuple(found), tuple(dict.fromkeys(skipped)), tuple(warnings)


def common_parts(cases: Sequence[tuple[str, str, Network]]) -> tuple[str, ...]:
    """The variants that all combinations have."""
    parts = [name.split(" * ") for name, _, _ in cases]
    return tuple(p for p in parts[0] if p != BASE and all(p in other for other in parts))


def _shortened(name: str, common: Sequence[str]) -> str:
    return " * ".join(p for p in name.split(" * ") if p not in common) or BASE


def first_that_knows(cases: Cases, over: str) -> Network:
    """The first network that knows what is to be moved; else the first, which says so."""
    for _, _, network in cases:
        if any(p.name == over.strip() for p in network.parameters):
            return network
        try:
            find_moved_limit(over, network)
        except MisuseError:
            continue
        return network
    return cases[0][2]


def read_axes(cases: Cases, texts: Sequence[str]) -> tuple[Axis, ...]:
    """The quantities, as the first network that has them all reads them.

    Raises
    ------
    MisuseError
        Where none has: what the first one says.
    """
    fault: MisuseError | None = None
    for _, _, network in cases:
        try:
            return tuple(read_axis(text, network) for text in texts)
        except MisuseError as told:
            fault = fault or told
    raise fault or MisuseError("there is no network")
