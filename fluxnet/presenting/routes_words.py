"""What is said of routes: how many there are, whether they are all, what takes no part."""

from __future__ import annotations

from fluxnet.modes.enumerate import Ending
from fluxnet.presenting.numbers import format_number
from fluxnet.studies.routes_result import Cuts, Routes

__all__ = ["count_words", "cut_words", "ending_words", "many", "size_words", "yield_words"]


def count_words(routes: Routes) -> str:
    """The verdict.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> from fluxnet.studies.routes import find_routes
    >>> count_words(find_routes(read_model_text(MODEL).network, product="ethanol"))
    '4 routes with 4 net equations. 4 take up glucose, of these 2 make ethanol: at most 2 mol/mol.'
    """
    if not routes.count:
        done = routes.ending is Ending.COMPLETE
        return "No route." if done else "The search was not ended; no route was found until then."
    if routes.wanted is not None:
        what = f"of the largest yield of {routes.product} on {routes.substrate}"
        if routes.count == 1:
            return f"The route {what}: {_best(routes)} mol/mol, proven."
        least = min(g.product_yield or 0 for g in routes.groups)
        return (
            f"The {routes.count} routes {what}: {_best(routes)} to {format_number(float(least))} "
            "mol/mol. That there are no better ones is proven."
        )
    begun = "" if routes.ending is Ending.COMPLETE else "Not all routes: "
    words = f"{begun}{many(routes.count, 'route')} with {many(len(routes.groups), 'net equation')}."
    if routes.substrate is None:
        return words
    ours = [g for g in routes.groups if g.substrate == routes.substrate]
    taking = sum(g.count for g in ours)
    words += f" {taking:,} {'takes' if taking == 1 else 'take'} up {routes.substrate}"
    if routes.product is None:
        return f"{words}."
    making = sum(g.count for g in ours if g.product_yield)
    if not making:
        return f"{words}, and none of these makes {routes.product}."
    verb = "makes" if making == 1 else "make"
    words += f", of these {making:,} {verb} {routes.product}: at most {_best(routes)} mol/mol"
    making_alone = (g.product_yield for g in ours if g.product_yield and not routes.takes_more(g))
    alone = next(making_alone, 0)  # the best yield comes first
    if format_number(float(alone)) == _best(routes):
        return f"{words}."
    return f"{words} beside other substrates, {format_number(float(alone))} without them."


def ending_words(routes: Routes) -> str:
    """What kept a search from its end, and what to do about it; empty at the end."""
    if routes.ending is Ending.INTERRUPTED:
        return (
            "Interrupted: these routes are right, but there are more; "
            f"{routes.held:,} were in work."
            if routes.wanted is None
            else "Interrupted: these are the best, in their order; fewer than were asked for."
        )
    if routes.ending is Ending.MEMORY:
        return (
            f"Stopped before the bound on memory was passed: with {routes.held:,} routes in work "
            f"the next step would have taken {size_words(routes.needed)}. Those shown are right, "
            "but there are more. To narrow it: ask for the best alone (--best 20 --to PRODUCT); "
            "shut what is not expected (limit lactate <= 0, in a variant); drop reactions that "
            "do the same; or allow more (--memory 8GB)."
        )
    return ""


def size_words(size: float) -> str:
    """Bytes in the unit that suits them.

    Examples
    --------
    >>> size_words(2.5e9), size_words(3e5)
    ('2.5 GB', '0.3 MB')
    """
    unit, name = (1e9, "GB") if size >= 1e9 else (1e6, "MB")
    return f"{format_number(size / unit, 2)} {name}"


def cut_words(cuts: Cuts, routes: Routes) -> str:
    """What the search for cuts found."""
    above = f"{format_number(float(cuts.above))} mol/mol"
    head = f"To keep only routes of {above} or more ({cuts.kept:,} of {cuts.kept + cuts.lost:,})"
    if not cuts.found:
        return f"{head}: {cuts.words or f'no cut of up to {cuts.most} reactions does it'}."
    tail = f" ({cuts.words})" if cuts.words else ""
    if len(cuts.found) == 1 and cuts.words:
        return f"{head}: {cuts.words} is told."
    verb = "is" if len(cuts.found) == 1 else "are"
    found = many(len(cuts.found), "cut")
    return f"{head} there {verb} {found} of up to {cuts.most} reactions{tail}."


def yield_words(value: float | None) -> str:
    """A yield as a number."""
    return "–" if value is None else format_number(value)


def many(count: int, what: str) -> str:
    """A number with its noun.

    Examples
    --------
    >>> many(1, "route"), many(1200, "route")
    ('1 route', '1,200 routes')
    """
    return f"{count:,} {what}{'' if count == 1 else 's'}"


def _best(routes: Routes) -> str:
    best = max((g.product_yield for g in routes.groups if g.product_yield is not None), default=0)
    return format_number(float(best))
