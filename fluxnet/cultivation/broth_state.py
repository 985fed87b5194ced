"""Amounts made and used until each sample, over trials of the raw data.

For every species: what is in the broth, and what samples and effluent took out of it, less what
streams brought in, and with what the gas carried away. Everything that can be off is a block, so
that one function serves the value, its derivatives and a Monte Carlo.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.errors import Block, Mode, Values
from fluxnet.cultivation.gas_amounts import gas_rates, integration
from fluxnet.cultivation.gas_line import GasLine
from fluxnet.cultivation.losses import LOSS_SD, stripped
from fluxnet.cultivation.samples import Sampled
from fluxnet.cultivation.volumes import Flow, broth, kept_fraction
from fluxnet.ground.record import record
from fluxnet.rates.cultivation import SeriesKind

__all__ = [
    "HELD_SD", "START", "Content", "Held", "RawData", "State", "gas_at_nodes", "state_of",
]  # fmt: skip

Array = NDArray[np.float64]

START = "broth at the start"
HELD_SD = 0.3
"""Relative sd of what the broth holds of CO2 beside what stands with the gas that leaves (the
two are 20 to 40 % apart in practice)."""


@record
class Content:
    """What a stream holds of a species [mmol per L or kg of the account], relative sd ``sd``."""

    species: str
    stream: str
    value: float
    sd: float

    @property
    def block(self) -> Block:
        """It as raw data: one value."""
        return Block(self.name, np.array([self.value]), np.array([abs(self.value) * self.sd]))

    @property
    def name(self) -> str:
        """How its error is named."""
        return f"{self.species} in {self.stream}"


@record
class Held:
    """CO2 in the broth at the nodes: mmol per L or kg, per mole fraction in the gas that leaves."""

    per_fraction: Array


@record
class RawData:
    """Everything that the amounts are reckoned from; ``nodes`` are all sample times."""

    nodes: Array
    start: Block
    flows: tuple[Flow, ...]
    contents: tuple[Content, ...]
    biomass: Sampled
    species: tuple[Sampled, ...]
    line: GasLine | None
    held: Held | None
    lost: Mapping[str, float]
    """Species to moles with a mole of gas per mmol/L."""

    @property
    def blocks(self) -> tuple[Block, ...]:
        """All raw data with their errors."""
        lost = [
            Block(f"loss of {name}", np.ones(1), np.zeros(1),
                  (Mode(f"loss of {name} with the gas", np.array([LOSS_SD])),))
            for name in self.lost
        ]  # fmt: skip
        held = [] if self.held is None else [
            Block("held CO2", np.ones(1), np.zeros(1),
                  (Mode("CO2 held in the broth", np.array([HELD_SD])),))
        ]  # fmt: skip
        gas = () if self.line is None else self.line.blocks(self.nodes)
        return (
            self.start, *(f.block for f in self.flows), *(c.block for c in self.contents),
            self.biomass.block, *(s.block for s in self.species), *gas, *lost, *held,
        )  # fmt: skip

    @property
    def gases(self) -> tuple[str, ...]:
        """The gases that have a rate of their own, measured ones that do not stay inert."""
        return () if self.line is None else tuple(a.name for a in self.line.analysers)


@record
class State:
    """Trials x nodes (x samples for ``made``).

    ``level`` is the broth before each sample, ``kept`` and ``after`` what removal left of what
    was there at the first node. ``made`` by species at its own sample times, up to a constant
    [mmol]; ``gas`` cumulated release [mmol].
    """

    level: Array
    kept: Array
    after: Array
    made: Mapping[str, Array]
    gas: Mapping[str, Array]


def state_of(values: Values, data: RawData) -> State:
    """The amounts of all trials."""
    moved = [(f.kind, values[f.name], f.share) for f in data.flows]
    level = broth(values[START][:, 0], [(kind, total) for kind, total, _ in moved],
                  data.nodes.size)
    kept, after = kept_fraction(level, moved)
    gas, leaving, held = gas_at_nodes(values, data)
    made: dict[str, Array] = {}
    for one in data.species:
        made[one.name] = _made(values, data, one, level, moved, leaving)
    if "CO2" in gas:
        gas["CO2"] = _with_held(values, data, gas["CO2"], held, level, moved)
    return State(level, kept, after, made, gas)


def _made(
    values: Values, data: RawData, one: Sampled, level: Array,
    moved: list[tuple[SeriesKind, Array, Array]], leaving: Array | None,
) -> Array:
    """One species at its sample times."""
    at = np.searchsorted(data.nodes, one.time)
    content = values[one.name]
    everywhere = content @ _between(one.time, data.nodes).T
    other = _removed(everywhere, moved) - _fed(values, data, one.name)
    if leaving is not None and one.name in data.lost:
        factor = values[f"loss of {one.name}"]
        other = other + factor * stripped(everywhere, leaving, data.lost[one.name])
    return np.asarray(content * level[:, at] + np.broadcast_to(other, level.shape)[:, at])


def _fed(values: Values, data: RawData, name: str) -> Array | float:
    """What streams brought of a species until each node [mmol]."""
    total: Array | float = 0.0
    for content in data.contents:
        if content.species == name:
            total = total + values[content.name] * values[content.stream]
    return total


def _removed(
    everywhere: Array, moved: list[tuple[SeriesKind, Array, Array]]
) -> Array:
    """What samples and effluent took of a species until each node [mmol]."""
    lost = np.zeros_like(everywhere)
    for kind, total, share in moved:
        if kind in (SeriesKind.SAMPLE, SeriesKind.EFFLUENT):
            mean = share * everywhere[:, :-1] + (1 - share) * everywhere[:, 1:]
            lost[:, 1:] += np.cumsum(mean * np.diff(total, axis=1), axis=1)
    return lost


def _between(time: Array, nodes: Array) -> Array:
    """Nodes x samples: straight lines between samples, level beyond them."""
    return np.stack([np.interp(nodes, time, row) for row in np.eye(time.size)], axis=1)


def gas_at_nodes(
    values: Values, data: RawData
) -> tuple[dict[str, Array], Array | None, Array | None]:
    """Release until the nodes [mmol], gas that left between them [mol], CO2 held at them [mmol/L].

    Held carbon follows the gas slowly: that of the fraction as averaged, without its noise.
    """
    if data.line is None:
        return {}, None, None
    rates = gas_rates(values, data.line, data.nodes)
    matrix = integration(data.line.time, data.nodes).T
    gas = {name: 1000.0 * (rates.released[name] @ matrix) for name in data.gases}
    out = np.broadcast_to(rates.flow_out, (len(values[START]), data.line.time.size))
    leaving = np.diff(out @ matrix, axis=1)
    held = None
    if "CO2" in gas and data.held is not None:
        fraction = np.interp(data.nodes, data.line.time, data.line.fractions["CO2"])
        held = np.asarray(values["held CO2"] * (fraction * data.held.per_fraction))
    return gas, leaving, held


def _with_held(
    values: Values, data: RawData, given_off: Array, held: Array | None, level: Array,
    moved: list[tuple[SeriesKind, Array, Array]],
) -> Array:
    """CO2 made: given off, piled up in the broth, taken with it, less what base brought."""
    total = given_off - _fed(values, data, "CO2")
    if held is None:
        return np.asarray(total)
    piled = held * level - (held * level)[:, :1]
    return np.asarray(total + piled + _removed(held, moved))
