"""Make rates.csv: invented steady states of TW-4 with a known truth and stated noise.

Run as ``python make_rates.py``; it writes the table beside itself. What is true, and what was
done to it, stands in ``RUNS``: do not read on if you want to find out by yourself.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np

__all__ = ["RUNS", "SHARED_ERROR", "Truth", "make_table", "true_rates"]

PO, K_X = 1.25, 2.05
"""The true ATP per oxygen atom and per C-mol of biomass; the model's values are off a little."""

SHARED_ERROR = 0.03
"""Every specific rate was divided by one biomass value, known to 3 %."""

# one C-mol of CH1.8O0.5N0.2 with 7 % ash [g/mol]
_MASS = (12.011 + 1.8 * 1.008 + 0.5 * 15.999 + 0.2 * 14.007) / 0.93


@dataclass(frozen=True, slots=True)
class Truth:
    """One steady state as it really was; rates in mmol/g/h, ``mu`` in 1/h.

    ``upkeep`` is the true maintenance [mmol ATP/g/h]. ``faults`` multiply what the instruments
    reported; ``sds`` are the relative errors, where they differ from the usual ones.
    """

    run: str
    temperature: int
    mu: float
    butanediol: float
    acetoin: float
    acetate: float
    ethanol: float
    lactate: float
    upkeep: float
    faults: tuple[tuple[str, float], ...] = ()
    sds: tuple[tuple[str, float], ...] = ()


RUNS = (
    Truth("W09", 37, 0.10, 1.20, 0.15, 0.50, 0.20, 0.10, 4.0,
          sds=(("glucose", 0.05), ("2,3-butanediol", 0.05))),
    # the oxygen cell had drifted: it showed 18 % too little
    Truth("W11", 37, 0.20, 2.40, 0.30, 0.90, 0.50, 0.20, 4.0, faults=(("oxygen", 0.82),)),
    # kept at 30 °C, where these cells need far less upkeep than the 4.0 measured at 37 °C
    Truth("W14", 30, 0.05, 0.60, 0.05, 0.20, 0.15, 0.10, 1.2),
    Truth("W15", 37, 0.20, 2.20, 0.35, 0.80, 0.40, 0.30, 4.0),
)  # fmt: skip

_USUAL = {
    "glucose": 0.02, "oxygen": 0.03, "CO2": 0.02, "2,3-butanediol": 0.02, "acetoin": 0.05,
    "acetate": 0.04, "ethanol": 0.05, "lactate": 0.05, "mu": 0.01,
}  # fmt: skip


def true_rates(truth: Truth) -> dict[str, float]:
    """All rates of a steady state, worked out by hand from the pathway.

    With x C-mol of biomass a gram and hour, 1.1/6 x of G6P go into it; the rest of the glucose
    g becomes 2 (g - 1.1/6 x) pyruvate. Everything is linear in g, so that two trials find the
    g at which the ATP left over is the true upkeep.
    """
    low, high = _at(truth, 0.0)["upkeep"], _at(truth, 1.0)["upkeep"]
    return _at(truth, (truth.upkeep - low) / (high - low))


def _at(truth: Truth, glucose: float) -> dict[str, float]:
    x = truth.mu * 1000 / _MASS
    to_cells = 1.1 / 6 * x
    pyruvate = 2 * (glucose - to_cells)
    acetoin = truth.butanediol + truth.acetoin
    acetyl = pyruvate - 2 * acetoin - truth.lactate
    cycle = acetyl - truth.acetate - truth.ethanol
    nadh = pyruvate + acetyl + 4 * cycle + (4.4 - 4.2) / 2 * x
    nadh -= truth.butanediol + truth.lactate + 2 * truth.ethanol
    atp = -glucose - (glucose - to_cells) + 2 * pyruvate + truth.acetate + cycle
    return {
        "glucose": glucose,
        "oxygen": nadh / 2,
        "CO2": 2 * acetoin + acetyl + 2 * cycle + 0.1 * x,
        "2,3-butanediol": truth.butanediol,
        "acetoin": truth.acetoin,
        "acetate": truth.acetate,
        "ethanol": truth.ethanol,
        "lactate": truth.lactate,
        "mu": truth.mu,
        "upkeep": atp + PO * nadh - K_X * x,
    }


def make_table(noise: float = 1.0) -> str:
    """The text of rates.csv; ``noise`` scales all random errors (0: only faults are left)."""
    rng = np.random.default_rng(list(b"TW-4 in the spring"))
    lines = [
        "# Tindlewick Diols, vessel 3, steady states of TW-4 (all invented)",
        f"shared error biomass {100 * SHARED_ERROR:g} %",
        "run,species,direction,rate,sd,unit,temperature",
    ]
    for truth in RUNS:
        faults, sds = dict(truth.faults), _USUAL | dict(truth.sds)
        biomass = np.exp(noise * SHARED_ERROR * rng.standard_normal())
        for name, rate in true_rates(truth).items():
            if name == "upkeep":
                continue
            shown = rate * faults.get(name, 1.0) * (1 + noise * sds[name] * rng.standard_normal())
            if name != "mu":
                shown *= biomass
            direction = "" if name == "mu" else "in" if name in ("glucose", "oxygen") else "out"
            unit = "1/h" if name == "mu" else "mmol/g/h"
            lines.append(
                f"{truth.run},{_quoted(name)},{direction},{shown:.4g},{100 * sds[name]:g} %,{unit},"
                f"{truth.temperature}"
            )
    return "\n".join(lines) + "\n"


def _quoted(name: str) -> str:
    return f'"{name}"' if "," in name else name


if __name__ == "__main__":
    Path(__file__).with_name("rates.csv").write_text(make_table(), encoding="utf-8")
