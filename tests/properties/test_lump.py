"""Lumped and long list have the same cone of net conversions, compartment by compartment."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from fluxnet.exact.programme import make_programme
from fluxnet.exact.simplex import End, Place, solve_from
from fluxnet.modes.cone import Cone
from fluxnet.modes.enumerate import find_modes
from fluxnet.network.model import Network, Reaction
from fluxnet.reading.model import read_model_text
from fluxnet.reading.writer import write_model
from fluxnet.studies.lump import lump_network
from fluxnet.studies.lump_result import Lumped

# Carriers of energy and intermediates without a formula: every line of them balances.
KEPT = ("E0", "E1", "E2", "E3")
PASSED = ("m0", "m1", "m2", "m3", "m4", "m5", "m6")
HEAD = "\n".join([
    "substrate glucose", "product lactate", *(f"carrier {name} carries energy" for name in KEPT),
    f"inside {', '.join(PASSED)}", "",
])  # fmt: skip



def lines_of(passed: Sequence[str]) -> st.SearchStrategy[list]:
    sides = st.lists(
        st.tuples(st.sampled_from((*KEPT, *passed, *passed)), st.integers(1, 3)),
        min_size=0, max_size=3, unique_by=lambda t: t[0],
    )  # fmt: skip
    return st.lists(st.tuples(sides, sides, st.booleans()), min_size=3, max_size=9)


ONE, TWO = lines_of(PASSED[:4]), lines_of(PASSED[3:])  # one of them is passed between the two


def network_of(one: Sequence[tuple], two: Sequence[tuple]) -> Network:
    text = HEAD
    for place, listed in (("a", one), ("b", two)):
        text += f"compartment {place}\n"
        if place == "b":
            text += "    base : glucose -> 2 lactate\n"
        for k, (left, right, both) in enumerate(listed):
            used = [n for n, _ in left]
            shown = [
                " + ".join(f"{a} {n}" for n, a in side) or "nothing"
                for side in (left, [t for t in right if t[0] not in used])
            ]
            if shown == ["nothing", "nothing"]:
                continue
            text += f"    {place}{k} : {shown[0]} {'<->' if both else '->'} {shown[1]}\n"
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics
    return reading.network


def column(reaction: Reaction) -> dict[str, Fraction]:
    found: dict[str, Fraction] = {}
    for sign, term in reaction.terms:
        assert term.coefficient is not None
        number = term.coefficient.number
        assert number is not None
        found[term.species] = found.get(term.species, Fraction(0)) + sign * number
    return found


def is_reached(
    target: dict[str, Fraction], reactions: Sequence[Reaction], species: Sequence[str]
) -> bool:
    """Whether fluxes of some reactions release just these amounts of every species."""
    columns = [column(r) for r in reactions]
    rows = [{j: c[name] for j, c in enumerate(columns) if c.get(name)} for name in species]
    right = [(target.get(name, Fraction(0)),) * 2 for name in species]
    bounds = [(None if r.reversible else Fraction(0), None) for r in reactions]
    programme = make_programme(len(columns), rows, right, bounds, {})
    places = [*(Place.LOW for _ in columns), *(Place.BASIC for _ in rows)]
    return solve_from(programme, places, None).end is End.OPTIMAL


def conversions(
    reactions: Sequence[Reaction], balanced: Sequence[str]
) -> list[tuple[dict[str, Fraction], bool]]:
    """Net conversions of all elementary modes, and whether each runs both ways."""
    columns = [column(r) for r in reactions]
    rows = tuple({j: c[name] for j, c in enumerate(columns) if c.get(name)} for name in balanced)
    names = tuple(r.name for r in reactions)
    both = tuple(r.reversible for r in reactions)
    found = []
    for mode in find_modes(Cone(names, both, tuple(r for r in rows if r))).values.tolist():
        total: dict[str, Fraction] = {}
        for flux, held in zip(mode, columns, strict=True):
            for name, amount in held.items():
                total[name] = total.get(name, Fraction(0)) + int(flux) * amount
        ways = all(b for flux, b in zip(mode, both, strict=True) if flux)
        found.append((total, ways))
    return found


def turned(amounts: dict[str, Fraction]) -> dict[str, Fraction]:
    return {name: -amount for name, amount in amounts.items()}


def check_cones(network: Network, lumped: Lumped) -> None:
    species = [s.name for s in network.species]
    for place in network.compartments:
        long = [r for r in network.reactions if r.compartment == place.name]
        short = [r for r in lumped.network.reactions if r.compartment == place.name]
        for amounts, both in conversions(long, lumped.eliminated):
            assert is_reached(amounts, short, species)
            assert not both or is_reached(turned(amounts), short, species)
        for line in short:
            assert is_reached(column(line), long, species)
            assert not line.reversible or is_reached(turned(column(line)), long, species)


relaxed = settings(max_examples=120, deadline=None, suppress_health_check=list(HealthCheck))


@relaxed
@given(ONE, TWO)
def test_both_cones_hold_one_another(one: list, two: list) -> None:
    network = network_of(one, two)
    lumped = lump_network(network, ["glucose"])

    assert lumped.proof.verified, lumped.proof
    check_cones(network, lumped)


@relaxed
@given(ONE, TWO, st.sampled_from(PASSED))
def test_lumping_twice_changes_nothing_more(one: list, two: list, keep: str) -> None:
    lumped = lump_network(network_of(one, two), [keep])
    again = lump_network(lumped.network, [keep])

    assert lumped.proof.verified, lumped.proof
    assert again.eliminated == ()
    assert again.text == write_model(lumped.network)
