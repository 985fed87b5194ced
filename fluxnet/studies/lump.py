"""A long reaction list as a smaller model that does the same."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace
from difflib import get_close_matches
from fractions import Fraction
from textwrap import wrap

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.network.expression import ONE
from fluxnet.network.model import Network
from fluxnet.network.variant import BASE
from fluxnet.reading.model import read_model_text
from fluxnet.studies.lump_build import build_lumped, in_order, lumped_text
from fluxnet.studies.lump_bundle import Bundle, added
from fluxnet.studies.lump_holds import find_holds
from fluxnet.studies.lump_proof import prove
from fluxnet.studies.lump_result import Dropped, Event, Fate, Gone, Lumped, Spared, Weights
from fluxnet.studies.lump_steps import Elimination

__all__ = ["lump_network"]


def lump_network(
    network: Network,
    keep: Sequence[str],
    *,
    variants: bool = True,
    progress: Progress = silent,
) -> Lumped:
    """The network without the intermediates that can be taken out exactly.

    Taken out are inside species whose reactions all lie in one compartment, as long as none of
    these carries a limit or a measured value, is changed by a variant, or is to be kept. What
    crosses the boundary and carriers always stay. In each compartment the lumped reactions span
    the same cone of net conversions of what is left, whatever the parameters; each step is
    reckoned again for that (:mod:`fluxnet.studies.lump_proof`).

    Parameters
    ----------
    network
        A model without errors. Of one with a variant applied the other variants are left out.
    keep
        Species, and reactions, that are to be kept; at least one.
    variants
        Whether the lumped model has the variants too; what they name is kept for them.

    Raises
    ------
    MisuseError
        Where nothing is to be kept, or something that the network does not have.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   ethanol, CO2
    ... carrier   ATP, NADH
    ... inside    pyruvate, acetaldehyde
    ... compartment way
    ...     upper : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ...     pdc   : pyruvate -> acetaldehyde + CO2
    ...     adh   : acetaldehyde + NADH -> ethanol
    ... compartment rest
    ...     upkeep : ATP -> nothing
    ... ''').network
    >>> lumped = lump_network(network, ["ethanol"])
    >>> print(lumped.text.splitlines()[-4].strip())
    glucose-to-ethanol : glucose -> 2 ethanol + 2 CO2 + 2 ATP  # = upper + 2 pdc + 2 adh
    >>> lumped.eliminated, lumped.proof.verified
    (('pyruvate', 'acetaldehyde'), True)
    """
    asked = _asked(network, keep)
    if network.variant != BASE or not variants:
        network = _pruned(replace(network, variants=(), variant=BASE), asked)
    holds = find_holds(network, asked)
    work = Elimination(network, holds)
    kept = work.run(progress)
    values = work.settings[BASE]
    built, lumps = build_lumped(network, work.bundles, work.taken, work.events, values)
    text = lumped_text(built, lumps, _header(network, asked) if work.taken else ())
    reading = read_model_text(text, file="lumped.flux", large=True)
    if reading.network is None:
        raise AssertionError(f"a lumped model cannot be read: {reading.diagnostics[0].message}")
    held = frozenset(holds.reactions)
    loops, spared = _sums(work.events, {r.name: k for k, r in enumerate(network.reactions)})
    return Lumped(
        network, reading.network, text, asked, tuple(work.taken), kept, lumps,
        tuple(loops), tuple(spared), _gone(network, work.bundles, loops, spared),
        prove(network, reading.network, work.events, lumps, held), reading.diagnostics,
    )  # fmt: skip


def _pruned(network: Network, asked: Sequence[str]) -> Network:
    """The network without what only variants used: a check of the file would tell it as unused.

    What crosses the boundary stays, for rates tables name it.
    """
    terms = [term for reaction in network.reactions for _, term in reaction.terms]
    named = {*asked, *network.free, *(term.species for term in terms)}
    named |= {name for limit in network.limits for name in limit.quantity.names}
    named |= {s.name for s in network.boundary}
    used = {
        name for term in terms if term.coefficient is not None
        for name in term.coefficient.parameters
    }  # fmt: skip
    return replace(
        network,
        species=tuple(s for s in network.species if s.name in named),
        parameters=tuple(p for p in network.parameters if p.name in used),
    )


def _asked(network: Network, keep: Sequence[str]) -> tuple[str, ...]:
    names = tuple(dict.fromkeys(name.strip() for name in keep if name.strip()))
    if not names:
        raise MisuseError(
            "nothing is to be kept: name the species that count, such as those you measure"
        )
    known = [s.name for s in network.species] + [r.name for r in network.reactions]
    for name in names:
        if name not in known:
            near = get_close_matches(name, known, 3, 0.6)
            hint = f"near to it are {', '.join(near)}" if near else "see `fluxnet check`"
            raise MisuseError(f"the model has no species or reaction {name} to keep; {hint}")
    return names


def _header(network: Network, asked: Sequence[str]) -> list[str]:
    words = (
        f"Lumped from: {network.title or 'a model without a title'}. Kept are all carriers, all "
        f"that crosses the boundary, and {', '.join(asked)}. Behind each lumped line stands what "
        "it is the sum of."
    )
    return wrap(words, 96, break_long_words=False)


def _sums(events: Sequence[Event], place: Mapping[str, int]) -> tuple[list[Weights], list[Spared]]:
    """What only runs in a circle, and what others do as well."""
    loops: list[Weights] = []
    spared: list[Spared] = []
    for event in events:
        if isinstance(event, Dropped):
            weights = in_order(event.bundle.weights, Fraction(1), place)
            if event.bundle.net:
                parts = [(ONE.scaled(number), part) for number, part in event.parts]
                same = in_order(added(parts, reversible=False).weights, Fraction(1), place)
                spared.append(Spared(weights, same))
            else:
                loops.append(weights)
    return loops, spared


def _gone(
    network: Network, left: Iterable[Bundle], loops: Sequence[Weights], spared: Sequence[Spared]
) -> tuple[Gone, ...]:
    """The reactions that stand in no line any more, and why."""
    names = {name for b in left for name in b.weights}
    circles = {name for weights in loops for name, _ in weights}
    sums = {name for one in spared for name, _ in one.weights}
    return tuple(
        Gone(r.name, Fate.SPARED if r.name in sums else
             Fate.LOOP if r.name in circles else Fate.DEAD)
        for r in network.reactions if r.name not in names
    )  # fmt: skip
