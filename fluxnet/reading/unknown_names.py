"""Species that are used but not declared: each told once, at its first use."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.chemistry.catalogue import CompoundKind, load_catalogue
from fluxnet.ground.names import Name
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.findings import nearest_names
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import Kind, Mention, Scope

__all__ = ["report_unknown", "resolve_free"]

_MOST_LINES = 4


def report_unknown(scope: Scope) -> None:
    """Tell every species that is used but not declared."""
    files = list(dict.fromkeys(s.span.file for s in scope.species.values()))

    def place(mention: Mention) -> tuple[int, int, int]:
        span = mention.line.span(mention.word.start, mention.word.end)
        at = files.index(span.file) if span.file in files else len(files)
        return at, span.line, span.column

    listed = [(name, sorted(mentions, key=place)) for name, mentions in scope.unknown.items()]
    for name, mentions in sorted(listed, key=lambda m: place(m[1][0])):
        _report(name, mentions, scope)


def _report(name: str, mentions: list[Mention], scope: Scope) -> None:
    first = mentions[0]
    more = _also_in(mentions)
    twin = scope.twin(name, Kind.SPECIES)
    if twin is not None:
        scope.findings.add(
            Name.CASE_DIFFERS, f"{twin} is written {name} here{more}: case counts",
            first.line, first.word, mend=f"write {twin}", also=[scope.species[twin].span],
            certain=[],
        )
        _certain(scope, mentions, twin)
        return
    if name in scope.parameters or name in scope.reactions:
        what = "parameter" if name in scope.parameters else "reaction"
        scope.findings.add(
            Name.UNKNOWN_SPECIES, f"{name} is a {what}, not a species{more}", first.line,
            first.word, mend="write the species behind the parameter: PO ATP"
            if what == "parameter" else None,
        )
        return
    synonym = _synonym(name, scope)
    unwritten = _unwritten(name)
    near = scope.findings.nearest(name, scope.species)
    misspelt = _misspelt(name, near, scope)
    if synonym is not None:
        mend = f"{name} is another name of {synonym}: write {synonym}"
    elif misspelt is not None:
        line = scope.species[misspelt].span.line
        mend = f"line {line} declares {misspelt}, which nothing knows: write {name} there"
    elif unwritten is not None:
        mend = unwritten
    elif (known := _declaration(name, scope)) is not None:
        mend = f"declare it: {known}"
        mend += f"; or, if that is meant, write {' or '.join(near)}" if near else ""
    elif near:
        mend = f"a similar name is declared: {', '.join(near)}"
    else:
        mend = _advice(name, first, scope)
    scope.findings.add(
        Name.UNKNOWN_SPECIES, f"no species is called {name}{more}", first.line, first.word,
        mend=mend,
    )


def _also_in(mentions: list[Mention]) -> str:
    """The other lines that use a name: `` (also in lines 25 and 31)``; empty without any."""
    here, *others = [m.line.span(m.word.start, m.word.end) for m in mentions]
    places = {(x.file, x.line): None for x in others if (x.file, x.line) != (here.file, here.line)}
    lines = [f"{line}" if file == here.file else f"{line} of {file}" for file, line in places]
    if not lines:
        return ""
    if len(lines) > _MOST_LINES:
        lines = [*lines[:_MOST_LINES], f"{len(lines) - _MOST_LINES} more"]
    last = f" and {lines[-1]}" if len(lines) > 1 else ""
    listed = ", ".join(lines[:-1] if last else lines)
    return f" (also in line{'s' if last else ''} {listed}{last})"


def _misspelt(name: str, near: Sequence[str], scope: Scope) -> str | None:
    """A declared name near to one of the catalogue that is used, and itself known to nothing."""
    if load_catalogue().find(name) is None:
        return None
    declared = [scope.species[other] for other in near if other in scope.species]
    unknown = (s for s in declared if s.entry is None and s.formula is None and s.cargo is None)
    return next((s.name for s in unknown), None)


def _certain(scope: Scope, mentions: list[Mention], twin: str) -> None:
    """Attach the replacement of every use to the finding made last."""
    from dataclasses import replace

    from fluxnet.ground.diagnostic import Edit

    edits = tuple(Edit(m.line.span(m.word.start, m.word.end), twin) for m in mentions)
    scope.findings.found[-1] = replace(scope.findings.found[-1], edits=edits)


def _synonym(name: str, scope: Scope) -> str | None:
    """The declared species that the catalogue knows by this name as well."""
    compound = load_catalogue().find(name)
    if compound is None:
        return None
    return next((s.name for s in scope.species.values() if s.entry == compound.name), None)


_EMPTY_FORMS = {
    "ADP": "ATP", "AMP": "ATP", "GDP": "GTP", "NAD": "NADH", "NAD+": "NADH", "NADP": "NADPH",
    "NADP+": "NADPH", "FAD": "FADH2", "Q": "QH2", "UQ": "QH2", "MQ": "QH2",
}
_FREE = {"water": "water is", "proton": "protons are", "phosphate": "phosphate is"}


def _unwritten(name: str) -> str | None:
    """What to do with a species that the language does not ask for."""
    if name in _EMPTY_FORMS:
        return f"leave it out: a carrier's empty form is not written, only {_EMPTY_FORMS[name]}"
    if name in ("CoA", "CoASH", "HSCoA"):
        return "leave it out: a group that is bound to CoA counts as the acid less water"
    compound = load_catalogue().find(name)
    if compound is not None and compound.name in _FREE:
        return f"leave it out: {_FREE[compound.name]} free; to write it declare it: exchange {name}"
    return None


def _declaration(name: str, scope: Scope) -> str | None:
    """How a name that the catalogue knows, and no variant declares, would be declared."""
    compound = load_catalogue().find(name)
    if compound is None or any(name in inner.species for inner in scope.variants.values()):
        return None
    if compound.kind.is_carrier:
        return f"carrier {name}"
    if compound.kind in (CompoundKind.INTERMEDIATE, CompoundKind.BOUND_GROUP):
        return f"inside {name}"
    return f"product {name} if it leaves the cell, substrate if it is taken up, else inside {name}"


def _advice(name: str, first: Mention, scope: Scope) -> str:
    for variant, inner in scope.variants.items():
        if name in inner.species:
            return f"it is declared only in variant {variant}: declare it above the compartments"
    before, behind = _neighbours(first)
    if before == "+" and name.endswith("+") and name[:-1] in scope.species:
        return f"put a blank before the +: {name[:-1]} +"
    if name.endswith("+") and name[:-1] in scope.species and behind == "":
        return f"put a blank before the +: {name[:-1]} +"
    return f"declare it, for example: inside {name}"


def _neighbours(mention: Mention) -> tuple[str, str]:
    line: LogicalLine = mention.line
    before = line.text[: mention.word.start].rstrip()[-1:]
    behind = line.text[mention.word.end :].lstrip()[:1]
    return before, behind


def resolve_free(base: Sequence[Placed], scope: Scope) -> tuple[str, ...]:
    """The species that ``free`` names; ``balance`` is checked beside them."""
    free: list[str] = []
    for one in base:
        said = one.statement.line
        if isinstance(said, s.FreeLine):
            for word in said.names:
                if word.text in scope.species or load_catalogue().find(word.text) is not None:
                    free.append(word.text)
                else:
                    scope.mention(one.line, word)
        elif isinstance(said, s.BalanceLine):
            for word in said.names:
                _check_balance(one, word, scope)
    return tuple(dict.fromkeys(free))


def _check_balance(one: Placed, word: s.Word, scope: Scope) -> None:
    if word.text != "phosphate" and nearest_names(word.text, ["phosphate"]):
        scope.findings.add(
            Name.UNREADABLE_LINE, f"{word.text} cannot be asked to balance: only phosphate can",
            one.line, word, mend="write `balance phosphate`", certain=[(word, "phosphate")],
        )
    elif word.text != "phosphate":
        scope.findings.add(
            Name.UNREADABLE_LINE,
            f"only phosphate can be asked to balance; {word.text} is balanced anyway, or free "
            "because the model says so",
            one.line, word, mend="write `balance phosphate`, or take the line away",
        )
    elif not any(s.entry == "phosphate" for s in scope.species.values()):
        scope.findings.add(
            Name.UNKNOWN_SPECIES, "the model balances phosphate, but does not declare it",
            one.line, word, mend="declare it, for example: exchange phosphate",
        )
