"""Make the files of three vessels as instruments and people write them, and ``truth.csv``.

Run as ``python make_raw.py``; it writes beside itself. The cells are those of ``cells.py``; what is
added here are errors with the sds below, and the ways in which files differ.
"""

from __future__ import annotations

import datetime
import io
from collections.abc import Iterable, Sequence
from pathlib import Path

import numpy as np
from cells import AIR, PHASES, Vessel, cultivate, hold_steady, true_rates

__all__ = ["make_files", "make_truth"]

SEED = 3
DRY_WEIGHT, CHROMATOGRAPHY, LEAST, OPTICAL = 0.03, 0.02, 0.004, 0.01
"""Relative sds: of one dry weight, of one concentration (least: of the largest), of one reading."""

OXYGEN_OFFSET, OXYGEN_READING = 3e-4, 5e-5
CARBON_SPAN, CARBON_READING = 0.01, 3e-5
"""Analysers, mol/mol: what all readings share, and what each has of its own (CO2: its span)."""

GAS_FLOW, FEED_STRENGTH, BALANCE = 0.02, 0.01, 5e-4
"""Relative sds of the flow controller and of the sugar weighed in; kg of a balance."""

GLUCOSE, ETHANOL, ACETATE = 180.156, 46.069, 60.052
DENSITY_PER_UNIT = 0.42
"""True g of cells per litre and unit of optical density."""

Cell = str | float | None
Sheet = list[list[Cell]]
_TAKEN_UP = ("glucose", "ammonia", "oxygen")


class Errors:
    """Normal errors, drawn one after another from one seed."""

    def __init__(self, seed: int) -> None:
        self._source = np.random.default_rng(seed)

    def of(self, values: np.ndarray, relative: float, least: float = 0.0) -> np.ndarray:
        """Values with a relative and a least error."""
        values = np.asarray(values, dtype=float)
        sd = np.hypot(relative * values, least)
        return values + sd * self._source.standard_normal(values.shape)

    def measured(self, values: np.ndarray) -> np.ndarray:
        """Concentrations as a chromatograph shows them."""
        return self.of(values, CHROMATOGRAPHY, LEAST * float(np.max(values)))

    def one(self, sd: float) -> float:
        """One error."""
        return float(sd * self._source.standard_normal())

    def gas(self, gas: dict[str, np.ndarray]) -> tuple[np.ndarray, np.ndarray]:
        """Oxygen and CO2 as the analysers show them."""
        offset, span = self.one(OXYGEN_OFFSET), 1 + self.one(CARBON_SPAN)
        oxygen = self.of(gas["oxygen"] + offset, 0.0, OXYGEN_READING)
        return oxygen, self.of(gas["CO2"] * span, 0.0, CARBON_READING)


def make_files() -> dict[str, bytes]:
    """Every raw file by its path from this folder."""
    errors = Errors(SEED)
    return {
        "chemostat.xlsx": _book(_chemostat(errors)),
        **{f"batch/{name}": data for name, data in _batch(errors).items()},
        **{f"fed-batch/{name}": data for name, data in _fed_batch(errors).items()},
    }


def make_truth() -> str:
    """The true rates of every phase as a table."""
    lines = ["vessel,phase,species,direction,rate,unit"]
    for (vessel, phase), cells in PHASES.items():
        for name, rate in true_rates(cells).items():
            direction = "" if name == "mu" else "in" if name in _TAKEN_UP else "out"
            unit = "1/h" if name == "mu" else "mmol/g/h"
            lines.append(f"{vessel},{phase},{name},{direction},{abs(rate):.6g},{unit}")
    return "\n".join(lines) + "\n"


# --- chemostat: one workbook, a sheet for each instrument -------------------------------------

_BROTH, _GAS_MOLES = 0.8, 2.2
_STEADY = {"slow": (58.0, 80.0), "fast": (106.0, 124.0)}


