"""Where solvers give up on numbers far apart, the two numbers are told, not a false optimum."""

from __future__ import annotations

from fluxnet.cli.new import MODEL
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text
from fluxnet.studies.precision import find_numbers_apart
from fluxnet.studies.solve import solve_network
from fluxnet.tables.rates_table import read_rates_text


def network_of(text: str) -> Network:
    network = read_model_text(text).network
    assert network is not None
    return network


def test_the_two_numbers_that_lie_farthest_apart_are_told_with_both_places() -> None:
    wide = MODEL.replace("-> PO ATP", "-> 4e9 ATP")
    wide = wide.replace("upkeep     : ATP", "upkeep     : 1e-12 ATP")
    network = network_of(wide.replace("limit  upkeep = 1.0 ± 0.3", "limit  glucose <= 10"))
    found = find_numbers_apart(network, None, "the solver gave up")

    lines = wide.splitlines()
    assert found is not None
    assert found.name is Name.BEYOND_PRECISION
    assert found.because == "the solver gave up"
    assert "4e9 ATP" in lines[found.span.line - 1]
    assert "1e-12 ATP" in lines[found.also[0].line - 1]


def test_numbers_of_one_size_are_never_the_cause() -> None:
    assert find_numbers_apart(network_of(MODEL), None, "the solver gave up") is None


def test_a_rate_that_dwarfs_the_others_is_told_at_its_row() -> None:
    network = network_of(MODEL)
    rates = "run,species,direction,rate,sd,unit\n" + "".join(
        f"A,{row},5 %,mmol/g/h\n" for row in ("glucose,in,1e20", "oxygen,in,3.6", "CO2,out,4.4")
    )
    (run,) = read_rates_text(rates, network=network).table.runs
    found = find_numbers_apart(network, run, "the solver gave up")

    assert found is not None
    assert "the rate of glucose in" in found.message
    assert (found.span.file, found.span.line) == ("rates.csv", 2)


def test_an_aim_without_an_end_keeps_the_names_of_its_carriers() -> None:
    endless = network_of(MODEL.replace("limit  upkeep = 1.0 ± 0.3", ""))
    (found,) = solve_network(endless, maximise="ATP").runs

    assert found.words.startswith("Maximise surplus of ATP: there is no end to it")
