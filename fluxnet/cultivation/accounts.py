"""The account of the broth, and that of carbon, over time."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.biomass import carbon_mole_mass
from fluxnet.cultivation.broth_state import RawData, state_of
from fluxnet.cultivation.errors import Values, propagate, shift_values
from fluxnet.cultivation.runs import ash_of, biomass_formula
from fluxnet.cultivation.samples import BIOMASS, formula_of
from fluxnet.cultivation.streams import broth_density, counts_mass
from fluxnet.cultivation.volumes import Account, AccountLine, close_account
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import Cultivation, SeriesKind

__all__ = ["broth_account", "carbon_account"]

Array = NDArray[np.float64]


def broth_account(raw: Cultivation, data: RawData) -> Account:
    """What streams leave in the vessel, beside what was found in it."""
    by_mass = counts_mass(raw)
    found = raw.find(SeriesKind.BROTH)
    unit = "kg" if by_mass else "L"
    account = close_account("broth", unit, data.nodes, data.start, data.flows, found)
    if found is None or found.unit == unit:
        return account
    density = broth_density(raw, [])
    factor = density if by_mass else 1.0 / density
    return Account(
        account.title, unit, account.time, account.lines, account.expected, account.expected_sd,
        account.found_time, account.found * factor,
    )  # fmt: skip


def carbon_account(raw: Cultivation, data: RawData, network: Network | None) -> Account | None:
    """C-mmol used up until each sample, and found again in biomass, products and CO2.

    ``expected`` is what was used, ``found`` what was made; ``expected_sd`` is the sd of their
    difference, errors that both share taken once. A species counts as used where less of it is
    there at the end than came in.
    """
    state = state_of(shift_values(data.blocks), data)
    carbons: dict[str, float] = {}
    for name in (*state.made, *(n for n in state.gas if n not in state.made)):
        formula = formula_of(name, network)
        if formula is not None and formula.count("C"):
            carbons[name] = float(formula.count("C"))
    per_gram = 1000.0 / carbon_mole_mass(biomass_formula(network), *ash_of(raw, network))
    places = {s.name: s.time for s in data.species}
    weights = {
        name: np.stack(
            [np.interp(data.nodes, time, row) for row in np.eye(time.size)], axis=1
        )
        for name, time in places.items()
    }
    grown = np.stack(
        [np.interp(data.nodes, data.biomass.time, row) for row in np.eye(data.biomass.time.size)],
        axis=1,
    )

    def lines(values: Values) -> dict[str, Array]:
        at = state_of(values, data)
        found: dict[str, Array] = {}
        for name, carbon in carbons.items():
            if name in at.gas:
                found[name] = carbon * at.gas[name]
                continue
            made = at.made[name] @ weights[name].T
            found[name] = carbon * (made - made[:, :1])
        free = values[BIOMASS] @ grown.T * at.level / at.kept
        steps = np.diff(free, axis=1) * (at.after + at.kept[:, 1:]) / 2
        total = np.zeros_like(free)
        total[:, 1:] = np.cumsum(steps, axis=1)
        found[BIOMASS] = per_gram * total
        return found

    nominal = {name: line[0] for name, line in lines(shift_values(data.blocks)).items()}
    used = [name for name, line in nominal.items() if line[-1] < 0]
    if not used:
        return None
    gap = propagate(lambda v: np.asarray(sum(lines(v).values())), data.blocks)
    consumed = np.asarray(-sum(nominal[name] for name in used))
    made = np.asarray(sum(
        (line for name, line in nominal.items() if name not in used), np.zeros(data.nodes.size)
    ))  # fmt: skip
    return Account(
        "carbon", "C-mmol", data.nodes,
        tuple(AccountLine(name, line) for name, line in nominal.items()),
        consumed, gap.sd, data.nodes, made,
    )  # fmt: skip
