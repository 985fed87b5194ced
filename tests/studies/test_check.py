"""The whole check: every cause once, in order, and nothing heavy loaded for it."""

from __future__ import annotations

import subprocess
import sys

from fluxnet.ground.diagnostic import in_order
from fluxnet.ground.names import Name, Severity
from fluxnet.network.model import Basis, Direction, Quantity, QuantityKind
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.reading.model import read_model_text
from fluxnet.studies.check import CheckResult, check_network

BASE = """model Invented
basis mmol/g/h
substrate glucose, oxygen
product   ethanol, lactate
exchange  CO2
carrier   ATP  carries energy
carrier   NADH carries 2 electrons
inside    hub C3H4O3{more}
compartment all
    uptake  : glucose -> 2 hub + 2 ATP + 2 NADH
    ferment : hub + NADH -> lactate
    pdc     : hub + NADH -> ethanol + CO2
    burn    : hub -> 3 CO2 + 5 NADH
    breathe : NADH + 0.5 oxygen -> 2 ATP
    upkeep  : ATP -> nothing
"""


def check(lines: str = "", more: str = "") -> CheckResult:
    reading = read_model_text(BASE.replace("{more}", more) + lines)
    assert reading.network is not None, reading.diagnostics
    return check_network(reading.network, reading.diagnostics, sources=reading.sources)


def names(result: CheckResult) -> list[Name]:
    return [d.name for d in result.diagnostics]


def test_a_sound_model_has_no_finding_and_all_is_proven() -> None:
    result = check()

    assert result.diagnostics == ()
    assert result.sound
    assert result.verified
    assert (result.counts.species, result.counts.reactions, result.counts.carriers) == (8, 6, 2)
    assert result.freedom.dimension == 3
    assert [(m.substrate, m.amount) for m in result.most_atp] == [("glucose", 26)]


def test_a_dead_end_is_one_finding_however_long_its_chain() -> None:
    result = check("    r1 : hub -> A\n    r2 : A -> B\n    r3 : B -> C\n",
                   ", A C3H4O3, B C3H4O3, C C3H4O3")

    assert names(result) == [Name.DEAD_END]
    assert result.blocked_reactions == ("r1", "r2", "r3")
    assert result.diagnostics[0].source_line == "inside    hub C3H4O3, A C3H4O3, B C3H4O3, C C3H4O3"


def test_a_dead_end_in_a_part_without_food_is_not_told_twice() -> None:
    result = check("    r1 : A -> B\n    r2 : B -> C\n", ", A C3H4O3, B C3H4O3, C C3H4O3")

    assert set(names(result)) == {Name.DEAD_END}
    assert result.parts == ()


def test_a_warning_is_silenced_where_its_line_accepts_it() -> None:
    end = "inside A C3H4O3   accept dead-end: its way out comes later\n"

    result = check("    r1 : hub -> A\n" + end)

    (told,) = result.diagnostics
    assert told.accepted == "its way out comes later"


def test_an_acceptance_that_meets_nothing_is_told() -> None:
    lines = """product acetate   accept dead-end: none
compartment more
    ack : hub -> acetate + CO2 + NADH
"""

    assert names(check(lines)) == [Name.ACCEPT_UNUSED]


def test_errors_stand_before_warnings() -> None:
    result = check("    up : A + ATP -> B\n    down : B -> A + 2 ATP\n    r1 : hub -> C\n",
                   ", A, B, C C3H4O3")

    kinds = [d.severity for d in result.diagnostics]
    assert kinds == sorted(kinds, key=lambda s: s.rank)
    assert kinds[0] is Severity.ERROR
    assert not result.sound
    assert result.diagnostics == in_order(result.diagnostics)


def test_without_a_substrate_that_alone_is_told() -> None:
    text = BASE.replace("{more}", "").replace("substrate glucose,", "product glucose\nsubstrate")
    reading = read_model_text(text)
    assert reading.network is not None

    result = check_network(reading.network, reading.diagnostics)

    assert names(result) == [Name.NO_SUBSTRATE]


def test_a_run_tells_what_its_rates_determine() -> None:
    reading = read_model_text(BASE.replace("{more}", ""))
    assert reading.network is not None
    glucose = Quantity(QuantityKind.RATE, "glucose", Direction.IN)
    lactate = Quantity(QuantityKind.RATE, "lactate", Direction.OUT)
    rates = tuple(MeasuredRate(q, 1.0, 0.1) for q in (glucose, lactate))
    blank = MeasuredRate(Quantity(QuantityKind.RATE, "ethanol", Direction.OUT), None, None)

    result = check_network(reading.network, rates=Run("one", Basis.SPECIFIC, (*rates, blank)))

    assert result.freedom.measured == (glucose, lactate)
    assert result.freedom.determined == ("uptake", "ferment")
    assert result.freedom.missing == (blank.quantity,)


def test_progress_is_told_from_the_first_step_to_the_last() -> None:
    reading = read_model_text(BASE.replace("{more}", ""))
    assert reading.network is not None
    heard: list[tuple[str, int, int]] = []

    check_network(reading.network, progress=lambda *step: heard.append(step))

    assert [done for _, done, _ in heard] == list(range(len(heard)))
    assert all(total == heard[-1][1] for _, _, total in heard)


def test_checking_loads_neither_scipy_nor_pandas_nor_matplotlib() -> None:
    program = (
        "import sys\n"
        "from fluxnet.reading.model import read_model_text\n"
        "from fluxnet.studies.check import check_network\n"
        f"reading = read_model_text({BASE.replace('{more}', '')!r})\n"
        "assert check_network(reading.network).sound\n"
        "print([m for m in ('scipy', 'pandas', 'matplotlib') if m in sys.modules])\n"
    )

    command = [sys.executable, "-c", program]
    out = subprocess.run(command, capture_output=True, text=True, check=True)

    assert out.stdout == "[]\n"
