"""The second example: its yields against numbers by hand, and its answer against the tool.

In the comments p is 3-hydroxypropionate, z `oxidise` (2 NADPH and a CO2 each), T the trioses that
leave glycolysis (two ATP and a NADH each).
"""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest

from fluxnet.cli.main import Exit, run

FOLDER = Path(__file__).resolve().parents[2] / "examples" / "2-four-ways-to-one-acid"
MODEL = FOLDER / "sw9.flux"
P = "3-hydroxypropionate"
WAYS = ("glycerol", "alanine", "aspartate", "malonyl")
SUGARS = {"glucose": (5, 6), "xylose": (6, 5)}
VESSELS = ("stirred", "tank", "sealed")


@pytest.fixture
def most(ask):
    """The most product per mole of a sugar, with the upkeep, at a growth rate."""

    def most(way: str, sugar: str, *, vessel: str = "", mu: float = 0) -> float:
        variant = " * ".join(filter(None, (way, vessel, f"on-{sugar}")))
        run = ask(MODEL, {"mu": mu}, variant=variant, maximise=P, unit="mmol/g/h")
        return run.optimum / SUGARS[sugar][0]

    return most


@pytest.mark.parametrize(
    ("way", "sugar", "yielded"),
    [
        # half a glucose to p and a twelfth for each NADPH; the upkeep is paid by what is burnt
        ("malonyl", "glucose", 3 / 2),
        ("aspartate", "glucose", 12 / 7),
        ("alanine", "glucose", 12 / 7),
        # carbon 5 = 3 p + z, 2 z = n p
        ("malonyl", "xylose", 5 / 4),
        ("alanine", "xylose", 10 / 7),
        # ATP of a T: -1 each from glucose, -8/5 each from xylose. y of 5 glucose is burnt for 20.8
        # each: 10 (1 - y) + 2 = 104 y. Of 6 xylose for 49/3 each: 16 (1 - y) + 2 = 98 y.
        ("glycerol", "glucose", 2 * (1 - 12 / 114)),
        ("glycerol", "xylose", 5 / 3 * (1 - 18 / 114)),
    ],
)
def test_yields_with_as_much_air_as_they_like(most, way, sugar, yielded):
    assert most(way, sugar) == pytest.approx(yielded, abs=1e-9)


@pytest.mark.parametrize(("way", "n"), [("malonyl", 2), ("aspartate", 1), ("alanine", 1)])
def test_yields_on_glucose_without_air(most, way, n):
    # Carbon 6 = z + 3 T, NADPH n p = 2 z, NADH T = 2 e of ethanol, T = p + e: 6 = (6 + n/2) p.
    assert most(way, "glucose", vessel="sealed") == pytest.approx(6 / (6 + n / 2), abs=1e-9)


def test_yield_by_glycerol_without_air(most):
    # acetate, ethanol and two formate pay 3 ATP a glucose: 10 (1 - y) + 2 = 15 y
    expected = 2 * (1 - 12 / 25)
    assert most("glycerol", "glucose", vessel="sealed") == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize("sugar", SUGARS)
def test_yield_by_alanine_in_the_tank(most, sugar):
    # Oxygen 0.8 takes 1.6 NADH: e = (T - 1.6) / 2, so T = 2 p - 1.6. Both sugars bring 30 carbons:
    # 30 = p / 2 + 3 T, 34.8 = 6.5 p. The pump of xylose takes ATP that was left over.
    made = 34.8 / 6.5 / SUGARS[sugar][0]
    assert most("alanine", sugar, vessel="tank") == pytest.approx(made, abs=1e-9)


def test_the_trade_off_of_oxygen_and_acid(capsys):
    # By alanine, as above: T = 2 p - 2 x, 30 = p / 2 + 3 T, so 60 / 13 and 12 / 13 more for each
    # oxygen; without ethanol T = p, 60 / 7 at half as much oxygen. Then what is burnt is lost.
    asked = ["frontier", str(MODEL), "oxygen", P, "--across", "alanine", "--across", "on-xylose"]
    assert run([*asked, "--json"]) == Exit.SOUND
    (curve,) = json.loads(capsys.readouterr().out)["curves"]
    points = [(point["x_exact"], point["y_exact"]) for point in curve["points"]]
    assert points == [("0", "60/13"), ("30/7", "60/7"), ("30", "0")]
    assert curve["points"][0]["slope_after"] == pytest.approx(12 / 13, rel=1e-12)


