"""Each aim of each model: the answer is proven, and the bill of an optimum adds up exactly."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import pytest

from fluxnet.network.model import Network, Role
from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model_text
from fluxnet.studies.bill import BillSide
from fluxnet.studies.bill_rounding import print_bill
from fluxnet.studies.solution import FluxSolution, SolveStatus
from fluxnet.studies.solve import solve_network

MODELS = sorted((Path(__file__).resolve().parents[2] / "models").glob("*.flux"))


@pytest.fixture(params=MODELS, ids=[path.stem for path in MODELS], scope="module")
def answers(request) -> list[FluxSolution]:
    """Every aim of the model with all that it takes up limited, and of its variants."""
    text = request.param.read_text(encoding="utf-8")
    bare = read_model_text(text).network
    assert bare is not None
    limited = {limit.quantity.name for limit in bare.limits} | {"H2O", "ammonia", "CO2"}
    taken = [s for s in bare.boundary if s.role in (Role.SUBSTRATE, Role.EXCHANGE)]
    limits = "\n".join(
        f"limit {s.name} {'in ' if s.role is Role.EXCHANGE else ''}<= {7 + k}.3"
        for k, s in enumerate(taken)
        if s.name not in limited
    )
    head, _, rest = text.partition("\nvariant ")
    reading = read_model_text(f"{head}\n{limits}\n" + (f"\nvariant {rest}" if rest else ""))
    assert reading.network is not None, reading.diagnostics
    found = [reading.network]
    for variant in reading.network.variants:
        changed, _ = apply_variant(reading.network, variant.name)
        assert changed is not None
        found.append(changed)
    return [
        solve_network(network, maximise=aim).runs[0]
        for network in found
        for aim in aims(network)
    ]


def aims(network: Network) -> list[str]:
    products = [s.name for s in network.boundary if s.role is Role.PRODUCT]
    carriers = [s.name for s in network.carriers if s.name == "ATP"]
    return ["mu", *products[:3], *carriers]


def test_every_answer_is_proven_and_every_bill_adds_up_to_the_last_digit(answers) -> None:
    best = 0
    for run in answers:
        assert run.proof is not None
        assert run.proof.verified, (run.variant, str(run.aim), run.proof.words)
        if run.status is not SolveStatus.OPTIMAL:
            continue
        best += 1
        bill = run.bill
        assert bill is not None
        assert bill.verified
        assert bill.supply == bill.demand
        assert bill.shortfall == 0
        for side, total in ((BillSide.SUPPLY, bill.supply), (BillSide.DEMAND, bill.demand)):
            lines = [line for line in bill.lines if line.side is side]
            assert sum(line.worth for line in lines) == pytest.approx(total, rel=1e-12)
            for line in lines:
                assert line.worth == pytest.approx(line.amount * line.price, rel=1e-12)
                assert line.worth > 0
    assert best >= 3


def test_the_printed_worths_add_up_by_hand(answers) -> None:
    for run in answers:
        if run.bill is None or not run.bill.lines:
            continue
        printed = print_bill(run.bill, 5)
        for side, total in ((BillSide.SUPPLY, printed.supply), (BillSide.DEMAND, printed.demand)):
            worths = [
                Fraction(worth)
                for line, (_, _, worth) in zip(run.bill.lines, printed.lines, strict=True)
                if line.side is side
            ]
            assert sum(worths) == Fraction(total)
        assert Fraction(printed.shortfall) == 0


def test_what_the_limits_are_worth_is_what_the_aim_is(answers) -> None:
    # Euler: the best value is the sum of what each bound is worth times where it stands.
    for run in answers:
        if run.status is SolveStatus.OPTIMAL and run.optimum is not None:
            total = sum(limit.worth * limit.value for limit in run.limits)
            assert total == pytest.approx(run.optimum, rel=1e-9, abs=1e-9)
