"""What tests of whole models share: asking one question of a model file."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest
from hypothesis import settings

if TYPE_CHECKING:
    from fluxnet.network.model import Network
    from fluxnet.rates.measured import Run
    from fluxnet.studies.solution import FluxSolution

# The seed of a random test is the hash of its name: a failure can be had again. How long an
# example takes is the machine's affair: no deadline.
settings.register_profile("by name", derandomize=True, deadline=None)
settings.load_profile("by name")

MODELS = Path(__file__).resolve().parent.parent / "models"


@dataclass(frozen=True)
class Answer:
    """One run's solution, with its numbers by name."""

    solution: FluxSolution

    def __getattr__(self, name: str) -> Any:
        return getattr(self.solution, name)

    def rate(self, species: str) -> float:
        """The reconciled or optimal rate of a boundary species, in its usual direction."""
        found = [r for r in self.solution.rates if r.quantity.name == species]
        assert found, f"no rate of {species} among {[str(r.quantity) for r in self.solution.rates]}"
        return found[0].reconciled

    def flux(self, reaction: str) -> float:
        """The flux of a reaction."""
        return next(f.value for f in self.solution.fluxes if f.reaction == reaction)


def table_text(rates: Mapping[str, float], sd: str = "0", unit: str = "mmol") -> str:
    """A rates table of one run; zeros are exact."""
    lines = ["run,species,direction,rate,sd,unit"]
    for quantity, value in rates.items():
        name, _, direction = quantity.partition(" ")
        shown = unit if name != "mu" else "1/h"
        lines.append(f'asked,"{name}",{direction},{value},{sd if value else 0},{shown}')
    return "\n".join(lines) + "\n"


@pytest.fixture
def ask() -> Callable[..., Answer]:
    """Ask a model by its name in models/ or its path; rates are a table or {"glucose in": 1}.

    ``sd`` is that of all rates that are not zero (0: exact); ``unit`` their unit. Such rates are
    written as a table and read as a user's would be. ``place`` is that of the run in the table.
    """
    import fluxnet as fx

    def ask(
        model: str | Path,
        rates: Mapping[str, float] | Path | None = None,
        *,
        variant: str = "base",
        unit: str = "mmol",
        sd: str = "0",
        maximise: str | None = None,
        minimise: str | None = None,
        place: int = 0,
    ) -> Answer:
        path = MODELS / f"{model}.flux" if isinstance(model, str) else model
        network = fx.read_model(path).variant(variant)
        table: fx.Rates | None = None
        if isinstance(rates, Path):
            table = fx.read_rates(rates, network)
        elif rates is not None:
            table = fx.read_rates_text(table_text(rates, sd, unit), network)
        solution = fx.solve(network, table, maximise=maximise, minimise=minimise)
        return Answer(solution.runs[place])

    return ask


@pytest.fixture
def read_run() -> Callable[..., Run]:
    """Rates as {"glucose in": 1} written as a table, and read as the one run of a network."""
    from fluxnet.tables.rates_table import read_rates_text

    def read_run(
        network: Network, rates: Mapping[str, float], *, sd: str = "0", unit: str = "mmol"
    ) -> Run:
        reading = read_rates_text(table_text(rates, sd, unit), network=network)
        assert reading.table is not None, reading.diagnostics
        return reading.table.runs[0]

    return read_run
