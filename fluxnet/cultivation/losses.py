"""What the gas carries away of volatile products: ethanol and others, by Henry's law.

The gas that leaves stands with the broth, and takes y = c / (H P) moles of the volatile a mole.
Bubbles may leave before that, a condenser returns some, salts and cells move H: so the loss has
an error of its own, and rates are shown with and without it.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.gas import ATMOSPHERE, ZERO_C, find_solubility

__all__ = ["LOSS_SD", "stripped", "stripped_per_mole"]

Array = NDArray[np.float64]

LOSS_SD = 0.3
"""Relative error that all losses of one volatile share (assumed)."""


def stripped_per_mole(name: str, celsius: float, bar: float = ATMOSPHERE) -> float | None:
    """Moles of a volatile that leave with a mole of gas, per mmol/L in the broth.

    The gas stands with the broth: y = c / (H P), an upper limit where a condenser returns some.

    Examples
    --------
    >>> round(100 * stripped_per_mole("ethanol", 30.0) * 400, 2)
    0.3
    """
    henry = find_solubility(name)
    if henry is None or name in ("CO2", "oxygen"):
        return None
    return 1.0 / (henry.at(celsius + ZERO_C) * bar * 1e5)


def stripped(concentration: Array, gas: Array, per_mole: float) -> Array:
    """Amount carried away until each node [mmol]: trials x nodes.

    Parameters
    ----------
    concentration
        In the broth [mmol/L], trials x nodes; a straight line between them.
    gas
        Moles of gas that left between nodes: trials x intervals.
    per_mole
        Of :func:`stripped_per_mole`.

    Examples
    --------
    >>> stripped(np.array([[0.0, 10.0]]), np.array([[100.0]]), 1e-5).round(6).tolist()
    [[0.0, 5.0]]
    """
    mean = (concentration[:, 1:] + concentration[:, :-1]) / 2
    lost = np.zeros_like(concentration)
    lost[:, 1:] = np.cumsum(1000.0 * per_mole * mean * gas, axis=1)
    return lost
