"""How many rates a network leaves free, which fluxes some of them determine, what to measure.

All in exact arithmetic: the answers are ranks.
"""

from __future__ import annotations

from collections.abc import Collection, Sequence
from fractions import Fraction

from fluxnet.checks.cone import exact_rows, quantity_form
from fluxnet.checks.redundancy import Addition, find_addition
from fluxnet.exact.sparse import NullSpace, SparseRow, independent_forms, null_space
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind, Role, Species

__all__ = ["Freedom", "Known", "in_order_of_practice", "known_by_limits", "measure_freedom"]


@record
class Known:
    """A quantity whose value is known; of a ratio the value itself counts."""

    quantity: Quantity
    value: Fraction | None = None


@record
class Freedom:
    """What a network leaves free.

    ``dimension`` is that of the space of all fluxes that are possible at all: balances hold,
    what can never run is zero. ``fixed`` are quantities that the model's own limits give a
    value to, exact or measured; ``measured`` those of the run, if one was given. Both together
    leave ``left`` dimensions, and hold ``redundancy`` more values than are needed for what they
    determine. ``determined`` and ``undetermined`` are the reactions whose flux they do and do
    not tell; those that can carry none are in neither.

    ``needed`` is a smallest set of quantities that, with ``fixed``, determines all fluxes;
    ``missing`` one to add to ``measured``. Where boundary rates alone do not suffice, fluxes
    inside (kind FLUX) stand in it, and ``boundary_enough`` is false.

    An error in a measured value shows only where others test it. ``untested`` are those of the
    measured ones (without a run: of ``needed``) that none tests; ``to_test`` a smallest set of
    rates across the boundary after which all are, with ``redundancy_then`` redundant values:
    two where that is possible, for one alone does not tell which of them is wrong.
    ``never_tested`` are those that no rate across the boundary tests.
    """

    dimension: int
    fixed: tuple[Quantity, ...]
    measured: tuple[Quantity, ...]
    left: int
    redundancy: int
    determined: tuple[str, ...]
    undetermined: tuple[str, ...]
    needed: tuple[Quantity, ...]
    missing: tuple[Quantity, ...]
    untested: tuple[Quantity, ...]
    to_test: tuple[Quantity, ...]
    redundancy_then: int
    never_tested: tuple[Quantity, ...]

    @property
    def boundary_enough(self) -> bool:
        """Whether measured rates of boundary species can determine every flux."""
        return all(q.kind is not QuantityKind.FLUX for q in self.needed)


def known_by_limits(network: Network) -> tuple[Known, ...]:
    """The quantities that limits give a value other than zero: equalities and measured ones.

    Those held at zero are no freedom in the first place, and count in no list.
    """
    return tuple(
        Known(limit.quantity, limit.low)
        for limit in network.limits
        if limit.low is not None and limit.low == limit.high and (limit.low or limit.is_measured)
    )


def measure_freedom(
    network: Network,
    stoich: Stoichiometry,
    space: NullSpace,
    measured: Collection[Known] = (),
) -> Freedom:
    """Dimension of the flux space, what is determined in it, and what would determine all.

    Parameters
    ----------
    space
        All fluxes that meet the balances, with zeros where nothing can run: see
        :func:`fluxnet.checks.interior.find_interior`.
    measured
        Quantities that are measured beside those that limits fix.
    """
    rows = dict(zip(stoich.species, exact_rows(network, stoich), strict=True))
    given = tuple(measured)
    taken = {k.quantity for k in given}
    fixed = tuple(k for k in known_by_limits(network) if k.quantity not in taken)
    fixed_forms = [_form(network, stoich, rows, space, k) for k in fixed]
    given_forms = [_form(network, stoich, rows, space, k) for k in given]
    forms = fixed_forms + given_forms
    rest = null_space(forms, space.dimension)
    running = [j for j, row in enumerate(space.rows) if row]
    open_ = {j for j in running if rest.image(space.rows[j])}
    candidates = [Known(q) for q in in_order_of_practice(network)]
    candidate_forms = [_form(network, stoich, rows, space, k) for k in candidates]
    needed = _chosen(fixed_forms, candidate_forms, candidates)
    held = fixed + (given or tuple(Known(q) for q in needed if q.kind is not QuantityKind.FLUX))
    held_forms = [_form(network, stoich, rows, space, k) for k in held]
    offered = _offered(network, stoich, rows, held)
    wanted = [i for i, k in enumerate(held) if i >= len(fixed) or _is_measured(network, k)]
    addition = (
        find_addition(
            held_forms, [_form(network, stoich, rows, space, k) for k in offered], wanted
        )
        if wanted
        else Addition((), (), (), 0)
    )
    return Freedom(
        dimension=space.dimension,
        fixed=tuple(k.quantity for k in fixed),
        measured=tuple(k.quantity for k in given),
        left=rest.dimension,
        redundancy=len(forms) - (space.dimension - rest.dimension),
        determined=tuple(stoich.reactions[j] for j in running if j not in open_),
        undetermined=tuple(stoich.reactions[j] for j in running if j in open_),
        needed=needed,
        missing=_chosen(forms, candidate_forms, candidates),
        untested=tuple(held[i].quantity for i in addition.untested),
        to_test=tuple(offered[i].quantity for i in addition.added),
        redundancy_then=addition.redundancy,
        never_tested=tuple(held[i].quantity for i in addition.never),
    )


