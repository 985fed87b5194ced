"""A lumped model does what the long list does."""

from __future__ import annotations

import random
from dataclasses import replace
from fractions import Fraction
from functools import cache
from pathlib import Path

import pytest

from fluxnet.ground.diagnostic import has_errors
from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Direction, Limit, Network, Quantity, QuantityKind, Relation, Role
from fluxnet.network.variant import apply_variant
from fluxnet.presenting.lump_screen import lump_screen
from fluxnet.reading.model import read_model, read_model_text
from fluxnet.reading.writer import write_model
from fluxnet.studies.check import check_network
from fluxnet.studies.lump import lump_network
from fluxnet.studies.lump_holds import find_holds
from fluxnet.studies.lump_proof import prove
from fluxnet.studies.lump_result import Eliminated, Fate, Lumped, Why
from fluxnet.studies.lump_steps import Elimination
from fluxnet.studies.solve import solve_network

ROOT = Path(__file__).resolve().parents[2]
MODELS = sorted([*ROOT.glob("models/*.flux"), *ROOT.glob("tests/benchmarks/*.flux")])
CASES = [
    (path, variant)
    for path in MODELS
    for variant in (None, "base", *(v.name for v in read_model(path).network.variants))
]

HEAD = """\
substrate  glucose, oxygen
product    ethanol, lactate, acetate
exchange   CO2
carrier    ATP, NADH
inside     pyruvate, acetaldehyde, acetyl-CoA
parameter  PO = 1.4 ± 0.2
compartment way
    upper  : glucose -> 2 pyruvate + 2 ATP + 2 NADH
"""
TAIL = """\
compartment rest
    oxphos : NADH + 0.5 oxygen -> PO ATP
    upkeep : ATP -> nothing
"""


def network_of(text: str) -> Network:
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics
    return reading.network


@cache
def lumped_case(path: Path, variant: str | None) -> tuple[Network, Lumped]:
    network = read_model(path).network
    assert network is not None
    if variant not in (None, "base"):
        network, _ = apply_variant(network, variant)
        assert network is not None
    return network, lump_network(network, ["CO2"], variants=variant is None)


@pytest.mark.parametrize(("path", "variant"), CASES, ids=lambda v: getattr(v, "stem", str(v)))
def test_every_model_is_lumped_with_a_proof_and_its_file_reads_back(
    path: Path, variant: str | None
) -> None:
    _, lumped = lumped_case(path, variant)

    assert lumped.proof.verified, lumped.proof
    reading = read_model_text(lumped.text)
    assert reading.network is not None
    assert not has_errors(reading.diagnostics)
    assert not has_errors(check_network(reading.network, reading.diagnostics).diagnostics)
    assert {k.species for k in lumped.kept} == {
        s.name for s in reading.network.species if s.role is Role.INSIDE
    }


@pytest.mark.parametrize(("path", "variant"), CASES, ids=lambda v: getattr(v, "stem", str(v)))
def test_a_lumped_model_is_lumped_no_further(path: Path, variant: str | None) -> None:
    _, lumped = lumped_case(path, variant)
    again = lump_network(lumped.network, ["CO2"])

    assert again.eliminated == ()
    assert again.text == write_model(lumped.network)


def _random_aims(network: Network, dice: random.Random, count: int) -> list[str]:
    out = [s.name for s in network.boundary if s.role is not Role.SUBSTRATE]
    into = [f"in {s.name}" for s in network.boundary if s.role is Role.SUBSTRATE]
    single = [*out, *into, *(s.name for s in network.carriers), "mu"]
    aims = []
    for _ in range(count):
        if dice.random() < 0.6:
            aims.append(dice.choice(single))
        else:
            a, b = dice.sample(out, 2)
            aims.append(f"{dice.randint(1, 4)} {a} + {b}")
    return aims


def _bounded(network: Network, dice: random.Random) -> tuple[Limit, ...]:
    """Random limits on what is taken up."""
    found = []
    for species in network.boundary:
        if species.role in (Role.SUBSTRATE, Role.EXCHANGE):
            high = Fraction(dice.randint(1, 60), 4)
            quantity = Quantity(QuantityKind.RATE, species.name, Direction.IN)
            found.append(Limit(quantity, Relation.AT_MOST, None, high))
    return tuple(found)


AIMS_EACH = 3


@pytest.mark.parametrize(("path", "variant"), CASES, ids=lambda v: getattr(v, "stem", str(v)))
def test_random_aims_have_the_same_optimum_in_both(path: Path, variant: str | None) -> None:
    network, lumped = lumped_case(path, variant)
    dice = random.Random(f"{path.stem} {variant}")
    for aim in _random_aims(network, dice, AIMS_EACH):
        limits = _bounded(network, dice)
        ends = []
        for one in (network, lumped.network):
            given = replace(one, limits=(*one.limits, *limits))
            (run,) = solve_network(given, maximise=aim).runs
            ends.append((run.status, run.optimum))
        assert ends[0] == ends[1], (aim, limits)