def _chemostat(errors: Errors) -> dict[str, Sheet]:
    flow = _GAS_MOLES * (1 + errors.one(GAS_FLOW))
    sugar = 20.0 / GLUCOSE * 1000 * (1 + errors.one(FEED_STRENGTH))
    states = {
        name: hold_steady(
            PHASES["vessel 1", name], broth=_BROTH, flow=flow, sugar=sugar, residual=residual,
            ammonia=1000.0,
        )
        for name, residual in (("slow", 0.4), ("fast", 3.0))
    }  # fmt: skip
    slow, fast = states["slow"], states["fast"]

    def value(name: str, t: np.ndarray) -> np.ndarray:
        """From one steady state to the other within some hours; before 50 h, what grew."""
        share = np.where(t > 80, 1 - np.exp(-(t - 80) / 2.5), 0.0)
        low = AIR.get(name.removesuffix(" gas"), 0.0)
        grown = np.clip(np.expm1(np.clip(t, 0, 50) / 12) / np.expm1(50 / 12), 0, 1)
        return np.where(t < 50, low + (slow[name] - low) * grown,
                        slow[name] + (fast[name] - slow[name]) * share)  # fmt: skip

    t = np.array([24.0, 48, 58, 62, 66, 70, 75, 80, 90, 106, 110, 114, 118, 121, 124])
    weight = errors.of(value("biomass", t), DRY_WEIGHT)
    glucose, ethanol, acetate = (
        errors.measured(value(name, t)) * mass / 1000
        for name, mass in (("glucose", GLUCOSE), ("ethanol", ETHANOL), ("acetate", ACETATE))
    )
    gas_t = np.arange(-3, 124.01, 1 / 6)
    oxygen, carbon = errors.gas({n: value(f"{n} gas", gas_t) for n in ("oxygen", "CO2")})
    pump_t = np.arange(0, 124.01, 2.0)
    moved = {
        name: np.where(pump_t < 20, 0, slow[name] * np.clip(pump_t - 20, 0, 60))
        + fast[name] * np.clip(pump_t - 80, 0, None)
        for name in ("feed", "base")
    }  # fmt: skip
    samples: Sheet = [["Sample", "Age [h]", "CDW [g/L]"]]
    samples += [[f"C{k + 1}", float(a), round(weight[k], 2)] for k, a in enumerate(t)]
    hplc: Sheet = [
        ["Column 7, 0.5 mL/min, refractive index"],
        [],
        ["Sample", "Age", "Glucose", "EtOH", "Acetic acid"],
        [None, "[h]", "[g/L]", "[g/L]", "[g/L]"],
    ]
    for k, a in enumerate(t):
        acid: Cell = "<0.05" if acetate[k] < 0.05 else round(acetate[k], 3)
        spirit: Cell = "<0.05" if ethanol[k] < 0.05 else round(ethanol[k], 3)
        hplc.append([f"C{k + 1}", a, round(glucose[k], 3), spirit, acid])
    hplc[-2][4] = "n.d."
    return {
        "run sheet": [
            ["setting", "value", "unit", "sd"],
            ["mode", "chemostat"],
            ["name", "vessel 1"],
            ["volume", _BROTH, "L", 0.004],
            ["temperature", 30, "°C"],
            ["pH", 5.0],
            ["gas flow", round(_GAS_MOLES * 22.414 / 60, 4), "NL/min", "2 %"],
            ["condenser temperature", 8, "°C"],
            ["glucose in feed", 20, "g/L", 0.2],
            ["feed density", 1.006, "kg/L", 0.002],
            ["base density", 0.993, "kg/L", 0.002],
        ],
        "phases": [
            ["phase", "start [h]", "end [h]"],
            *([name, start, end] for name, (start, end) in _STEADY.items()),
        ],
        "samples": samples,
        "HPLC": hplc,
        "off-gas": [
            ["Age [h]", "O2 off-gas [%]", "CO2 off-gas [%]"],
            *([round(a, 4), round(100 * o, 3), round(100 * c, 3)]
              for a, o, c in zip(gas_t, oxygen, carbon, strict=True)),
        ],
        "bottles": [
            ["Age [h]", "Feed bottle weight [kg]", "Base bottle weight [g]"],
            *([a, round(19.412 - f, 4), round(2210.4 - b, 1)] for a, f, b in zip(
                pump_t, errors.of(1.006 * moved["feed"], 0, BALANCE),
                errors.of(993 * moved["base"], 0, 0.5), strict=True)),
        ],
    }  # fmt: skip


# --- batch: a folder of text files ------------------------------------------------------------

_START = datetime.datetime(2026, 3, 2, 8, 30)


