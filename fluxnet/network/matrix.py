"""The stoichiometric matrix of a network in plain numbers, and with its labels."""

from __future__ import annotations

from typing import TYPE_CHECKING

from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Network

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from numpy.typing import NDArray

__all__ = ["frame_of", "matrix_of"]


def matrix_of(network: Network) -> NDArray[np.float64]:
    r"""Species x reactions in the file's order, moles made per unit of flux.

    The parameters stand at their values; the array is read-only.

    Raises
    ------
    MisuseError
        Where a ``?`` is not solved, or a reaction names a species that is not there.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n"
    ... ).network
    >>> matrix_of(network).tolist()
    [[-1.0], [2.0], [2.0]]
    """
    import numpy as np  # whoever asks for no matrix should not wait for it

    values = {p.name: float(p.value) for p in network.parameters}
    rows = {s.name: i for i, s in enumerate(network.species)}
    matrix = np.zeros((len(rows), len(network.reactions)))
    for j, reaction in enumerate(network.reactions):
        for sign, term in reaction.terms:
            if term.coefficient is None:
                raise MisuseError(f"reaction {reaction.name} holds a ? that is not solved")
            if term.species not in rows:
                raise MisuseError(f"reaction {reaction.name} names {term.species}: no such species")
            matrix[rows[term.species], j] += sign * term.coefficient.at(values)
    matrix.setflags(write=False)
    return matrix


def frame_of(network: Network) -> pd.DataFrame:
    r"""The matrix as a frame: a row a species, a column a reaction.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n"
    ... ).network
    >>> frame_of(network)
             ferment
    glucose     -1.0
    ethanol      2.0
    CO2          2.0
    """
    import pandas as pd

    return pd.DataFrame(
        matrix_of(network),
        index=[s.name for s in network.species],
        columns=[r.name for r in network.reactions],
    )