def test_there_are_at_least_a_hundred_random_aims() -> None:
    assert AIMS_EACH * len(CASES) >= 100


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.stem)
def test_the_variants_of_a_lumped_model_are_those_of_the_long_one(path: Path) -> None:
    network, lumped = lumped_case(path, None)
    for variant in network.variants:
        long, _ = apply_variant(network, variant.name)
        short, told = apply_variant(lumped.network, variant.name)
        assert long is not None
        assert short is not None, told
        (aim,) = _random_aims(network, random.Random(f"{path.stem} {variant.name}"), 1)
        ends = [solve_network(one, maximise=aim).runs[0] for one in (long, short)]
        assert ends[0].status is ends[1].status
        assert ends[0].optimum == ends[1].optimum


def test_ways_part_and_join_by_hand() -> None:
    text = HEAD + """\
    pdc    : pyruvate -> acetaldehyde + CO2
    pdh    : pyruvate -> acetyl-CoA + CO2 + NADH
    adh    : acetaldehyde + NADH -> ethanol
    ack    : acetyl-CoA -> acetate + ATP
    ldh    : pyruvate + NADH <-> lactate
""" + TAIL
    lumped = lump_network(network_of(text), ["CO2"])
    lines = {r.name: [(s, t.species, str(t.coefficient)) for s, t in r.terms]
             for r in lumped.network.reactions}

    assert set(lumped.eliminated) == {"pyruvate", "acetaldehyde", "acetyl-CoA"}
    assert lines == {
        "glucose-to-lactate": [
            (-1, "glucose", "1"), (1, "lactate", "2"), (1, "ATP", "2"),
        ],
        "lactate-to-ethanol": [(-1, "lactate", "1"), (1, "ethanol", "1"), (1, "CO2", "1")],
        "lactate-to-acetate": [
            (-1, "lactate", "1"), (1, "acetate", "1"), (1, "CO2", "1"), (1, "ATP", "1"),
            (1, "NADH", "2"),
        ],
        "oxphos": [(-1, "NADH", "1"), (-1, "oxygen", "1/2"), (1, "ATP", "PO")],
        "upkeep": [(-1, "ATP", "1")],
    }  # fmt: skip
    assert "# = upper + 2 ldh" in lumped.text


def test_coefficients_stay_expressions_where_no_pivot_holds_a_parameter() -> None:
    text = HEAD + """\
    burn   : pyruvate -> 3 CO2 + ATP + 5 NADH
    ldh    : pyruvate + NADH -> lactate
compartment respiration
    half   : NADH -> quinol
    rest   : quinol + 0.5 oxygen -> (2*PO) ATP
compartment rest
    upkeep : ATP -> nothing
"""
    text = text.replace("inside     pyruvate, acetaldehyde, acetyl-CoA",
                        "inside     pyruvate\ninside     quinol H2")
    lumped = lump_network(network_of(text), ["lactate"])

    assert set(lumped.eliminated) == {"pyruvate", "quinol"}
    line = lumped.network.find_reaction("NADH-to-ATP")
    assert line is not None
    assert [(t.species, str(t.coefficient)) for _, t in line.terms] == [
        ("oxygen", "1"), ("NADH", "2"), ("ATP", "4*PO"),
    ]  # fmt: skip
    assert lumped.proof.verified


def test_a_species_with_a_parameter_before_it_is_kept_and_told() -> None:
    text = HEAD.replace("parameter  PO = 1.4 ± 0.2", "parameter  PO = 1.4 ± 0.2\nparameter a = 0.3")
    text = text + """\
    split  : pyruvate -> a acetaldehyde + (1 - a) acetyl-CoA + CO2 + (1 - a) NADH
    adh    : acetaldehyde + NADH -> ethanol
    ack    : acetyl-CoA -> acetate + ATP
""" + TAIL
    lumped = lump_network(network_of(text), ["CO2"])

    assert {k.species: k.why for k in lumped.kept} == {
        "acetaldehyde": Why.PARAMETER, "acetyl-CoA": Why.PARAMETER,
    }
    assert "a" in lumped.kept[0].words


