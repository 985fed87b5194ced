"""The time of whole fits: fluxes, errors, intervals, relations, and what the bounds add.

Run it as a script: ``python tests/benchmarks/fits.py``. Prints for a few models and runs the
median processor time of ``fit_fluxes`` in warm repeats, beside that of the plain range scan of
all fluxes of the same problem (two linear programmes a flux, no measured value judged): the
ratio says what judging the data costs beyond that.
"""

from __future__ import annotations

from pathlib import Path
from statistics import median
from time import process_time

from fluxnet.network.model import Network
from fluxnet.rates.measured import Run
from fluxnet.reading.model import read_model
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.ranges import find_ranges
from fluxnet.tables.rates_table import read_rates_text

HERE = Path(__file__).parent
MODELS = HERE.parent.parent / "models"
REPEATS = 7
HEAD = "run,species,direction,rate,sd,unit\n"
CASES = {
    "sixty reactions, two directions free": (HERE / "sixty.flux", """
first,glucose,in,4,0.2,mmol/g/h
first,xylose,in,0,0,mmol/g/h
first,oxygen,in,7,0.3,mmol/g/h
first,mu,,0.25,0.01,1/h
first,ethanol,out,1,0.1,mmol/g/h
first,acetate,out,2,0.1,mmol/g/h
first,CO2,out,9,0.5,mmol/g/h
"""),
    "mixed acids, three parameters, bounds that press": (MODELS / "mixed-acid.flux", """
first,glucose,in,10,0.5,mmol/g/h
first,lactate,out,1,0.1,mmol/g/h
first,acetate,out,8,0.4,mmol/g/h
first,ethanol,out,6,0.3,mmol/g/h
first,formate,out,10,0.5,mmol/g/h
first,CO2,out,5,0.5,mmol/g/h
first,oxygen,in,3,0.2,mmol/g/h
first,mu,,0.4,0.02,1/h
"""),
}


def timed(network: Network, run: Run) -> tuple[float, float, FluxFit]:
    """Median seconds of the whole fit and of the plain range scan, and the fit."""
    fit = fit_fluxes(network, run)
    ours, other = [], []
    for _ in range(REPEATS):
        start = process_time()
        fit_fluxes(network, run)
        middle = process_time()
        find_ranges(fit.built.problem)
        ours.append(middle - start)
        other.append(process_time() - middle)
    return median(ours), median(other), fit


def main() -> None:
    """Print one line a case."""
    for words, (path, rates) in CASES.items():
        network = read_model(path).network
        assert network is not None
        table = read_rates_text(HEAD + rates.lstrip(), network=network).table
        assert table is not None
        ours, other, fit = timed(network, table.runs[0])
        print(f"{words}: {len(network.reactions)} reactions, {fit.status.value}")
        print(f"    fit with all intervals {1000 * ours:.0f} ms,"
              f" range scan {1000 * other:.0f} ms, ratio {ours / other:.1f}")


if __name__ == "__main__":
    main()
