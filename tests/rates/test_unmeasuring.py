from __future__ import annotations

import numpy as np

from fluxnet.rates.unmeasuring import leave_unmeasured, measured_names
from fluxnet.tables.rates_table import read_rates_text

TEXT = """shared error biomass 4 %
run,species,direction,rate,sd,unit
1,glucose,in,2.0,3 %,mmol/g/h
1,oxygen,in,4.0,5 %,mmol/g/h
1,CO2,out,4.5,5 %,mmol/g/h
1,mu,,0.17,3 %,1/h
"""


def test_a_blanked_rate_is_as_if_its_cell_were_blank() -> None:
    table = read_rates_text(TEXT).table
    by_hand = read_rates_text(TEXT.replace("oxygen,in,4.0,5 %", "oxygen,in,,")).table
    assert table is not None
    assert by_hand is not None
    (blanked,), (expected,) = leave_unmeasured(table, ["oxygen"]).runs, by_hand.runs

    assert [r.value for r in blanked.rates] == [r.value for r in expected.rates]
    assert blanked.covariance is not None
    assert expected.covariance is not None
    assert np.allclose(blanked.covariance, expected.covariance, rtol=1e-14)


def test_quantities_are_named_shortly() -> None:
    table = read_rates_text(TEXT).table
    assert table is not None

    assert measured_names(table) == ("glucose", "oxygen", "CO2", "mu")