def _is_measured(network: Network, known: Known) -> bool:
    """Whether a value that a limit gives is a measured one."""
    return any(x.is_measured and x.quantity == known.quantity for x in network.limits)


def _offered(
    network: Network,
    stoich: Stoichiometry,
    rows: dict[str, dict[int, Fraction]],
    held: Sequence[Known],
) -> list[Known]:
    """What crosses the boundary and is not among the values held, under any name."""
    taken = [
        independent
        for k in held
        if (independent := quantity_form(network, stoich, rows, k.quantity))
    ]
    return [
        Known(q)
        for q in in_order_of_practice(network)
        if q.kind is not QuantityKind.FLUX
        and (form := quantity_form(network, stoich, rows, q))
        and all(len(independent_forms([form, other])) == 2 for other in taken)
    ]


def _form(
    network: Network,
    stoich: Stoichiometry,
    rows: dict[str, dict[int, Fraction]],
    space: NullSpace,
    known: Known,
) -> dict[int, Fraction]:
    """The quantity as a form in the coordinates of the space."""
    form = quantity_form(network, stoich, rows, known.quantity)
    below = known.quantity.denominator
    if known.quantity.kind is QuantityKind.RATIO and below is not None and known.value:
        for j, value in quantity_form(network, stoich, rows, below).items():
            form[j] = form.get(j, Fraction(0)) - known.value * value
    return space.image(form)


def _chosen(
    held: Sequence[SparseRow], offered: Sequence[SparseRow], names: Sequence[Known]
) -> tuple[Quantity, ...]:
    """The first of the offered forms that raise the rank, one after the other."""
    picked = independent_forms([*held, *offered])
    return tuple(names[i - len(held)].quantity for i in picked if i >= len(held))


def in_order_of_practice(network: Network) -> tuple[Quantity, ...]:
    """All quantities that could be measured, the usual ones first.

    Carbon substrates, growth, products, oxygen, CO2, whatever else crosses the boundary;
    then fluxes inside, last those that do nothing but spend carriers.
    """
    biomass = [s for s in network.boundary if s.role is Role.BIOMASS]
    ranked = sorted(network.boundary, key=_rank)
    rates = [
        Quantity(QuantityKind.MU)
        if species.role is Role.BIOMASS and len(biomass) == 1
        else Quantity(QuantityKind.RATE, species.name, _direction(species))
        for species in ranked
    ]
    carriers = {s.name for s in network.carriers}
    spenders = [
        all(t.species in carriers for _, t in reaction.terms) for reaction in network.reactions
    ]
    inside = [
        Quantity(QuantityKind.FLUX, reaction.name)
        for late in (False, True)
        for reaction, is_spender in zip(network.reactions, spenders, strict=True)
        if is_spender is late
    ]
    return (*rates, *inside)


def _rank(species: Species) -> int:
    counts = dict(species.formula.counts) if species.formula is not None else {}
    if species.role is Role.BIOMASS:
        return 1
    if counts == {"O": 2}:
        return 4
    if counts == {"C": 1, "O": 2}:
        return 5
    if species.role is Role.SUBSTRATE:
        return 0 if counts.get("C") else 6
    if species.role is Role.PRODUCT:
        return 2
    return 3 if counts.get("C") else 6


def _direction(species: Species) -> Direction:
    """How the rate is named: substrates and oxygen in, the rest out."""
    oxygen = _rank(species) == 4
    return Direction.IN if species.role is Role.SUBSTRATE or (
        oxygen and species.role is Role.EXCHANGE
    ) else Direction.OUT
