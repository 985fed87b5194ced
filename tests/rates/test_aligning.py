"""A table read without a model, matched to one."""

from __future__ import annotations

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, Compartment, Network, Reaction, Role, Species
from fluxnet.rates.aligning import align_table
from fluxnet.tables.rates_table import read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"


@pytest.fixture
def network() -> Network:
    species = (
        Species("glc", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
        Species("acetate", Role.PRODUCT, read_formula("C2H4O2"), entry="acetate"),
        Species("CO2", Role.EXCHANGE, read_formula("CO2"), entry="CO2"),
        Species("cells", Role.BIOMASS, read_formula("CH1.8O0.5N0.2")),
    )
    upkeep = Reaction("upkeep", "work", (), ())
    return Network("n", Basis.SPECIFIC, species, (), (Compartment("work"),), (upkeep,))


def aligned(text: str, network: Network):
    table = read_rates_text(LONG + text).table
    assert table is not None
    return align_table(table, network)


def test_names_are_matched_through_the_catalogue(network):
    found = aligned(
        "A,dextrose,in,2,1,mmol/g/h\nA,acetic acid,out,1,1,mmol/g/h\nA,biomass,out,1,1,mmol/g/h\n"
        "A,CO2 / dextrose,,2,0.1,\n", network,
    )  # fmt: skip
    assert found.table is not None
    names = [str(r.quantity) for r in found.table.runs[0].rates]
    assert names == ["glc in", "acetate out", "cells out", "CO2 out / glc in"]
    assert [s.name for s in found.table.species] == ["glc", "acetate", "cells", "CO2"]
    assert found.table.find_species("glc") is network.find_species("glc")


def test_matching_twice_changes_nothing(network):
    once = aligned("A,dextrose,in,2,1,mmol/g/h\nA,mu,,0.1,1 %,1/h\n", network).table
    assert align_table(once, network).table == once


@pytest.mark.parametrize(
    ("row", "name"),
    [
        ("A,ethanol,out,1,1,mmol/g/h", Name.UNKNOWN_QUANTITY),
        ("A,glucose,out,1,1,mmol/g/h", Name.RATE_AGAINST_ROLE),
        ("A,ethanol / glucose,,1,1,", Name.UNKNOWN_QUANTITY),
    ],
)
def test_what_the_model_cannot_do_is_an_error_at_its_row(network, row, name):
    found = aligned(row + "\n", network)
    assert found.table is None
    assert [(d.name, d.span.line) for d in found.diagnostics] == [(name, 2)]


def test_a_growth_rate_needs_biomass_in_the_model(network):
    barren = Network("n", network.basis, network.species[:3], (), (), ())
    found = aligned("A,mu,,0.1,1 %,1/h\n", barren)
    assert [d.name for d in found.diagnostics] == [Name.UNKNOWN_QUANTITY]


def test_two_rates_that_the_model_calls_one_are_an_error(network):
    text = "biomass X CH1.8O0.5N0.2\nbiomass Y CH1.7O0.5N0.2\n" + LONG
    table = read_rates_text(text + "A,X,out,2,1,mmol\nA,Y,out,2,1,mmol\n").table
    found = align_table(table, network)
    assert [(d.name, d.span.line) for d in found.diagnostics] == [(Name.ROW_REPEATED, 5)]


def test_a_ratio_over_a_rate_of_zero_has_no_value(network):
    found = aligned("A,dextrose,in,0,0,mmol/g/h\nA,CO2 / dextrose,,2,0.1,\n", network)
    (told,) = found.diagnostics
    assert (told.name, told.span.line) == (Name.UNREADABLE_CELL, 3)
    assert "since glc in is 0" in told.message or "since dextrose in is 0" in told.message


@pytest.mark.parametrize("correlation", [1, -1])
def test_errors_that_leave_a_sum_of_rates_exact_cannot_be_weighed(network, correlation):
    text = "A,dextrose,in,2,0.1,mmol/g/h\nA,acetate,out,1,0.1,mmol/g/h\n"
    pairs = f"run,first,second,correlation\nA,dextrose in,acetate out,{correlation}\n"
    table = read_rates_text(LONG + text, covariance=pairs).table
    (told,) = align_table(table, network).diagnostics
    assert (told.name, told.span.line) == (Name.BAD_COVARIANCE, 2)


def test_errors_that_move_together_for_the_most_part_are_weighed(network):
    text = "A,dextrose,in,2,0.1,mmol/g/h\nA,acetate,out,1,0,mmol/g/h\nA,CO2,out,3,0.2,mmol/g/h\n"
    pairs = "run,first,second,correlation\nA,dextrose in,CO2 out,0.999999\n"
    table = read_rates_text(LONG + text, covariance=pairs).table
    assert align_table(table, network).table is not None
