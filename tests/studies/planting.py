"""Data sets drawn around true rates of our models, with one thing wrong in each.

The truth of a model is the mean of what it does at best for each of its products, so that all
of them are made. Errors are drawn with known sds, half a per
cent to five per cent of the rates; one rate is then moved by 4 to 8 of its sd, or
the row of one by-product is left out.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from hashlib import sha256
from pathlib import Path

import numpy as np

import fluxnet as fx
from fluxnet.network.model import Network, Role

MODELS = Path(__file__).resolve().parents[2] / "models"
CASES = (
    ("yeast", "base"), ("mixed-acid", "base"), ("mixed-acid", "anaerobic"), ("solvent", "base"),
    ("heterolactic", "base"), ("amino-acid", "base"),
)  # fmt: skip
SDS = (0.005, 0.05)
HEAD = "run,species,direction,rate,sd,unit\n"


@dataclass(frozen=True)
class Truth:
    """What a model really takes up and releases [mmol/g/h]: (species, direction) to rate."""

    model: fx.Model
    rates: dict[tuple[str, str], float]

    @property
    def network(self) -> Network:
        return self.model.network


@dataclass(frozen=True)
class Planted:
    """One data set: its rows, and the name and direction of what is wrong."""

    run: str
    rows: str
    wrong: tuple[str, str]
    size: float


def seed_of(name: str) -> int:
    return int.from_bytes(sha256(name.encode()).digest()[:8], "big")


@cache
def truth_of(name: str, variant: str) -> Truth:
    """The true rates of a model; those below 1 % of the substrate's carbon are left out."""
    text = (MODELS / f"{name}.flux").read_text(encoding="utf-8")
    model = fx.read_model_text(text, folder=MODELS)
    substrates = [
        s for s in model.network.boundary
        if s.role is Role.SUBSTRATE and s.formula is not None and s.formula.count("C")
    ]  # fmt: skip
    limits = "".join(f"\nlimit {s.name} <= 10" for s in substrates)
    model = fx.read_model_text(f"{text}{limits}\n", folder=MODELS).variant(variant)
    aims = [s.name for s in model.network.boundary if s.role is Role.PRODUCT] + ["mu"]
    total: dict[tuple[str, str], float] = {}
    for aim in aims:
        run = fx.solve(model, maximise=aim).runs[0]
        for rate in run.rates:
            if rate.quantity.direction is not None:
                key = (rate.quantity.name, rate.quantity.direction.value)
                sign = 1 if key[1] == "out" else -1
                out = (key[0], "out")
                total[out] = total.get(out, 0.0) + sign * rate.reconciled / len(aims)
    rates: dict[tuple[str, str], float] = {}
    carbon = sum(
        float(s.formula.count("C")) * abs(total.get((s.name, "out"), 0.0)) for s in substrates
    )
    for (species, _), value in total.items():
        found = model.network.find_species(species)
        share = float(found.formula.count("C") or 1) * abs(value) / carbon
        if share > 0.01:
            rates[species, "out" if value > 0 else "in"] = abs(value)
    return Truth(model, rates)


def draw(truth: Truth, name: str, count: int, *, planted: str) -> Iterator[Planted]:
    """Data sets with an error of a rate (``rate``), a row left out (``row``) or nothing wrong."""
    random = np.random.default_rng(seed_of(name))
    keys = list(truth.rates)
    true = np.array(list(truth.rates.values()))
    products = [
        k for k, key in enumerate(keys)
        if truth.network.find_species(key[0]).role is Role.PRODUCT
    ]  # fmt: skip
    for number in range(count):
        sds = true * np.exp(random.uniform(*np.log(SDS), len(true)))
        values = true + sds * random.standard_normal(len(true))
        rows = list(range(len(keys)))
        wrong, size = ("", ""), 0.0
        if planted == "rate":
            k = int(random.integers(len(keys)))
            size = float(random.uniform(4, 8) * random.choice([-1, 1]) * sds[k])
            values[k] += size
            wrong = keys[k]
        elif planted == "row":
            k = int(random.choice(products))
            rows.remove(k)
            wrong, size = keys[k], float(true[k])
        text = "".join(
            f'{name}-{number},"{keys[k][0]}",{keys[k][1]},{float(values[k])!r},{float(sds[k])!r},mmol/g/h\n'
            for k in rows
        )
        yield Planted(f"{name}-{number}", text, wrong, size)
