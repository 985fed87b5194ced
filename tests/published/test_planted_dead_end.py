"""Published check 12.2: a network in which the release of lactate was left out.

The network is the lumped one behind the published succinate yields (BioMed Res Int 2013:538790,
table 2; protons and water left out). Without the release of lactate, lactate is a dead end,
ldh is blocked, and nothing else is (the value was computed by flux ranges).
"""

from __future__ import annotations

import numpy as np

import fluxnet as fx
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.solving.build import build_problem
from fluxnet.solving.ranges import find_ranges

MODEL = """model Succinate without air
basis mmol/g/h

substrate glucose
product   succinate, acetate, ethanol, formate{release}
exchange  CO2
carrier   ATP  carries energy
carrier   NADH carries 2 electrons
inside    G6P, T3P, PEP, pyruvate, oxaloacetate, malate, acetyl-CoA{inside}

compartment catabolism
    upt_pts : glucose + PEP -> G6P + pyruvate
    upt_glk : glucose + ATP -> G6P
    glyc    : G6P + ATP -> 2 T3P
    gap     : T3P -> PEP + NADH + ATP
    pyk     : PEP -> pyruvate + ATP
    ppc     : PEP + CO2 -> oxaloacetate
    mdh     : oxaloacetate + NADH <-> malate
    frd     : malate + NADH -> succinate
    pdh     : pyruvate -> acetyl-CoA + CO2 + NADH
    pfl     : pyruvate -> acetyl-CoA + formate
    fdh     : formate -> CO2 + NADH
    glx     : 2 acetyl-CoA + oxaloacetate -> succinate + malate
    ack     : acetyl-CoA -> acetate + ATP
    adh     : acetyl-CoA + 2 NADH -> ethanol
    ldh     : pyruvate + NADH -> lactate

compartment maintenance
    upkeep  : ATP -> nothing

limit  glucose = 1
"""


def read(*, with_release: bool) -> fx.Model:
    text = MODEL.replace("{release}", ", lactate" if with_release else "")
    return fx.read_model_text(text.replace("{inside}", "" if with_release else ", lactate"))


def without_flux(network: Network) -> list[str]:
    """The reactions whose range is zero, by two linear programmes each."""
    ranges = find_ranges(build_problem(network).problem)
    closed = np.maximum(np.abs(ranges.low), np.abs(ranges.high)) < 1e-9
    return [r.name for r, shut in zip(network.reactions, closed, strict=True) if shut]


def test_without_its_release_lactate_is_a_dead_end_and_ldh_alone_is_blocked() -> None:
    model = read(with_release=False)

    result = fx.check(model)

    warnings = [d for d in result.diagnostics if d.name.severity.value != "note"]
    assert [(d.name, d.message) for d in warnings] == [
        (Name.DEAD_END, "lactate is made by ldh, but nothing uses it")
    ]
    assert result.blocked_reactions == ("ldh",)
    assert without_flux(model.network) == ["ldh"]
    assert result.verified


def test_with_its_release_nothing_is_blocked() -> None:
    model = read(with_release=True)

    result = fx.check(model)

    assert result.blocked_reactions == ()
    assert without_flux(model.network) == []
    assert all(d.name is not Name.DEAD_END for d in result.diagnostics)
