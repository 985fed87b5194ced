"""Why a ``?`` has no value, and what would give it one."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction

from fluxnet.exact.linear import rank, solve
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.advice import terms_to_solve
from fluxnet.network.amounts import number_text
from fluxnet.network.balance_words import because_of, join
from fluxnet.network.contents import Content, Functional
from fluxnet.network.line_balance import Contents, LineBalance, held_by, line_functionals
from fluxnet.network.model import CargoKind, Network, Reaction, Role, Species, Term

__all__ = ["carbon_dioxide_of", "contradiction", "free_unknowns", "unseen_composition"]

_Signed = tuple[int, Term]


def unseen_composition(reaction: Reaction, term: Term, unseen: Sequence[str]) -> Diagnostic:
    """A ``?`` in a line with a species without a composition."""
    verb = "has" if len(unseen) == 1 else "have"
    return Diagnostic(
        Name.COEFFICIENT_FREE,
        f"? {term.species} of {reaction.name} cannot be solved: "
        f"{join(list(unseen))} {verb} no formula",
        term.span,
        mend=f"write a formula for {join(list(unseen))}, or a number for {term.species}",
    )


def free_unknowns(
    reaction: Reaction,
    unknowns: Sequence[_Signed],
    loose: Sequence[Sequence[Fraction]],
    functionals: Sequence[Functional],
    network: Network,
    present: Mapping[str, Content],
) -> tuple[Diagnostic, ...]:
    """The ``?`` that the balances leave free: one finding for each way of freedom."""
    carbon_dioxide = carbon_dioxide_of(network)
    gas = None if carbon_dioxide is None else carbon_dioxide.name
    balances = join([f.name for f in functionals]) or "none"
    found: list[Diagnostic] = []
    for direction in loose:
        members = [u for u, x in zip(unknowns, direction, strict=True) if x]
        names = [t.species for _, t in members]
        first = next((t for _, t in members if t.species == gas), members[-1][1])
        if len(members) == 1:
            found.append(
                Diagnostic(
                    Name.COEFFICIENT_FREE,
                    f"no balance of {reaction.name} sees {first.species}, "
                    "so its ? could be anything",
                    first.span,
                    because=_why_unseen(first.species, network, present),
                    mend=f"write a number or a parameter for {first.species}",
                )
            )
            continue
        found.append(
            Diagnostic(
                Name.COEFFICIENT_FREE,
                f"the balances of {reaction.name} leave ? {join(names)} free: "
                "only a combination of them is determined",
                first.span,
                because=f"balances that see them: {balances}",
                mend=f"write one of them as a number, for example {first.species}",
                also=tuple(t.span for _, t in members if t is not first),
            )
        )
    return tuple(found)


def carbon_dioxide_of(network: Network) -> Species | None:
    """The boundary species that is CO2, whatever its name."""
    counts = (("C", Fraction(1)), ("O", Fraction(2)))
    return next((s for s in network.boundary if s.formula and s.formula.counts == counts), None)


def _why_unseen(name: str, network: Network, present: Mapping[str, Content]) -> str:
    species = network.find_species(name)
    if species is not None and species.cargo is not None:
        if species.cargo.kind is CargoKind.ENERGY:
            return f"{name} carries energy, which no balance of a line counts"
        return f"the cargo of {name} is free in this model"
    held = [e for e in present[name].amounts if e not in ("electrons", "charge")]
    return f"{name} holds only {join(held)}, which are free in this line"


def contradiction(
    reaction: Reaction,
    unknowns: Sequence[_Signed],
    line: LineBalance,
    contents: Contents,
) -> Diagnostic:
    """The balances that no value of the ``?`` closes together.

    ``line`` is the line with the values that close the first balances.
    """
    names = [t.species for _, t in unknowns]
    each = "no value of" if len(names) == 1 else "no values of"
    asked = _asked(line, *unknowns[0]) if len(unknowns) == 1 else None
    return Diagnostic(
        Name.COEFFICIENT_CONTRADICTS,
        f"{each} ? {join(names)} balances {reaction.name}",
        unknowns[0][1].span if len(unknowns) == 1 else reaction.span,
        because=asked or because_of(line),
        mend=_mend(line, contents),
        also=tuple(t.span for _, t in unknowns) if len(unknowns) > 1 else (),
    )


def _asked(line: LineBalance, sign: int, term: Term) -> str | None:
    """What each balance asks a single ``?`` to be: ``C asks for 2, electrons for 1.5``."""
    chosen = next(t for s, t in line.reaction.terms if s == sign and t.solved)
    parts: list[str] = []
    for balance in line.balances:
        amount = sign * balance.functional.of(line.contents[term.species])
        rest = balance.gap.constant_value
        if chosen.coefficient is None or rest is None or chosen.coefficient.parameters:
            return None
        if not amount:
            if rest:
                return None
            continue
        wanted = chosen.coefficient.exact({}) - rest / amount
        verb = "asks" if balance.name != "electrons" else "ask"
        parts.append(f"{balance.name} {verb} for {number_text(wanted)}")
    return ", ".join(parts)


def _mend(line: LineBalance, contents: Contents) -> str:
    ways: list[str] = []
    needless = _needless(line)
    if needless is not None:
        ways.append(f"{needless} taken out")
    terms = terms_to_solve(line)
    if terms:
        ways.append(f"? {join([t.species for t in terms])} as well")
    added = _missing(line, contents)
    if added is not None:
        ways.append(f"? {added[1]} more on the {'left' if added[0] < 0 else 'right'}")
    if not ways:
        return "a species is missing or wrong, or a number is"
    return f"{ways[0]} closes every balance" + (f"; so does {ways[1]}" if ways[1:] else "")


def _needless(line: LineBalance) -> str | None:
    """A species without which the line closes with positive ``?``."""
    solved = [(s, t) for s, t in line.reaction.terms if t.solved]
    functionals = [b.functional for b in line.balances]
    for sign, term in line.reaction.terms:
        number = None if term.coefficient is None else term.coefficient.constant_value
        if term.solved or number is None:
            continue
        steps = _steps(line, solved, functionals, line.contents[term.species])
        if steps is not None and steps[-1] == -sign * number:
            return term.species
    return None


def _missing(line: LineBalance, contents: Contents) -> tuple[int, str] | None:
    """A species that the line lacks, with its side: a carrier, or what holds but one thing.

    Carriers are tried first. Others, that hold several things, could close most lines by
    chance.
    """
    candidates = sorted(contents.network.species, key=lambda s: s.role is not Role.CARRIER)
    solved = [(s, t) for s, t in line.reaction.terms if t.solved]
    for species in candidates:
        content = held_by(species, contents)
        if content is None or species.name in line.contents or species.role is Role.BIOMASS:
            continue
        widened = {**line.contents, species.name: content}
        functionals = line_functionals(widened, contents.free)
        held = [x for f in functionals if (x := f.of(content))]
        if species.role is not Role.CARRIER and (len(held) != 1 or held[0] < 0):
            continue
        steps = _steps(line, solved, functionals, content)
        if steps is not None:
            return (1 if steps[-1] > 0 else -1), species.name
    return None


def _steps(
    line: LineBalance,
    solved: Iterable[_Signed],
    functionals: Iterable[Functional],
    content: Content,
) -> tuple[Fraction, ...] | None:
    """Changes of the solved terms, and the amount of one species more, that close the line."""
    solved = list(solved)
    rows: list[list[Fraction]] = []
    rights: list[Fraction] = []
    for functional in functionals:
        gap = Fraction(0)
        for sign, term in line.reaction.terms:
            amount = functional.of(line.contents[term.species])
            number = None if term.coefficient is None else term.coefficient.constant_value
            if amount and number is None:
                return None
            if amount and number is not None:
                gap += sign * amount * number
        held = [s * functional.of(line.contents[t.species]) for s, t in solved]
        rows.append([*held, functional.of(content)])
        rights.append(-gap)
    width = len(solved) + 1
    steps = solve(rows, rights, width)
    if steps is None or rank(rows, width) < width or not steps[-1]:
        return None
    for (_, term), step in zip(solved, steps, strict=False):
        number = None if term.coefficient is None else term.coefficient.constant_value
        if number is None or number + step <= 0:
            return None
    return steps
