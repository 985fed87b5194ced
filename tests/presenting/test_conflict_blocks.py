"""What is shown of rates that cannot hold together, on the demo's run that cannot be paid for."""

from __future__ import annotations

import json
import re
from decimal import Decimal
from io import StringIO
from pathlib import Path

import jsonschema
import pytest

import fluxnet as fx
import fluxnet.presenting
from fluxnet.ground.resources import resource_folder
from fluxnet.ground.table import Table
from fluxnet.presenting.conflict_blocks import conflict_blocks
from fluxnet.presenting.screen import Sentence
from fluxnet.presenting.solve_record import solve_record
from fluxnet.presenting.solve_screen import solve_screen
from fluxnet.presenting.terminal import Terminal
from fluxnet.studies.solution import Solution, SolveStatus

DEMO = Path(resource_folder("examples")) / "1-four-weeks-of-a-diol"


def solve(run: str, aim: str | None = None):
    network = fx.read_model(DEMO / "tw4.flux")
    rates = fx.read_rates(DEMO / "rates.csv", network)
    solution = fx.solve(network, rates, maximise=aim).result
    return next(x for x in solution.runs if x.run == run), solution.network


@pytest.fixture(scope="module")
def asked():
    return solve("W14", "2,3-butanediol")


@pytest.fixture(scope="module")
def fitted():
    return solve("W14")


def shown(run, network) -> list[str]:
    stream = StringIO()
    Terminal.text(stream).show(solve_screen(Solution(network, (run,))))
    return stream.getvalue().splitlines()


def bill_of(lines: list[str]) -> list[str]:
    start = next(k for k, line in enumerate(lines) if line.startswith("Bill, worth"))
    end = next(k for k, line in enumerate(lines) if line.startswith("missing"))
    return lines[start : end + 1]


def last(line: str) -> Decimal:
    return Decimal(line.split()[-1])


@pytest.mark.parametrize("which", ["asked", "fitted"])
def test_the_bill_adds_up_by_hand(which, request):
    run, network = request.getfixturevalue(which)
    bill = bill_of(shown(run, network))
    together = [k for k, line in enumerate(bill) if line.strip().startswith("together")]
    first, second = together
    needed, given = bill[3:first], bill[first + 2 : second]
    assert len(needed) == 2
    assert len(given) >= 2
    for lines, total in ((needed, bill[first]), (given, bill[second])):
        assert sum(last(line) for line in lines) == last(total)
        for line in lines:
            amount, _, price, worth = re.split(r" {2,}", line.strip())[1:]
            step = Decimal(1).scaleb(Decimal(worth).as_tuple().exponent)
            assert abs(Decimal(amount) * Decimal(price) - Decimal(worth)) < 2 * step, line
    assert last(bill[first]) - last(bill[second]) == last(bill[-1]) > 0


def test_the_verdict_the_bill_and_the_way_out_fit_on_one_screen(asked):
    run, network = asked
    lines = shown(run, network)
    assert len(lines) <= 48
    assert all(len(line) <= 80 for line in lines)
    text = " ".join(lines)
    assert "The ATP that growth and upkeep need, 7.522, is more than" in text
    assert "can bring, 5.516 mmol ATP/g/h" in text
    assert "upkeep at most 1.194 (-7.0 sd from the value 4)" in text
    parts = ("Bill, worth", "Without any", "The least change", "alone")
    order = [text.index(part) for part in parts]
    order.remove(order[2])  # the verdict tells of the least change, too
    assert order == sorted(order)


def test_what_is_missing_in_the_bill_is_what_the_easiest_way_out_gives_up(asked):
    (told,) = asked[0].conflicts
    upkeep = next(a for a in told.alternatives if a.quantity.name == "upkeep")
    line = next(x for x in told.bill.lines if x.name.startswith("upkeep"))
    assert line.price == 1.0
    assert line.amount - told.bill.shortfall == pytest.approx(upkeep.needed, rel=1e-9)
    assert told.beyond == ()


def test_of_six_values_of_upkeep_it_is_told_which_to_use(asked, fitted):
    told = " ".join(shown(*fitted))
    assert "Which value of upkeep to use? Best estimate without the 4: 0.7 ± 0.6" in told
    assert "At most 1.194 with every other measured value stretched to 2 sd" in told
    assert "Best estimate without" not in " ".join(shown(*asked))


def test_a_rejected_fit_has_the_same_bill(asked, fitted):
    assert fitted[0].status is SolveStatus.INCONSISTENT
    assert fitted[0].conflicts[0].bill == asked[0].conflicts[0].bill


def test_prices_are_shown_where_they_are_asked_for(asked):
    run, _ = asked

    def prices(**options):
        blocks = conflict_blocks(run, **options)
        return next(b for b in blocks if isinstance(b, Table) and b.key == "bill_prices")

    assert not prices().is_shown
    table = prices(prices=True)
    assert table.is_shown
    assert ("ATP", 1.0, "mmol ATP/g/h") in table.rows
    assert any(price < 0 for _, price, _ in table.rows)
    assert table.notes


def test_the_record_holds_the_bill_in_full(asked):
    run, network = asked
    record = solve_record(Solution(network, (run,)))["runs"][0]["conflict"]
    assert record["verified"]
    assert record["irreducible"]
    assert record["bill_unit"] == "mmol ATP/g/h"
    for side in ("supply", "demand"):
        worths = [x["worth"] for x in record["bill"] if x["side"] == side]
        assert sum(worths) == pytest.approx(record[side], rel=1e-12)
    assert record["demand"] - record["supply"] == pytest.approx(record["shortfall"])
    assert {a["species"] for a in record["alternatives"]} >= {"flux upkeep"}
    assert record["others"] == []


@pytest.mark.parametrize("which", ["asked", "fitted"])
def test_the_schema_allows_the_record(which, request):
    run, network = request.getfixturevalue(which)
    schemas = Path(fluxnet.presenting.__file__).parent / "schemas"
    schema = json.loads((schemas / "solve-1.json").read_text(encoding="utf-8"))
    body = json.loads(json.dumps(solve_record(Solution(network, (run,)))))
    head = {"fluxnet": "1", "document": "solve/1", "inputs": [], "warnings": []}
    jsonschema.validate({**head, **body}, schema)


def test_members_are_told_by_the_bill_and_the_sentence_behind_it(asked):
    run, _ = asked
    blocks = conflict_blocks(run)
    members = next(b for b in blocks if isinstance(b, Table) and b.key == "conflict")
    assert not members.is_shown
    assert len(members.rows) == len(run.conflicts[0].conflict.given)
    told = next(b.text for b in blocks if isinstance(b, Sentence) and "each was tried" in b.text)
    assert "balance of ATP" in told
    assert "exact arithmetic" in told
