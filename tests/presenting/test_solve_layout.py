"""What a solve shows can be read at 80 columns: no exponents, no term torn apart."""

from __future__ import annotations

import io
import re
from typing import Any

import pytest

from fluxnet.ground.resources import resource_folder
from fluxnet.presenting.solve_screen import solve_screen
from fluxnet.presenting.terminal import Terminal
from fluxnet.reading.model import read_model
from fluxnet.studies.solve import solve_network
from fluxnet.tables.rates_table import read_rates_text

MODELS = sorted(path.stem for path in resource_folder("models").glob("*.flux"))
HEAD = "run,species,direction,rate,sd,unit\n"


def shown(name: str, rates: str | None, **options: Any) -> str:
    network = read_model(resource_folder("models") / f"{name}.flux").network
    assert network is not None
    table = None if rates is None else read_rates_text(HEAD + rates, network=network).table
    stream = io.StringIO()
    Terminal.text(stream).show(solve_screen(solve_network(network, table, **options)))
    return stream.getvalue()


@pytest.fixture(scope="module", params=MODELS)
def screen(request: pytest.FixtureRequest) -> str:
    substrate = "methanol" if request.param == "methylotroph" else "glucose"
    return shown(request.param, f"a,{substrate},in,10,10 %,mmol/g/h\na,X,out,2,10 %,mmol/g/h\n")


def test_no_number_has_an_exponent(screen: str) -> None:
    # but for the size of what is left of the balances
    lines = [line for line in screen.splitlines() if not line.startswith("Every balance holds")]

    assert not re.search(r"\d[eE][+-]?\d", "\n".join(lines))


def test_no_line_is_wider_than_eighty_columns(screen: str) -> None:
    assert max(map(len, screen.splitlines())) <= 80


def test_an_equation_is_broken_before_a_sign_only(screen: str) -> None:
    _, _, rest = screen.partition("Net equations")
    table, _, _ = rest.partition("\n\n")
    # below the title, the columns' titles and the rule; the names' column is two spaces off
    lines = table.splitlines()[3:]
    start = table.splitlines()[1].index("equation")

    assert lines
    for line in lines:
        assert line[:start].strip() or line[start] in "+-"
        assert not line.endswith(("+", "->"))


def test_where_nothing_runs_no_net_equation_is_shown() -> None:
    screen = shown("solvent", "a,glucose,in,0,0,mmol/g/h\n", maximise="ethanol", within=1e3)

    assert "Net equations" not in screen
    assert "Carrier ledger" in screen
