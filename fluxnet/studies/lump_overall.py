"""One overall reaction of a compartment at solved fluxes, in exact numbers that balance.

The fluxes are rounded where they may be: those that the intermediates of the compartment leave
free, to six decimals per mol of substrate or to the small fraction that they are. The others
follow exactly from these, so that no intermediate is left over by a trifle and the line balances
as its reactions do. Of a carrier of energy, which no balance sees, six decimals are written.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from difflib import get_close_matches
from fractions import Fraction
from math import lcm

from fluxnet.exact.linear import echelon
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import parameter_values
from fluxnet.network.expression import constant
from fluxnet.network.line_balance import Verdict, balance_line, contents_of_network
from fluxnet.network.model import CargoKind, Network, Reaction
from fluxnet.reading.writer import write_reaction
from fluxnet.solving.flux_fit import FluxKind
from fluxnet.studies.lump_bundle import net_of
from fluxnet.studies.lump_lines import side_terms
from fluxnet.studies.solution import FluxSolution, Solution, SolveStatus

__all__ = ["Overall", "Overalls", "find_overall"]

_STEP = Fraction(1, 10**6)
_SURE = 1e-7  # the fluxes are floats, and moved parameters have nine digits
_SAME = Fraction(1, 10**10)
_SMALL = 500
_WIDEST = 1000


@record
class Overall:
    """What a compartment does altogether in one run.

    ``line`` is its reaction, ``text`` that as a line of the language; None where nothing runs
    or nothing was solved. ``per`` is the substrate of which the whole cell takes up one mole
    (None: the line is in the unit of the rates), ``weights`` are the exact fluxes for that.
    ``free`` are reactions whose fluxes nothing determines. ``balances`` is False where the
    reactions themselves balance within their rounding only.
    """

    run: str | None
    status: SolveStatus
    line: Reaction | None
    text: str
    per: str | None
    weights: tuple[tuple[str, Fraction], ...]
    free: tuple[str, ...]
    balances: bool = True


@record
class Overalls:
    """The overall reactions of a compartment, one a run."""

    network: Network
    compartment: str
    runs: tuple[Overall, ...]

    @property
    def is_sound(self) -> bool:
        """Whether each run has one, and the solve was sound."""
        return all(run.line is not None and run.status.is_sound for run in self.runs)


def find_overall(solution: Solution, compartment: str) -> Overalls:
    """The overall reaction of a compartment, at the fluxes of each run.

    Raises
    ------
    MisuseError
        Where the network has no such compartment.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> from fluxnet.studies.solve import solve_network
    >>> network = read_model_text('''
    ... substrate glucose, oxygen
    ... product   lactate
    ... exchange  CO2
    ... carrier   ATP, NADH
    ... inside    pyruvate
    ... compartment way
    ...     upper : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ...     ldh   : pyruvate + NADH -> lactate
    ...     burn  : pyruvate -> 3 CO2 + 5 NADH + ATP
    ... compartment rest
    ...     resp   : NADH + 0.5 oxygen -> 1.5 ATP
    ...     upkeep : ATP -> nothing
    ... limit glucose = 3
    ... limit oxygen <= 6
    ... ''').network
    >>> found = find_overall(solve_network(network, maximise="upkeep"), "way")
    >>> found.runs[0].text
    'way : glucose -> (4/3) lactate + 2 CO2 + 2.666667 ATP + 4 NADH'
    """
    network = solution.network
    known = [c.name for c in network.compartments]
    if compartment not in known:
        near = get_close_matches(compartment, known, 3, 0.6)
        hint = f"near to it is {' or '.join(near)}" if near else f"there are {', '.join(known)}"
        raise MisuseError(f"the model has no compartment {compartment}; {hint}")
    runs = tuple(_of_run(network, run, compartment) for run in solution.runs)
    return Overalls(network, compartment, runs)


def _of_run(network: Network, run: FluxSolution, compartment: str) -> Overall:
    chosen = [r for r in network.reactions if r.compartment == compartment]
    shown = {f.reaction: f for f in run.fluxes}
    free = tuple(n for n, f in shown.items()
                 if f.compartment == compartment and f.kind is FluxKind.UNDETERMINED)  # fmt: skip
    nothing = Overall(run.run, run.status, None, "", None, (), free)
    if not shown:
        return nothing
    values = _parameters(network, run)
    nets = [{n: a.exact(values) for n, a in net_of(r).items()} for r in chosen]
    per, amount = next((e.per, e.per_amount) for e in run.equations if e.compartment is None)
    fluxes = [shown[r.name].value / (amount or 1.0) for r in chosen]
    exact = _exact_fluxes(nets, fluxes, per)
    total = _shortened(_sum(nets, exact), network)
    if not total:
        return nothing
    left, right = side_terms({name: constant(n) for name, n in total.items()}, network, {})
    line = Reaction(_free_name(network, compartment), compartment, left, right)
    verdict = balance_line(line, contents_of_network(network, (line,))).verdict
    weights = tuple((r.name, e) for r, e in zip(chosen, exact, strict=True) if e)
    return Overall(
        run.run, run.status, line, write_reaction(line), per, weights, free,
        verdict is not Verdict.OPEN,
    )  # fmt: skip


def _parameters(network: Network, run: FluxSolution) -> dict[str, Fraction]:
    """The parameters at their values, or where the fit moved them, to nine digits."""
    values = parameter_values(network)
    values.update((m.name, Fraction(f"{m.moved:.9g}")) for m in run.moved)
    return values


def _exact_fluxes(
    nets: Sequence[Mapping[str, Fraction]], fluxes: Sequence[float], per: str | None
) -> tuple[Fraction, ...]:
    """Exact fluxes nearest to some floats, at which nothing is left over that was not before."""
    most = max(map(abs, fluxes), default=0.0)
    running = [j for j, flux in enumerate(fluxes) if abs(flux) > _SURE * most]
    rows: list[list[Fraction]] = []
    for name in dict.fromkeys(n for j in running for n in nets[j]):
        parts = [float(nets[j].get(name, 0)) * fluxes[j] for j in running]
        row = [nets[j].get(name, Fraction(0)) for j in running]
        left, turnover = sum(parts), sum(map(abs, parts))
        if abs(left) <= _SURE * turnover:
            rows.append([*row, Fraction(0)])
        elif name == per and abs(left + 1) <= _SURE:
            rows.append([*row, Fraction(-1)])
    count = len(running)
    form = echelon(rows, count + 1)
    led = dict(zip(form.pivots, form.rows, strict=True))
    if count in led:
        raise AssertionError("fluxes that balance in floats do not in exact numbers")
    below = _other_primes(lcm(*(a.denominator for row in form.rows for a in row[:count])))
    below = lcm(below, _other_primes(lcm(*(a.denominator for n in nets for a in n.values()))))
    step = (below if below < _WIDEST else 1) * _STEP
    exact = [Fraction(0)] * count
    for k, j in enumerate(running):
        if k not in led:
            exact[k] = _near(fluxes[j], step)
    for k, leading in led.items():
        others = (leading[j] * exact[j] for j in range(count) if j != k and leading[j])
        exact[k] = leading[count] - sum(others, Fraction(0))
    found = dict(zip(running, exact, strict=True))
    return tuple(found.get(j, Fraction(0)) for j in range(len(fluxes)))


def _near(flux: float, step: Fraction) -> Fraction:
    """A small fraction where that is all but exact, else a multiple of a step."""
    small = Fraction(flux).limit_denominator(_SMALL)
    if abs(small - Fraction(flux)) <= _SAME * (1 + abs(small)):
        return small
    return round(Fraction(flux) / step) * step


def _other_primes(number: int) -> int:
    """A number without its twos and fives, by which no decimal can be divided in the end."""
    for prime in (2, 5):
        while number % prime == 0:
            number //= prime
    return number


def _sum(
    nets: Sequence[Mapping[str, Fraction]], fluxes: Sequence[Fraction]
) -> dict[str, Fraction]:
    total: dict[str, Fraction] = {}
    for flux, net in zip(fluxes, nets, strict=True):
        for name, number in net.items():
            total[name] = total.get(name, Fraction(0)) + flux * number
    return {name: number for name, number in total.items() if number}


def _shortened(total: Mapping[str, Fraction], network: Network) -> dict[str, Fraction]:
    """The sums, those of carriers of energy to some decimals unless phosphate is balanced."""
    found: dict[str, Fraction] = {}
    for name, number in total.items():
        species = network.find_species(name)
        cargo = None if species is None else species.cargo
        unseen = cargo is not None and cargo.kind is CargoKind.ENERGY
        step = _STEP if unseen and not network.balance_phosphate else None
        found[name] = number if step is None else round(number / step) * step
    return {name: number for name, number in found.items() if number}


def _free_name(network: Network, compartment: str) -> str:
    taken = {s.name for s in network.species} | {r.name for r in network.reactions}
    taken |= {p.name for p in network.parameters}
    return f"{compartment}-overall" if compartment in taken else compartment
