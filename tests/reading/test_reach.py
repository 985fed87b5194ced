"""Numbers that can be read and that nothing can be computed with."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name, Severity
from fluxnet.reading.model import read_model_text

CELL = """\
substrate glucose, oxygen
product ethanol
exchange CO2
carrier ATP carries energy
inside pyruvate
carrier NADH carries 2 electrons
parameter PO = {value}
compartment c
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    oxphos     : NADH + 0.5 oxygen -> {made} ATP
    upkeep     : ATP -> nothing
{limit}
"""


def errors(value: str = "1.4", made: str = "PO", limit: str = "") -> list[tuple[str, str, int]]:
    found = read_model_text(CELL.format(value=value, made=made, limit=limit)).diagnostics
    return [
        (d.name, d.message, d.span.line) for d in found if d.severity is Severity.ERROR
    ]


@pytest.mark.parametrize("value", ["1e400", "1e308 ± 1e308", "1.4 in [1e-400, 1e400]", "1e31"])
def test_a_parameter_out_of_reach_is_told_at_its_line(value: str) -> None:
    found = errors(value=value)

    assert {(name, line) for name, _, line in found} == {(Name.UNREADABLE_LINE, 7)}
    assert all("out of reach" in message for _, message, _ in found)


@pytest.mark.parametrize("made", ["1e308", "(1e29*1e29*PO)", "(1e29*1e29)", "(1/(1e29*1e29*PO))",
                                  "1e999999999999", "1e-999999999999"])  # fmt: skip
def test_a_coefficient_out_of_reach_is_told_at_its_line(made: str) -> None:
    ((name, message, line),) = errors(made=made)

    assert (name, line) == (Name.UNREADABLE_LINE, 11)
    assert "out of reach" in message


@pytest.mark.parametrize(
    ("limit", "name"),
    [
        ("limit glucose <= 1e99", Name.UNREADABLE_LINE),
        ("limit glucose = 1 ± 1e-90", Name.UNREADABLE_LINE),
        ("limit glucose = 1 ± 1e-12", Name.BAD_LIMIT),
        ("limit glucose = 1 ± 1e12", Name.BAD_LIMIT),
        ("limit CO2 / oxygen = 1e50", Name.UNREADABLE_LINE),
    ],
)
def test_a_limit_out_of_reach_is_told_at_its_line(limit: str, name: Name) -> None:
    ((found, _, line),) = errors(limit=limit)

    assert (found, line) == (name, 13)


def test_numbers_within_reach_are_taken() -> None:
    assert errors(value="1e12", made="(PO*1e-6)", limit="limit glucose = 1 ± 1e-8") == []
