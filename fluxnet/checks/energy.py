"""The most ATP per mole of each substrate, with the conversion that makes it.

A wrong ATP coefficient in one line is in no loop; but it shows here.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.checks.cone import Cone, Form, FormKind, exact_rows, flux_cone
from fluxnet.checks.interior import ConeRows, cone_rows, exact_weights, without_noise
from fluxnet.checks.loops import exact_vertex
from fluxnet.checks.words import equation
from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.exact.sparse import null_space, product
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.free_energy import find_free_energy
from fluxnet.network.model import CargoKind, Network, Role, Species
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem
from fluxnet.solving.words import number_words

__all__ = ["ATP_PRICE", "MostEnergy", "energy_carrier", "find_most_energy", "tell_too_much_energy"]

ATP_PRICE = 45.0
"""What making a mole of ATP takes in a living cell [kJ/mol]: common practice, from memory."""

# So small beside one mole of ATP that it only chooses among the optima: the least total flux.
_THRIFT = 1e-6


@record
class MostEnergy:
    """The most of an energy carrier that one mole of a substrate can make.

    ``amount`` [mol/mol] is exact, None where there is no end to it (it comes from nothing, or
    from something else that can be taken up); ``conversion`` gives the boundary species
    released (negative: taken up) per mole of substrate at the least total flux that makes it;
    empty where nothing is made. ``free_energy`` is what the conversion gives [kJ/mol], None
    where the catalogue lacks a Gibbs energy. ``verified``: proven by exact prices.
    """

    substrate: str
    carrier: str
    amount: Fraction | None
    conversion: tuple[tuple[str, Fraction], ...]
    free_energy: float | None
    verified: bool

    @property
    def equation(self) -> str:
        """The conversion as a line."""
        used = [(name, -n) for name, n in self.conversion if n < 0]
        made = [(name, n) for name, n in self.conversion if n > 0]
        return equation(used, made) if self.conversion else ""


def energy_carrier(network: Network) -> Species | None:
    """The carrier named ATP where it carries energy, else the first that does.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> energy_carrier(network).name
    'ATP'
    """
    carriers = [
        s for s in network.carriers if s.cargo is not None and s.cargo.kind is CargoKind.ENERGY
    ]
    return next((s for s in carriers if s.name == "ATP"), carriers[0] if carriers else None)


def find_most_energy(network: Network, stoich: Stoichiometry) -> tuple[MostEnergy, ...]:
    """For each substrate with electrons to give: alone taken up, the most ATP it can make.

    What holds no more electrons than CO2, water and ammonia (oxygen, nitrate, CO2) may be
    taken up beside it. Limits count by their signs only.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(MODEL).network
    >>> most = find_most_energy(network, stoichiometry(network))
    >>> [(m.substrate, m.carrier, float(m.amount)) for m in most]
    [('glucose', 'ATP', 20.8)]
    """
    carrier = energy_carrier(network)
    if carrier is None:
        return ()
    donors = [s for s in network.boundary if _gives_electrons(s)]
    beside = {
        s.name for s in network.boundary if s.role in (Role.SUBSTRATE, Role.EXCHANGE)
    } - {s.name for s in donors}
    return tuple(
        _most(network, stoich, carrier, substrate, beside)
        for substrate in donors
        if _is_substrate(substrate)
    )


def tell_too_much_energy(
    network: Network, most: tuple[MostEnergy, ...]
) -> tuple[Diagnostic, ...]:
    """A warning where the ATP would cost more than the conversion gives."""
    told: list[Diagnostic] = []
    for one in most:
        if one.amount is None or one.free_energy is None:
            continue
        cost = float(one.amount) * ATP_PRICE
        species = network.find_species(one.substrate)
        if species is None or cost <= one.free_energy:
            continue
        told.append(
            Diagnostic(
                Name.TOO_MUCH_ENERGY,
                f"{number_words(one.amount)} {one.carrier} per {one.substrate} are more than "
                f"its conversion can pay for",
                species.span,
                because=f"{one.equation} gives {one.free_energy:.0f} kJ/mol, enough for "
                f"{max(0.0, one.free_energy) / ATP_PRICE:.1f} at {ATP_PRICE:.0f} kJ each "
                f"(common practice)",
                mend=f"look for a coefficient of {one.carrier} that is too large",
            )
        )
    return tuple(told)


def _gives_electrons(species: Species) -> bool:
    if species.role not in (Role.SUBSTRATE, Role.EXCHANGE) or species.formula is None:
        return False
    electrons = degree_of_reduction(species.formula)
    return electrons is None or electrons > 0


def _is_substrate(species: Species) -> bool:
    carbon = species.formula is not None and species.formula.count("C") > 0
    return carbon or species.role is Role.SUBSTRATE


def _most(
    network: Network,
    stoich: Stoichiometry,
    carrier: Species,
    substrate: Species,
    beside: set[str],
) -> MostEnergy:
    cone = flux_cone(network, stoich, uptake={substrate.name, *beside})
    rows = dict(zip(stoich.species, exact_rows(network, stoich), strict=True))
    aim = next((f for f in cone.equal if f.name == carrier.name), None)
    taken = Form(
        FormKind.ROLE, substrate.name, {j: -v for j, v in rows[substrate.name].items()}
    )
    nothing = MostEnergy(substrate.name, carrier.name, Fraction(0), (), None, True)
    if aim is None or not taken.row:
        return nothing
    cone = replace(
        cone,
        equal=tuple(f for f in cone.equal if f is not aim),
        sides=(*(f for f in cone.sides if f.row != taken.row), aim, taken),
    )
    rows_of_cone = cone_rows(cone)
    optimum = _optimum(cone, rows_of_cone)
    if optimum is None:
        return replace(nothing, amount=None)
    exact = exact_vertex(cone, taken, rows_of_cone, optimum.scaled)
    bound = _bound(cone, optimum)
    if exact is None:
        roughly = Fraction(optimum.amount).limit_denominator(10**6)
        return replace(nothing, amount=roughly, verified=not roughly and bound == 0)
    amount = product(aim.row, exact)
    conversion = tuple(
        (s.name, n) for s in network.boundary if (n := product(rows[s.name], exact))
    )
    return MostEnergy(
        substrate.name,
        carrier.name,
        amount,
        conversion if amount else (),
        find_free_energy(network, dict(conversion)).value if amount else None,
        bound == amount,
    )


@record
class _Optimum:
    """The most per mole, scaled fluxes that make it, prices of the sides and the substrate."""

    amount: float
    scaled: NDArray[np.float64]
    weights: list[float]
    price: float


def _optimum(cone: Cone, rows: ConeRows) -> _Optimum | None:
    """The most of the last side but one for 1 of the last; None where there is no end to it."""
    both = [j for j in range(len(cone.reactions)) if rows.low[j] < 0]
    taken, aim = rows.row_of[len(cone.sides) - 1], rows.row_of[len(cone.sides) - 2]
    high = rows.high.copy()
    high[taken] = 1.0
    matrix = np.hstack([rows.matrix, -rows.matrix[:, both]])
    names = (*cone.reactions, *(f"{cone.reactions[j]} backwards" for j in both))
    count = len(cone.reactions)
    programme = Programme(
        Problem(
            names, rows.labels, matrix, np.zeros(len(high)), high,
            np.zeros(len(names)), np.full(len(names), np.inf),
        )
    )  # fmt: skip
    best = programme.maximise(matrix[aim])
    if best.outcome is Outcome.UNBOUNDED:
        return None
    thrifty = programme.maximise(matrix[aim] - _THRIFT)
    if Outcome.OPTIMAL is not best.outcome or Outcome.OPTIMAL is not thrifty.outcome:
        raise ArithmeticError("the solver could not tell the most energy per substrate")
    scaled = thrifty.fluxes[:count].copy()
    scaled[both] -= thrifty.fluxes[count:]
    weights = rows.weights(len(cone.sides), best.row_prices, best.column_prices[:count])
    unit = rows.row_scale[aim]
    mole = float(rows.row_scale[taken] / unit)
    price = without_noise(best.row_prices[taken]) * mole
    return _Optimum(best.objective * mole, scaled, (weights[:-2] / unit).tolist(), price)


def _bound(cone: Cone, optimum: _Optimum) -> Fraction | None:
    """The optimum that exact prices prove, or None where they cannot be made exact."""
    *sides, aim, taken = cone.sides
    weights, price = optimum.weights, optimum.price
    held = [k for k, w in enumerate(weights) if w > 0]
    forms, guess = [aim, *(sides[k] for k in held)], [1.0, *(weights[k] for k in held)]
    if price > 0:
        forms.append(replace(taken, row={j: -v for j, v in taken.row.items()}))
        guess.append(price)
    space = null_space([f.row for f in cone.equal], len(cone.reactions))
    proof = exact_weights(space, forms, guess)
    if proof is None:
        return None
    return proof[-1] / proof[0] if price > 0 else Fraction(0)