def test_circles_and_dead_ends_are_told() -> None:
    text = HEAD + """\
    pdc    : pyruvate -> acetaldehyde + CO2
    adh    : acetaldehyde + NADH -> ethanol
    there  : pyruvate -> acetyl-CoA + CO2 + NADH
    back   : acetyl-CoA + CO2 + NADH -> pyruvate
""" + TAIL
    lumped = lump_network(network_of(text), ["CO2"])

    assert lumped.proof.verified
    assert [sorted(name for name, _ in loop) for loop in lumped.loops] == [["back", "there"]]
    assert {g.reaction: g.fate for g in lumped.gone} == {"there": Fate.LOOP, "back": Fate.LOOP}

    one_way = text.replace("    back   : acetyl-CoA + CO2 + NADH -> pyruvate\n", "")
    dead = lump_network(network_of(one_way), ["CO2"])
    assert {g.reaction: g.fate for g in dead.gone} == {"there": Fate.DEAD}


def test_what_is_limited_measured_or_in_a_variant_stays_whole() -> None:
    text = HEAD + """\
    pdc    : pyruvate -> acetaldehyde + CO2
    adh    : acetaldehyde + NADH -> ethanol
    pdh    : pyruvate -> acetyl-CoA + CO2 + NADH
    ack    : acetyl-CoA -> acetate + ATP
""" + TAIL
    limited = lump_network(network_of(text + "limit adh <= 3\n"), ["CO2"])
    measured = lump_network(network_of(text + "limit adh = 3 ± 0.2\n"), ["CO2"])
    varied = lump_network(network_of(text + "variant still\n    drop adh, acetaldehyde, pdc\n"),
                          ["CO2"])  # fmt: skip
    alone = lump_network(network_of(text + "variant still\n    drop adh, acetaldehyde, pdc\n"),
                         ["CO2"], variants=False)  # fmt: skip

    def whys(lumped: Lumped) -> dict[str, Why]:
        return {k.species: k.why for k in lumped.kept}

    assert whys(limited) == {"acetaldehyde": Why.LIMITED}
    assert "has a limit" in limited.kept[0].words
    assert "has a measured value" in measured.kept[0].words
    assert whys(varied) == {"pyruvate": Why.VARIANT, "acetaldehyde": Why.VARIANT}
    assert whys(alone) == {}
    assert "limit" in limited.text


def test_a_named_reaction_and_a_named_species_are_kept() -> None:
    text = HEAD + """\
    pdc    : pyruvate -> acetaldehyde + CO2
    adh    : acetaldehyde + NADH -> ethanol
    pdh    : pyruvate -> acetyl-CoA + CO2 + NADH
    ack    : acetyl-CoA -> acetate + ATP
""" + TAIL
    lumped = lump_network(network_of(text), ["pyruvate", "ack"])

    assert {k.species: k.why for k in lumped.kept} == {
        "pyruvate": Why.ASKED, "acetyl-CoA": Why.HELD,
    }


@pytest.mark.parametrize(
    ("keep", "said"),
    [([], "nothing is to be kept"), ([" "], "nothing is to be kept"),
     (["pyruvat"], "near to it are pyruvate"), (["zzz"], "zzz")],
)  # fmt: skip
def test_what_cannot_be_kept_is_refused(keep: list[str], said: str) -> None:
    with pytest.raises(MisuseError, match=said):
        lump_network(network_of(HEAD + TAIL), keep)


def test_a_coefficient_that_would_change_its_sign_in_a_variant_keeps_its_species() -> None:
    text = """\
substrate  glucose, oxygen
product    lactate
carrier    ATP carries energy
carrier    NADH
inside     pyruvate
parameter  a = 3
compartment way
    upper  : glucose -> 2 pyruvate + 2 NADH + 4 ATP
    lower  : pyruvate + NADH + a ATP <-> lactate
compartment rest
    upkeep : ATP <-> nothing
variant cheap
    set a = 1
"""
    lumped = lump_network(network_of(text), ["lactate"])
    alone = lump_network(network_of(text), ["lactate"], variants=False)

    assert [(k.species, k.why) for k in lumped.kept] == [("pyruvate", Why.SIGN)]
    assert "in the variant cheap" in lumped.kept[0].words
    assert alone.eliminated == ("pyruvate",)
    assert "glucose + (2*a - 4) ATP -> 2 lactate" in alone.text


def test_a_coefficient_that_would_be_zero_keeps_its_species() -> None:
    text = HEAD.replace("-> 2 pyruvate + 2 ATP", "-> 2 pyruvate + (2*PO) ATP") + """\
    ldh    : pyruvate + NADH + 1.4 ATP -> lactate
""" + TAIL
    lumped = lump_network(network_of(text), ["lactate"])

    assert ("pyruvate", Why.SIGN) in [(k.species, k.why) for k in lumped.kept]


def test_a_line_that_balances_by_its_rounding_keeps_its_species() -> None:
    text = HEAD + """\
    split  : pyruvate -> 0.667 lactate + 0.999 CO2 + 1.0 NADH
    ldh    : pyruvate + NADH -> lactate
""" + TAIL
    network = network_of(text)
    lumped = lump_network(network, ["CO2"])

    assert ("pyruvate", Why.BALANCE) in [(k.species, k.why) for k in lumped.kept]
    (words,) = [k.words for k in lumped.kept if k.why is Why.BALANCE]
    assert "split" in words


