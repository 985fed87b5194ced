"""Errors of raw data, and what becomes of them: one linear propagation for every mode.

Raw data are blocks of values. Each value has an error of its own; errors that several values
share (a calibration, a flow) are modes: the shift of every value per one sd. All errors are
independent of one another. An estimate is a function of the blocks over a leading axis of
trials, so that the same function gives the value, its derivatives by every error (central
differences, all in one call), and a Monte Carlo of the raw data.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record

__all__ = [
    "Block", "Mode", "Propagated", "Values", "draw_errors", "join_blocks", "own_error",
    "propagate", "shift_values",
]  # fmt: skip

Array = NDArray[np.float64]
Values = Mapping[str, Array]
"""Values by block: arrays of trials x values."""

Estimate = Callable[[Values], Array]
"""Gives trials x results."""

_STEP = 1e-3
"""Of one sd: small beside any curvature, large beside rounding."""


@record
class Mode:
    """One error that values of a block share: their shift per one sd, in their unit.

    Modes of one name, in whatever blocks they stand, are one and the same error.
    """

    name: str
    shift: Array


@record
class Block:
    """Values with the sd of each one's own error, and the errors that they share."""

    name: str
    value: Array
    own: Array
    modes: tuple[Mode, ...] = ()


@record
class Propagated:
    """Results with their covariance.

    ``value`` (results), ``covariance`` (results x results), ``jacobian`` (results x errors):
    the shift of each result per one sd of each error; ``sources`` names the errors, that of a
    block for its own ones.
    """

    value: Array
    covariance: Array
    jacobian: Array
    sources: tuple[str, ...]

    @property
    def sd(self) -> Array:
        """The standard deviation of each result."""
        return np.asarray(np.sqrt(np.diag(self.covariance)))

    def shares(self, index: int) -> tuple[tuple[str, float], ...]:
        """The share of each source in the variance of a result, the largest first."""
        parts: dict[str, float] = {}
        for source, shift in zip(self.sources, self.jacobian[index], strict=True):
            parts[source] = parts.get(source, 0.0) + float(shift) ** 2
        total = sum(parts.values())
        told = [(name, part / total) for name, part in parts.items() if part > 0]
        return tuple(sorted(told, key=lambda pair: -pair[1]))


def own_error(name: str) -> str:
    """How the own errors of a block are named among the sources."""
    return f"{name}, each value"


def join_blocks(blocks: Sequence[Block]) -> tuple[tuple[str, ...], Callable[[Array], Values]]:
    """The names of all errors, and the function from errors to values.

    The function takes trials x errors in units of their sds, and gives the shifted values.

    Raises
    ------
    MisuseError
        Where two blocks have one name, or the lengths of a block differ.
    """
    names: list[str] = []
    own: dict[str, tuple[NDArray[np.intp], slice]] = {}
    shared: dict[str, list[tuple[str, Array]]] = {}
    for block in blocks:
        if block.name in own:
            raise MisuseError(f"two blocks are named {block.name}")
        if any(a.shape != block.value.shape for a in (block.own, *(m.shift for m in block.modes))):
            raise MisuseError(f"the arrays of block {block.name} have not one length")
        places = np.flatnonzero(block.own)
        own[block.name] = (places, slice(len(names), len(names) + places.size))
        names.extend([own_error(block.name)] * places.size)
        for mode in block.modes:
            if mode.shift.any():
                shared.setdefault(mode.name, []).append((block.name, mode.shift))
    places_of = {name: len(names) + i for i, name in enumerate(shared)}
    names.extend(shared)

    def shifted(errors: Array) -> Values:
        values: dict[str, Array] = {}
        for block in blocks:
            places, columns = own[block.name]
            moved = np.repeat(block.value[None, :], len(errors), axis=0)
            moved[:, places] += errors[:, columns] * block.own[places]
            values[block.name] = moved
        for name, hits in shared.items():
            for block_name, shift in hits:
                values[block_name] += errors[:, places_of[name], None] * shift
        return values

    return tuple(names), shifted


def propagate(estimate: Estimate, blocks: Sequence[Block]) -> Propagated:
    """The results of an estimate with their covariance J J', J by central differences.

    Examples
    --------
    >>> data = Block("flow", np.array([10.0, 2.0]), np.array([0.3, 0.4]))
    >>> found = propagate(lambda v: v["flow"].sum(axis=1, keepdims=True), [data])
    >>> float(found.value[0]), round(float(found.sd[0]), 6)
    (12.0, 0.5)
    """
    names, shifted = join_blocks(blocks)
    count = len(names)
    steps = np.zeros((2 * count + 1, count))
    steps[1 : count + 1] = _STEP * np.eye(count)
    steps[count + 1 :] = -_STEP * np.eye(count)
    results = estimate(shifted(steps))
    jacobian = (results[1 : count + 1] - results[count + 1 :]).T / (2 * _STEP)
    return Propagated(results[0], jacobian @ jacobian.T, jacobian, names)


def draw_errors(blocks: Sequence[Block], trials: int, generator: np.random.Generator) -> Values:
    """Values of the raw data with all errors drawn anew, independent and normal."""
    names, shifted = join_blocks(blocks)
    return shifted(generator.standard_normal((trials, len(names))))


def shift_values(blocks: Sequence[Block]) -> Values:
    """The values as they are, as one trial."""
    return {block.name: block.value[None, :] for block in blocks}