def _batch(errors: Errors) -> dict[str, bytes]:
    flow = 2.0 * 60 / 22.414
    t = np.array([0, 1, 2, 3, 4, 5, 6, 7, 7.5, 8, 8.5, 9, 9.5, 10, 10.5])
    vessel = cultivate(
        [(2.0, PHASES["vessel 2", "lag"]), (99.0, PHASES["vessel 2", "growth"])], t, broth=2.0,
        biomass=0.3, glucose=83.0, flow=flow * (1 + errors.one(GAS_FLOW)), ammonia=1000.0,
        sample=0.02,
    )  # fmt: skip
    optical = errors.of(vessel.biomass / DENSITY_PER_UNIT, OPTICAL)
    pairs = np.array([0.7, 1.4, 2.9, 4.4, 5.8, 7.3, 9.1])
    weighed = errors.of(DENSITY_PER_UNIT * pairs, DRY_WEIGHT)
    glucose, ethanol, acetate = (
        errors.measured(values) * mass / 1000
        for values, mass in (
            (vessel.glucose, GLUCOSE), (vessel.ethanol, ETHANOL), (vessel.acetate, ACETATE)
        )
    )
    gas_t, oxygen, carbon = _gas_rows(errors, vessel, 1 / 30)
    control_t = np.arange(-0.5, 10.51, 1 / 12)
    based = np.interp(control_t, vessel.time, vessel.base) * 1000
    based = 1187.4 + errors.of(based, 0, 0.2)
    sheet = [
        "setting;value;unit;sd", "mode;batch", "name;vessel 2",
        f"inoculation;{_START:%d.%m.%Y %H:%M:%S}", "volume;2,00;L;0,01", "temperature;30;°C",
        "pH;5,0", "gas flow;2,00;NL/min;2 %", "condenser temperature;8;°C", "",
        "OD600;Dry weight [g/L]",
        *(_comma(f"{o:.2f};{w:.3f}") for o, w in zip(pairs, weighed, strict=True)),
    ]  # fmt: skip
    phases = ["phase,start,end", "lag,0,2", "growth,2,10.5"]
    control = [
        "Clock;Process time;TEMP;PH;BASE",
        ";value;value;value;value",
        ";[h];[°C];[-];[mL]",
        *(f"{_clock(a):%d.%m.%Y %H:%M:%S};{_comma(f'{a:.4f}')};{_comma(f'{temp:.2f}')};"
          f"{_comma(f'{ph:.2f}')};{_thousands(b)}"
          for a, temp, ph, b in zip(
              control_t, errors.of(np.full(control_t.size, 30.0), 0, 0.05),
              errors.of(np.full(control_t.size, 5.0), 0, 0.01), based, strict=True)),
    ]  # fmt: skip
    lab = [
        "Autosampler, sequence 114", "Säule: 7 °C im Kühlfach, 60 °C im Ofen", "", "[Results]",
        "Sample;Sampled at;OD600;Glucose;Ethanol;Acetate;Sample volume",
        ";;;(g/L);(g/L);(g/L);(mL)",
        *(f"B{k + 1};{_clock(t[k]):%d.%m.%Y %H:%M};{_comma(f'{optical[k]:.3f}')};"
          f"{_comma(f'{glucose[k]:.2f}')};{_limited(ethanol[k], 0.05)};"
          f"{_limited(acetate[k], 0.02)};20"
          for k in range(t.size)),
    ]  # fmt: skip
    gas = [
        "timestamp,O2 out [% v/v],CO2 out [ppm]",
        *(f"{_clock(a):%Y-%m-%d %H:%M:%S},{100 * o:.3f},{1e6 * c:.0f}"
          for a, o, c in zip(gas_t, oxygen, carbon, strict=True)),
    ]  # fmt: skip
    return {
        "run-sheet.csv": _text(sheet, "utf-8-sig"),
        "phases.csv": _text(phases, "utf-8"),
        "controller.csv": _text(control, "cp1252"),
        "laboratory.csv": _text(lab, "latin-1"),
        "offgas.csv": _text(gas, "ascii"),
    }


# --- fed-batch: a workbook by kilogram of broth, and the gas in a file of its own --------------


