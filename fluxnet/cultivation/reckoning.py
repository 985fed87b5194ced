"""From raw data to rates: :func:`rates_of` for every mode."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.accounts import broth_account, carbon_account
from fluxnet.cultivation.assembling import assemble, since_start
from fluxnet.cultivation.batch import fit_phase, propagate_phase, widened
from fluxnet.cultivation.broth_state import RawData, state_of
from fluxnet.cultivation.chemostat import fit_steady, judge_steadiness, propagate_steady
from fluxnet.cultivation.errors import shift_values
from fluxnet.cultivation.fed_batch import gas_courses, rate_courses
from fluxnet.cultivation.gas import CAUTION
from fluxnet.cultivation.phase_rates import judge, steady_rates, transient_rates
from fluxnet.cultivation.phases import propose_phases
from fluxnet.cultivation.result import (
    Assumption,
    Course,
    CultivationRates,
    PhaseRates,
)
from fluxnet.cultivation.runs import table_of
from fluxnet.cultivation.streams import counts_mass
from fluxnet.cultivation.volumes import Account
from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import Cultivation, Mode, Phase

__all__ = ["proposed_phases", "rates_of"]

Array = NDArray[np.float64]


def rates_of(
    cultivation: Cultivation,
    network: Network | None = None,
    phases: Sequence[Phase] | None = None,
) -> CultivationRates:
    """Specific rates of every phase with their covariance, and what they rest on.

    Parameters
    ----------
    network
        Names and formulas of species that the catalogue does not know; directions.
    phases
        Which stretches get rates; else those of the cultivation, else proposed ones.

    Returns
    -------
    CultivationRates
        Without phases where ``diagnostics`` hold an error.
    """
    told: list[Assumption] = []
    faults: list[Diagnostic] = []
    raw = since_start(cultivation, told)
    data = assemble(raw, network, told, faults)
    empty = CultivationRates(
        raw.name, raw.mode, table_of((), (), raw, network), (), (), (), tuple(told), tuple(faults)
    )
    if data is None or has_errors(faults):
        return empty
    chosen = tuple(phases or raw.phases) or proposed_phases(raw, data)
    if not chosen:
        faults.append(Diagnostic(
            Name.PHASE_WITHOUT_SAMPLES, "there is one sample of biomass, and a rate needs two"
        ))  # fmt: skip
    found: list[PhaseRates] = []
    for phase in chosen:
        rates = (
            _steady(raw, network, phase, len(chosen) > 1, faults)
            if raw.mode is Mode.CHEMOSTAT
            else _transient(raw, data, network, phase, len(chosen) > 1)
        )
        if rates is None:
            faults.append(Diagnostic(
                Name.PHASE_WITHOUT_SAMPLES,
                f"phase {phase.name} ({phase.start:g} to {phase.end:g} h) holds fewer samples of "
                "biomass than a rate needs",
            ))  # fmt: skip
            continue
        found.append(rates)
        judge(rates, faults)
    accounts, courses = _over_time(raw, data, network, faults)
    kept = tuple(found)
    return CultivationRates(
        raw.name, raw.mode, table_of(tuple(p.run for p in kept), _names(kept), raw, network), kept,
        accounts, courses, tuple(dict.fromkeys(told)), tuple(dict.fromkeys(faults)),
        CAUTION if data.line is not None else "",
    )  # fmt: skip


def _names(found: tuple[PhaseRates, ...]) -> tuple[str, ...]:
    return tuple(dict.fromkeys(r.quantity.name for p in found for r in p.lines))


def proposed_phases(raw: Cultivation, data: RawData) -> tuple[Phase, ...]:
    """The phases that the data themselves propose."""
    x = data.biomass
    if raw.mode is Mode.CHEMOSTAT:
        return propose_phases(raw, x.time, x.block.value, x.block.own)
    state = state_of(shift_values(data.blocks), data)
    at = np.searchsorted(data.nodes, x.time)
    logs = np.log(x.block.value * state.level[0, at] / state.kept[0, at])
    return propose_phases(raw, x.time, logs, np.maximum(x.block.own / x.block.value, 1e-6))


def _transient(
    raw: Cultivation, data: RawData, network: Network | None, phase: Phase, many: bool
) -> PhaseRates | None:
    fit = fit_phase(data, phase)
    if fit is None:
        return None
    return transient_rates(raw, widened(data, fit), network, fit, many, propagate_phase)


def _steady(
    raw: Cultivation, network: Network | None, phase: Phase, many: bool, faults: list[Diagnostic]
) -> PhaseRates | None:
    """One steady state, from an account that runs from the start to the end of its phase."""
    if phase.end <= phase.start:
        return None
    own: list[Diagnostic] = []
    data = assemble(raw, network, [], own, np.array([phase.start, phase.end]))
    faults.extend(own)
    if data is None:
        return None
    fit = fit_steady(data, phase)
    if fit is None:
        return None
    gas = [] if data.line is None else [
        (f"{a.name} in the gas", a.time, a.value - a.inlet, a.sd) for a in data.line.analysers
    ]  # fmt: skip
    trends = judge_steadiness(data, phase, gas)
    return steady_rates(raw, data, network, fit, many, propagate_steady(data, fit), trends)


def _over_time(
    raw: Cultivation, data: RawData, network: Network | None, faults: list[Diagnostic]
) -> tuple[tuple[Account, ...], tuple[Course, ...]]:
    """Accounts and courses over the whole time."""
    courses: list[Course] = []
    accounts: list[Account] = []
    level = np.full(data.nodes.size, float(data.start.value[0]))
    if raw.mode is not Mode.CHEMOSTAT:
        account = broth_account(raw, data)
        accounts.append(account)
        level = account.expected
        if account.closure is not None and abs(account.closure - 1) > max(
            0.02, 3 * float(account.expected_sd[-1] / account.expected[-1])
        ):
            faults.append(Diagnostic(
                Name.BROTH_NOT_CLOSED,
                f"{account.found[-1]:.4g} {account.unit} of broth were found at "
                f"{account.found_time[-1]:g} h, and the streams leave {account.expected[-1]:.4g}",
            ))  # fmt: skip
        whole = Phase("whole", float(data.nodes[0]), float(data.nodes[-1]))
        fit = fit_phase(data, whole)
        if fit is not None:
            courses.extend(rate_courses(data, fit))
        carbon = carbon_account(raw, data, network)
        accounts.extend([] if carbon is None else [carbon])
    if data.line is not None:
        volume = np.interp(data.line.time, data.nodes, level)
        courses.extend(gas_courses(data.line, volume, "kg" if counts_mass(raw) else "L"))
    return tuple(accounts), tuple(courses)


