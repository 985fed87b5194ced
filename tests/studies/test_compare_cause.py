"""Why the second is second: the carriers that its pathway spends more, and who makes them."""

from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text
from fluxnet.studies.compare import compare
from tests.studies.pathways import ETHANOL, GLYCEROL

# from triose-P, or from pyruvate: a lower more, so 2 ATP and an NADH made, and one spent
TWO_STARTS = GLYCEROL.replace("compartment c\n", """\
compartment c
    remake : pyruvate + 3 ATP + 2 NADH -> glycerol
""") + """\
variant short
    drop remake
variant long
    drop reduce
"""


def read(text: str) -> Network:
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics
    return reading.network


def test_an_enzyme_that_costs_an_atp_is_the_cause_and_its_makers_are_named() -> None:
    # Without air, of 2 triose-P x become glycerol, a acetate, e ethanol. NADH: 2 - x + a = x + e,
    # so a = x / 2; cheap x = 4/3. ATP, dear: 2 (2 - x) + a = 2 + x, so x = 4/5: glycolysis has to
    # make 2 * 6/5 ATP in place of 2 * 2/3, acetate 2/5 in place of 2/3.
    text = GLYCEROL.replace("product    glycerol", "product    glycerol, acetate, ethanol").replace(
        "compartment c\n",
        "compartment c\n    costly : triose-P + NADH + ATP -> glycerol\n"
        "    ack : pyruvate -> acetate + CO2 + NADH + ATP\n"
        "    adh : pyruvate + NADH -> ethanol + CO2\n",
    )
    text += "limit oxygen <= 0\nvariant cheap\n    drop costly\nvariant dear\n    drop reduce\n"
    found = compare(read(text), "glycerol", "glucose", ["cheap | dear"])

    assert [a.final.moles for a in found.abilities] == [Fraction(4, 3), Fraction(4, 5)]
    assert found.second.startswith("dear is second")
    assert "it spends 1 ATP more per mol glycerol" in found.second
    assert "more ATP for that comes from lower; " in found.second


def test_pathways_from_two_intermediates_are_brought_to_the_same() -> None:
    found = compare(read(TWO_STARTS), "glycerol", "glucose", ["short | long"])

    # remake takes 3 ATP and 2 NADH, reduce 1 NADH; lower in between gives 2 ATP and 1 NADH
    assert found.abilities[0].name == "short"
    assert "it spends 1 ATP more per mol glycerol; " in found.second


def test_what_differs_in_the_uptake_is_told_per_substrate() -> None:
    text = GLYCEROL.replace(
        "    upper  : glucose + 2 ATP -> 2 triose-P",
        "    upper  : glucose + 2 ATP -> 2 triose-P\n"
        "    pumped : glucose + 3 ATP -> 2 triose-P",
    )
    text += "variant free\n    drop pumped\nvariant pump\n    drop upper\n"
    found = compare(read(text), "glycerol", "glucose", ["free | pump"])

    assert "pump is second" in found.second
    assert "it spends 1 ATP more per mol glucose" in found.second


@pytest.mark.parametrize("limit", ["oxygen <= 1", "upkeep >= 4"])
def test_a_limit_alone_is_no_pathway(limit: str) -> None:
    text = GLYCEROL + f"limit glucose <= 10\nvariant other\n    limit {limit}\n"
    text = text.replace("product    glycerol", "product    glycerol, lactate")
    text = text.replace("compartment c\n", "compartment c\n    ldh : pyruvate + NADH -> lactate\n")
    found = compare(read(text), "glycerol", "glucose")

    assert "other is second" in found.second
    assert "spends" not in found.second


def test_two_substrates_are_not_held_against_each_other() -> None:
    text = ETHANOL.replace("glucose, oxygen", "glucose, xylose, oxygen").replace(
        "compartment c\n", "compartment c\n    xyl : 6 xylose + 30 ATP -> 10 pyruvate + 10 NADH\n"
    )
    found = compare(read(text), "ethanol", "glucose | xylose", ["base"])

    assert "spends" not in found.second