def _fed_batch(errors: Errors) -> dict[str, bytes]:
    cells = PHASES["vessel 3", "feed"]
    strength = 400.0 / GLUCOSE * 1000
    need = -true_rates(cells)["glucose"] * 3.0 * 1.5 / strength
    t = np.arange(0, 16.3, 1.25)
    vessel = cultivate(
        [(99.0, cells)], t, broth=1.5, biomass=3.0, glucose=8.0,
        flow=4.4 * (1 + errors.one(GAS_FLOW)), ammonia=2000.0, sample=0.015, by_mass=True,
        feed=lambda time: 0.97 * need * np.exp(cells.mu * time),
        sugar=strength * (1 + errors.one(FEED_STRENGTH)),
    )  # fmt: skip
    weight = errors.of(vessel.biomass, DRY_WEIGHT)
    glucose, acetate = (
        errors.measured(values) * mass / 1000
        for values, mass in ((vessel.glucose, GLUCOSE), (vessel.acetate, ACETATE))
    )
    gas_t, oxygen, carbon = _gas_rows(errors, vessel, 1 / 60)
    level = errors.of(vessel.broth, 0, 0.002)
    fine = np.arange(0, 16.26, 0.25)
    fed, based = (
        errors.of(np.interp(fine, vessel.time, moved), 0, BALANCE)
        for moved in (vessel.fed, vessel.base)
    )
    book: dict[str, Sheet] = {
        "run sheet": [
            ["setting", "value", "unit", "sd"],
            ["mode", "fed-batch"],
            ["name", "vessel 3"],
            ["mass", 1.5, "kg", 0.002],
            ["temperature", 30, "°C"],
            ["pH", 5.0],
            ["gas flow", round(4.4 * 22.414 / 60, 4), "NL/min", "2 %"],
            ["condenser temperature", 8, "°C"],
            ["glucose in feed", 400, "g/kg", 4],
        ],
        "phases": [["phase", "start", "end"], ["feed", 0, float(t[-1])]],
        "samples": [
            ["Time [h]", "DCW [g/kg]", "Glucose [g/kg]", "Acetate [g/kg]", "Sample [g]"],
            *([a, round(w, 3), round(g, 3), "<0.02" if c < 0.02 else round(c, 3), 15.0]
              for a, w, g, c in zip(t, weight, glucose, acetate, strict=True)),
        ],
        "balances": [
            ["Time [h]", "Feed bottle weight [kg]", "Base bottle weight [kg]"],
            *([a, round(1.2045 - f, 4), round(0.9871 - b, 4)]
              for a, f, b in zip(fine, fed, based, strict=True)),
        ],
        "vessel": [
            ["Time [h]", "Reactor weight [kg]"],
            *([a, round(b, 3)] for a, b in zip(t, level, strict=True)),
        ],
    }  # fmt: skip
    gas = [
        "Time\tO2 out\tCO2 out", "h\t%\t%",
        *(f"{a:.4f}\t{100 * o:.3f}\t{100 * c:.3f}"
          for a, o, c in zip(gas_t, oxygen, carbon, strict=True)),
    ]  # fmt: skip
    return {"book.xlsx": _book(book), "offgas.tsv": _text(gas, "utf-16")}


# --- how things are written --------------------------------------------------------------------


def _gas_rows(
    errors: Errors, vessel: Vessel, every: float
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """The gas at the analysers from an hour before inoculation."""
    time = np.arange(-1.0, vessel.gas_time[-1], every)
    gas = {
        name: np.where(time < 0, AIR[name], np.interp(time, vessel.gas_time, values))
        for name, values in vessel.gas.items()
    }  # fmt: skip
    return time, *errors.gas(gas)


def _clock(hours: float) -> datetime.datetime:
    return _START + datetime.timedelta(seconds=round(3600 * hours))


def _comma(text: str) -> str:
    return text.replace(".", ",")


def _thousands(number: float) -> str:
    return f"{number:,.1f}".translate(str.maketrans(",.", ".,"))


def _limited(number: float, limit: float) -> str:
    return _comma(f"<{limit}" if number < limit else f"{number:.3f}")


def _text(lines: Iterable[str], encoding: str) -> bytes:
    return ("\r\n".join(lines) + "\r\n").encode(encoding)


def _book(sheets: dict[str, Sheet]) -> bytes:
    import xlsxwriter

    stream = io.BytesIO()
    with xlsxwriter.Workbook(stream, {"in_memory": True}) as book:
        book.set_properties({"created": datetime.datetime(2026, 3, 9)})
        for name, rows in sheets.items():
            sheet = book.add_worksheet(name)
            for i, row in enumerate(rows):
                _write_row(sheet, i, row)
    return stream.getvalue()


def _write_row(sheet: object, place: int, row: Sequence[Cell]) -> None:
    for j, cell in enumerate(row):
        if cell is not None:
            sheet.write(place, j, float(cell) if isinstance(cell, float) else cell)  # type: ignore[attr-defined]


if __name__ == "__main__":
    folder = Path(__file__).parent
    for path, data in make_files().items():
        (folder / path).parent.mkdir(exist_ok=True)
        (folder / path).write_bytes(data)
    (folder / "truth.csv").write_text(make_truth(), encoding="utf-8")
