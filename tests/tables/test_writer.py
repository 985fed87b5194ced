"""Writing rates, and reading them back."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.tables.rates_table import read_rates_text
from fluxnet.tables.writer import write_covariance_text, write_rates_text

LONG = "run,species,direction,rate,sd,unit\n"
TABLES = {
    "specific rates with a shared error": "shared error biomass 4 %\n" + LONG
    + "A,glucose,in,2,0.1,mmol/g/h\nA,acetic acid,out,1,7 %,mmol/g/h\nA,mu,,0.1,1 %,1/h\n"
    + "B,glucose,in,0.3333333333333333,,g/g/h\nB,CO2,out,,,mmol/g/h\n",
    "amounts per 100 mol": LONG
    + "A,glucose,in,100,0,mol/100 mol\nA,ethanol,out,150,3,mol/100 mol\n",
    "per C-mol of substrate": LONG + "A,glucose,in,1,0,C-mol/C-mol\nA,oxygen,in,.1,5 %,mol/C-mol\n",
    "per C-mol of biomass": LONG
    + "A,glucose,in,2.87,1 %,C-mol/C-mol/h\nA,oxygen,in,0.313,1 %,mol/C-mol/h\n",
    "volumetric, with a declared medium": "substrate yeast-extract CH1.6O0.5N0.2\n"
    "biomass X CH1.8O0.5N0.2 ash 8 ± 0.5 %\nnitrogen source urea\n" + LONG
    + "A,yeast-extract,in,1,0.1,gC/L/h\nA,X,out,0.4,0.1,g/L/h\n",
    "whole reactor": LONG + "A,glucose,in,2,0.1,mmol/h\n",
    "a ratio and extra columns": "run,strain,glucose in [mmol],CO2 / oxygen,CO2 / oxygen sd\n"
    "A,s7,2,1.05,0.03\nB,,3,1.02,3 %\n",
    "a locant": "2,3-butanediol out [mmol];glucose in [mmol]\n1,5;2\n",
}  # fmt: skip


def plain(table) -> list[object]:
    """What must come back: everything but the place and the way of writing."""
    runs = [
        (r.name, r.basis, r.unit, r.extras, r.shared_error,
         None if r.covariance is None else r.covariance.tolist(),
         [(x.quantity, x.value, x.sd, x.relative, x.own_sd) for x in r.rates])
        for r in table.runs
    ]  # fmt: skip
    species = [(s.name, s.role, s.formula, s.entry, s.ash, s.ash_sd) for s in table.species]
    return [runs, species, table.nitrogen]


@pytest.mark.parametrize("name", TABLES)
def test_a_table_that_is_written_is_read_back_as_it_was(name):
    first = read_rates_text(TABLES[name])
    assert first.table is not None, [d.message for d in first.diagnostics]
    text = write_rates_text(first.table)
    second = read_rates_text(text)
    assert second.table is not None, [d.message for d in second.diagnostics]
    assert plain(second.table) == plain(first.table)


@pytest.mark.parametrize("name", TABLES)
def test_writing_twice_gives_the_same_text(name):
    text = write_rates_text(read_rates_text(TABLES[name]).table)
    assert write_rates_text(read_rates_text(text).table) == text


def test_correlations_are_written_beside_the_rates():
    rates = (
        "shared error biomass 4 %\n"
        + LONG
        + ("A,glucose,in,2,0.1,mmol/g/h\nA,oxygen,in,3,0.2,mmol/g/h\nA,CO2,out,4,0.1,mmol/g/h\n")
    )
    first = read_rates_text(rates, covariance="first,second,correlation\noxygen,CO2,0.6\n").table
    pairs = write_covariance_text(first)
    assert len(pairs.splitlines()) == 2
    second = read_rates_text(write_rates_text(first), covariance=pairs).table
    np.testing.assert_allclose(
        second.runs[0].covariance, first.runs[0].covariance, rtol=1e-12, atol=1e-18
    )


def test_independent_errors_need_no_covariance_table():
    table = read_rates_text(TABLES["specific rates with a shared error"]).table
    assert write_covariance_text(table) == ""


def test_a_table_of_a_model_is_read_back_with_it(network):
    text = LONG + "A,glucose,in,2,0.1,mmol/g/h\nA,flux upkeep,,-1,0.1,mmol/g/h\nA,X,,4,1,mmol/g/h\n"
    first = read_rates_text(text, network=network).table
    second = read_rates_text(write_rates_text(first), network=network)
    assert second.table is not None, [d.message for d in second.diagnostics]
    assert plain(second.table) == plain(first)