def test_where_the_curves_bend_and_cross(capsys):
    # what the answer says of spargers: the knee of alanine on xylose, in mmol per litre as well
    ways = ["--across", "alanine|glycerol", "--across", "on-glucose|on-xylose"]
    asked = ["frontier", str(MODEL), "oxygen", P, *ways, "--across", "growing", "--to", "6"]
    assert run([*asked, "--json"]) == Exit.SOUND
    curves = {c["variant"]: c["points"] for c in json.loads(capsys.readouterr().out)["curves"]}
    start, knee, top, _ = curves["alanine * on-xylose * growing"]
    assert knee["x"] == pytest.approx(1.03, abs=0.005)
    assert knee["x"] * 20 == pytest.approx(21, abs=0.5)
    assert knee["y"] / 6 * 3 / 5 == pytest.approx(0.49, abs=0.005)
    assert start["slope_after"] == pytest.approx(3.04, abs=0.005)
    assert knee["slope_after"] == pytest.approx(12 / 13, rel=1e-9)
    assert top["x"] * 20 == pytest.approx(88, abs=0.5)
    tank = start["y"] + 0.8 * start["slope_after"]
    assert tank / 6 * 3 / 5 == pytest.approx(TABLE["alanine", "xylose", "tank"], abs=6e-4)


@pytest.mark.parametrize("vessel", VESSELS)
def test_the_short_list_makes_as_much(ask, most, vessel, tmp_path):
    short = tmp_path / "short.flux"
    applied = f"alanine * on-xylose * {vessel}"
    asked = ["lump", str(MODEL), "--variant", applied, "--keep", "pyruvate"]
    assert run([*asked, "-o", str(short)]) == Exit.SOUND
    found = ask(short, {"mu": 0.04}, maximise=P, unit="mmol/g/h")
    expected = 6 * most("alanine", "xylose", vessel=vessel, mu=0.04)
    assert found.optimum == pytest.approx(expected, rel=1e-9)
    assert len(found.fluxes) < 16


def _table() -> dict[tuple[str, str, str], float]:
    lines = [
        [cell.strip(" *") for cell in line.strip("|").split("|")]
        for line in (FOLDER / "answer.md").read_text(encoding="utf-8").splitlines()
        if line.startswith("| ")
    ]
    heads = [tuple(head.split(", ")) for head in lines[0][1:]]
    return {
        (line[0], *head): float(cell)
        for line in lines[1:]
        for head, cell in zip(heads, line[1:], strict=True)
    }


TABLE = _table()


def test_the_answer_has_every_way_on_every_sugar_in_every_vessel():
    assert set(TABLE) == {(w, s, v) for w in WAYS for s in SUGARS for v in VESSELS}


@pytest.mark.parametrize("choice", TABLE, ids=[" ".join(c) for c in TABLE])
def test_the_yields_of_the_answer_are_those_of_the_model(most, choice):
    way, sugar, vessel = choice
    found = most(way, sugar, vessel=vessel, mu=0.04) * 3 / SUGARS[sugar][1]
    assert found == pytest.approx(TABLE[choice], abs=6e-4)


def test_the_best_yield_is_not_the_best_choice():
    # on paper the way by glycerol; in the tank that by alanine, and on xylose by far
    assert max(TABLE, key=TABLE.__getitem__) == ("glycerol", "glucose", "stirred")
    for sugar in SUGARS:
        found = {way: TABLE[way, sugar, "tank"] for way in WAYS}
        assert max(found, key=found.__getitem__) == "alanine"
    others = [TABLE[way, "xylose", "tank"] for way in WAYS if way != "alanine"]
    assert TABLE["alanine", "xylose", "tank"] > 1.7 * max(others)


def test_the_cheapest_sugar_for_a_kilogram_of_acid():
    text = (FOLDER / "README.md").read_text(encoding="utf-8")
    prices = dict(zip(SUGARS, (0.45, 0.28), strict=True))
    assert all(re.search(rf"\b{price}\b", text) for price in prices.values())
    cost = {
        (way, sugar): prices[sugar] / TABLE[way, sugar, "tank"] for way in WAYS for sugar in SUGARS
    }
    assert min(cost, key=cost.__getitem__) == ("alanine", "xylose")
    assert cost["alanine", "xylose"] == pytest.approx(0.66, abs=0.005)
    assert cost["alanine", "glucose"] == pytest.approx(0.96, abs=0.005)
    assert cost["aspartate", "xylose"] == pytest.approx(1.19, abs=0.005)


def test_what_the_reactor_has_to_supply_is_what_the_comparison_tells(capsys):
    asked = ["compare", str(MODEL), "--product", P, "--from", "xylose", "--across", "alanine"]
    more = ["--across", "tank", "--reserve", "mu=0.04", "--biomass", "20 g/L", "--draws", "0"]
    assert run([*asked, *more, "--json"]) == Exit.SOUND
    litre = json.loads(capsys.readouterr().out)["variants"][0]["supply"]["per_litre"]
    text = " ".join((FOLDER / "answer.md").read_text(encoding="utf-8").split())
    for value, words in (
        (litre["oxygen"], r"all the oxygen it has, ([\d.]+) mmol per litre"),
        (litre["base"], r"([\d.]+) mmol of base per litre"),
        (litre["heat"], r"cooling of ([\d.]+) W per litre"),
        (litre["carbon_dioxide"], r"([\d.]+) mmol of CO2 per litre"),
    ):
        (told,) = re.findall(words, text)
        assert float(told) == pytest.approx(value, rel=0.02)
