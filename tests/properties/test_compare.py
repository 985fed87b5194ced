"""What must hold of every comparison."""

from __future__ import annotations

import re
from fractions import Fraction

from hypothesis import given
from hypothesis import strategies as st

from fluxnet.reading.model import read_model_text
from fluxnet.studies.compare import compare
from fluxnet.studies.compare_result import Comparison
from fluxnet.studies.compare_words import holding_words

MODEL = """\
substrate glucose, oxygen
product glycerol, lactate
exchange CO2
carrier ATP carries energy
carrier NADH carries 2 electrons
inside pyruvate
inside triose-P C3H7O6P
compartment c
    upper : 1 glucose + 2 ATP -> 2 triose-P
    reduce : 1 triose-P + 1 NADH -> 1 glycerol
    lower : 1 triose-P -> 1 pyruvate + 2 ATP + 1 NADH
    burn : 1 pyruvate -> 3 CO2 + 5 NADH + 1 ATP
    ldh : 1 pyruvate + 1 NADH -> 1 lactate
    oxphos : 1 NADH + 0.5 oxygen -> 1 ATP
    upkeep : 1 ATP -> nothing
limit glucose <= 10
variant airless
    limit oxygen <= 0
variant half
    limit oxygen <= 2
variant fermenting
    drop burn
variant burning
    drop ldh
"""
ACROSS = ("base|airless|half", "base|fermenting|burning")
FACTORS = st.sampled_from([Fraction(1, 8), Fraction(1, 2), Fraction(1), Fraction(3), Fraction(40)])


def scaled(text: str, factors: dict[str, Fraction]) -> str:
    """Each reaction times its factor: its flux is divided by it, no yield changes."""

    def times(line: str) -> str:
        name = line.split(":")[0].strip()
        if name not in factors:
            return line
        return re.sub(
            r"(?<=[ ])(\d+(?:\.\d+)?)(?= [A-Za-z])",
            lambda m: str(float(Fraction(m[1]) * factors[name])),
            line,
        )

    return "\n".join(times(line) for line in text.splitlines()) + "\n"


def answer(text: str, product: str = "glycerol") -> Comparison:
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics
    return compare(reading.network, product, "glucose", ACROSS, draws=0, staircase=True)


PLAIN = answer(MODEL)


@given(
    st.fixed_dictionaries(
        dict.fromkeys(("upper", "reduce", "lower", "burn", "ldh", "oxphos", "upkeep"), FACTORS)
    )
)
def test_reactions_scaled_by_any_factor_leave_the_ranking_as_it_was(
    factors: dict[str, Fraction],
) -> None:
    found = answer(scaled(MODEL, factors))

    assert [(a.name, a.rank, a.final.moles, a.tied, a.is_best_of_all) for a in found.abilities] == [
        (a.name, a.rank, a.final.moles, a.tied, a.is_best_of_all) for a in PLAIN.abilities
    ]
    assert [a.facts and holding_words(a.facts.holding) for a in found.abilities] == [
        a.facts and holding_words(a.facts.holding) for a in PLAIN.abilities
    ]


@given(st.permutations(MODEL.split("compartment c\n")[1].splitlines()[:7]))
def test_the_order_of_lines_changes_no_yield(lines: list[str]) -> None:
    head, rest = MODEL.split("compartment c\n")
    text = "\n".join([head + "compartment c", *lines, *rest.splitlines()[7:]]) + "\n"
    found = answer(text)

    assert {a.name: a.final.moles for a in found.abilities} == {
        a.name: a.final.moles for a in PLAIN.abilities
    }


@given(st.integers(0, 30), st.integers(0, 40))
def test_every_staircase_falls_step_by_step_and_adds_up(oxygen: int, upkeep: int) -> None:
    text = f"{MODEL}limit oxygen <= {oxygen}\nlimit upkeep >= {upkeep}\n"
    reading = read_model_text(text)
    assert reading.network is not None
    found = compare(reading.network, "glycerol", "glucose", ["base"], draws=0, staircase=True)
    (ability,) = found.abilities
    assert ability.staircase is not None

    assert ability.staircase.adds_up
    assert all(step.lost >= 0 for step in ability.staircase.steps)
    assert all(y.proven for y in ability.yields)
