"""What tests of rates tables share: a small model, and a reading whose faults are shown."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.network.model import Basis, Compartment, Network, Reaction, Role, Species
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.tables.rates_table import RatesReading, read_rates_text


def boundary(name: str, role: Role, formula: str, entry: str | None = None) -> Species:
    return Species(name, role, read_formula(formula), entry=entry)


def small_network(basis: Basis = Basis.SPECIFIC) -> Network:
    species = (
        boundary("glucose", Role.SUBSTRATE, "C6H12O6", "glucose"),
        boundary("oxygen", Role.SUBSTRATE, "O2", "oxygen"),
        boundary("acetate", Role.PRODUCT, "C2H4O2", "acetate"),
        boundary("CO2", Role.EXCHANGE, "CO2", "CO2"),
        Species("X", Role.BIOMASS, read_formula("CH1.8O0.5N0.2"), ash=Fraction(8, 100)),
        Species("pyruvate", Role.INSIDE, read_formula("C3H4O3"), entry="pyruvate"),
    )
    upkeep = Reaction("upkeep", "work", (), ())
    return Network("small", basis, species, (), (Compartment("work"),), (upkeep,))


@pytest.fixture
def network() -> Network:
    return small_network()


@pytest.fixture
def read() -> Callable[..., Run]:
    """The one run of a table that must hold no error."""

    def read(text: str, **options: object) -> Run:
        reading = read_rates_text(text, **options)  # type: ignore[arg-type]
        assert reading.table is not None, told(reading)
        assert len(reading.table.runs) == 1
        return reading.table.runs[0]

    return read


@pytest.fixture
def fault() -> Callable[..., Diagnostic]:
    """The one error of a table that must hold exactly one."""

    def fault(text: str, **options: object) -> Diagnostic:
        reading = read_rates_text(text, **options)  # type: ignore[arg-type]
        errors = [d for d in reading.diagnostics if d.severity.value == "error"]
        assert reading.table is None
        assert len(errors) == 1, told(reading)
        return errors[0]

    return fault


def told(reading: RatesReading) -> list[str]:
    return [
        f"{d.name.value} ({d.span.line}:{d.span.column}): {d.message}" for d in reading.diagnostics
    ]


@pytest.fixture
def rate() -> Callable[[Run, str], MeasuredRate]:
    """The rate of a run by the name it is told with."""
    return lambda run, quantity: next(r for r in run.rates if str(r.quantity) == quantity)


@pytest.fixture
def carbon_network() -> Network:
    return small_network(Basis.CARBON)
