"""Reactions that do the same: duplicates, multiples, opposites."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.expression import Expression
from fluxnet.network.model import Network, Reaction
from fluxnet.solving.words import number_words

__all__ = ["check_twins"]


def check_twins(network: Network, stoich: Stoichiometry) -> tuple[Diagnostic, ...]:
    r"""Reactions that are the same, or the same in multiples or opposite directions.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "compartment c\n    again : 2 pyruvate + 2 NADH -> 2 ethanol + 2 CO2\n"
    >>> network = read_model_text(MODEL + more).network
    >>> [told.message for told in check_twins(network, stoichiometry(network))]
    ['reaction again does the same as ferment, times 2']
    """
    columns: list[dict[int, Expression]] = [{} for _ in stoich.reactions]
    for i, j, coefficient in stoich.entries:
        columns[j][i] = coefficient
    groups: dict[tuple[tuple[int, Fraction | Expression], ...], list[int]] = {}
    for j, column in enumerate(columns):
        if column:
            groups.setdefault(_shape(column), []).append(j)
    told: list[Diagnostic] = []
    for members in groups.values():
        told.extend(
            _tell_twin(network.reactions[members[0]], network.reactions[k], columns, members[0], k)
            for k in members[1:]
        )
    return tuple(told)


def _shape(column: Mapping[int, Expression]) -> tuple[tuple[int, Fraction | Expression], ...]:
    """The column over its first entry: equal for reactions that do the same in multiples."""
    rows = sorted(column)
    first = column[rows[0]]
    if first.number is not None:
        scale = 1 / first.number
        scaled = ((i, column[i].scaled(scale)) for i in rows)
    else:
        scaled = ((i, column[i] / first) for i in rows)
    return tuple((i, e if e.number is None else e.number) for i, e in scaled)


def _tell_twin(
    first: Reaction, second: Reaction, columns: list[dict[int, Expression]], a: int, b: int
) -> Diagnostic:
    """What two proportional reactions are to each other."""
    row = min(columns[a])
    ratio = (columns[b][row] / columns[a][row]).number
    if ratio == 1 and first.reversible == second.reversible:
        return Diagnostic(
            Name.DUPLICATE_REACTION,
            f"reaction {second.name} is the same as {first.name}",
            second.span,
            because="only the sum of the two fluxes can ever be told",
            mend="keep one of them",
            also=(first.span,),
        )
    if ratio is not None and ratio < 0:
        words = f"reaction {second.name} is {first.name} backwards"
        because = "the two can run in a circle of any size"
        mend = "keep one, and write <-> in it if both directions are meant"
    else:
        words = f"reaction {second.name} does the same as {first.name}"
        because = "rates alone cannot tell them apart"
        mend = "keep one of them"
    if ratio is not None and abs(ratio) != 1:
        size = abs(ratio)
        words += f", times {number_words(size)}"
    return Diagnostic(
        Name.PARALLEL_REACTIONS, words, second.span, because=because, mend=mend, also=(first.span,)
    )