def test_a_hub_that_would_make_far_too_many_reactions_is_kept() -> None:
    makers = "".join(f"    in{k} : {k + 1} ATP -> hub\n" for k in range(12))
    users = "".join(f"    out{k} : hub -> {k + 2} GTP\n" for k in range(12))
    text = ("substrate glucose\nproduct lactate\ncarrier ATP carries energy\n"
            "carrier GTP carries energy\ninside hub\ncompartment way\n"
            f"    base : glucose -> 2 lactate\n{makers}{users}")  # fmt: skip
    lumped = lump_network(network_of(text), ["lactate"])

    assert [(k.species, k.why) for k in lumped.kept] == [("hub", Why.GROWTH)]
    assert "144" in lumped.kept[0].words


def test_the_proof_refuses_what_was_tampered_with() -> None:
    text = HEAD + """\
    pdc    : pyruvate -> acetaldehyde + CO2
    pdh    : pyruvate -> acetyl-CoA + CO2 + NADH
    adh    : acetaldehyde + NADH -> ethanol
    ack    : acetyl-CoA -> acetate + ATP
    ldh    : pyruvate + NADH -> lactate
""" + TAIL
    network = network_of(text)
    work = Elimination(network, find_holds(network, ["CO2"]))
    work.run()
    lumped = lump_network(network, ["CO2"])
    good = prove(network, lumped.network, work.events, lumped.lumps, frozenset())
    one = next(e for e in work.events if isinstance(e, Eliminated) and len(e.after) > 1)
    short = replace(one, after=one.after[:-1])
    cases = [
        (work.events[:-1], lumped.lumps, frozenset()),
        ([short if e is one else e for e in work.events], lumped.lumps, frozenset()),
        (work.events, lumped.lumps[1:], frozenset()),
        (work.events, lumped.lumps, frozenset({"ldh"})),
    ]

    assert good.verified
    for events, lumps, held in cases:
        assert not prove(network, lumped.network, events, lumps, held).verified
    fewer = replace(lumped.network, reactions=lumped.network.reactions[1:])
    assert "no line stands for" in prove(
        network, fewer, work.events, lumped.lumps, frozenset()
    ).fault


VARIANTS = (
    HEAD.replace("inside     pyruvate", "inside     spare, pyruvate")
    + """\
    pdc    : pyruvate -> acetaldehyde + CO2
    adh    : acetaldehyde + NADH -> ethanol
    ldh    : pyruvate + NADH -> lactate
compartment tail
    pdh    : pyruvate -> acetyl-CoA + CO2 + NADH
    ack    : acetyl-CoA -> acetate + ATP
"""
    + TAIL
    + """\
compartment new
variant burner
    add to new
        more : pyruvate + NADH -> spare
        less : spare -> lactate
variant closed
    drop pdh, ack, oxphos
variant both from burner, closed
"""
)


@pytest.mark.parametrize("name", ["base", "closed", "both"])
def test_what_only_left_out_variants_used_makes_no_warning_in_the_written_file(name: str) -> None:
    applied, _ = apply_variant(network_of(VARIANTS), name)
    assert applied is not None
    lumped = lump_network(applied, ["ethanol"], variants=False)
    reading = read_model_text(lumped.text)
    assert reading.network is not None
    found = {d.name.value for d in check_network(reading.network, reading.diagnostics).diagnostics}

    assert lumped.is_sound
    # What crosses the boundary stays, for rates tables name it: acetate, used or not.
    assert not found & {"empty-compartment", "unused-parameter"}
    assert ("unused-species" in found) == (name != "base")
    assert reading.network.find_species("acetate") is not None
    assert reading.network.find_species("acetyl-CoA") is None
    assert reading.network.find_species("spare") is None
    assert [p.name for p in reading.network.parameters] == (["PO"] if name == "base" else [])
    kept = {"way", "rest"} | {"base": {"tail"}, "both": {"new"}}.get(name, set())
    assert {c.name for c in reading.network.compartments} == kept


def test_variants_that_keep_most_are_told_first_with_the_mend() -> None:
    network = network_of(VARIANTS)
    texts = [b.text for b in lump_screen(lump_network(network, ["ethanol"])) if hasattr(b, "text")]
    alone = lump_screen(lump_network(network, ["ethanol"], variants=False))

    assert texts[1] == (
        "The model's variants keep 3 others from being taken out: `--variant base` lumps the "
        "model without them, `--variant V` with V applied."
    )
    assert not any("--variant base" in getattr(b, "text", "") for b in alone)
