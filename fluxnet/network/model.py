"""The model as data: species, reactions, limits, variants. Frozen, in the order of the file."""

from __future__ import annotations

from dataclasses import field
from enum import Enum
from fractions import Fraction
from typing import TYPE_CHECKING

from fluxnet.chemistry.formula import EMPTY, Formula
from fluxnet.ground.diagnostic import Acceptance
from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.expression import Expression
from fluxnet.network.quantity import Direction, Limit, Quantity, QuantityKind, Relation

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from numpy.typing import NDArray

__all__ = [
    "Basis", "Cargo", "CargoKind", "Compartment", "Direction", "Limit", "Network", "Parameter",
    "Quantity", "QuantityKind", "Reaction", "Relation", "Role", "Species", "Term", "Variant",
]


class Role(Enum):
    """What a species may do. Boundary species cross the boundary; the others are balanced."""

    SUBSTRATE = "substrate"
    PRODUCT = "product"
    EXCHANGE = "exchange"
    BIOMASS = "biomass"
    CARRIER = "carrier"
    INSIDE = "inside"

    @property
    def is_boundary(self) -> bool:
        """Whether species of this role cross the boundary."""
        return self not in (Role.CARRIER, Role.INSIDE)


class CargoKind(Enum):
    """What a carrier carries: energy, which no element balance sees; electrons; a group."""

    ENERGY = "energy"
    ELECTRONS = "electrons"
    GROUP = "group"


@record
class Cargo:
    """The difference between the loaded and the empty form of a carrier.

    ``formula`` is what the balances see: empty for energy; for bare electrons it is empty
    too and ``electrons`` gives their number; for a group (``C2H2O``, ``H charge -1``) it is
    the group and ``electrons`` its degree of reduction.
    ``checks_protons``: whether water and protons can be checked in lines with this carrier
    (a cargo with a known charge).
    """

    kind: CargoKind
    electrons: Fraction = Fraction(0)
    formula: Formula = EMPTY
    checks_protons: bool = False


@record
class Species:
    """A species with its one role.

    ``formula`` is None for an inside species without one. ``entry`` is the name of the
    catalogue entry it was matched to. ``ash`` and ``ash_sd`` are fractions of dry weight
    (biomass only).
    """

    name: str
    role: Role
    formula: Formula | None = None
    cargo: Cargo | None = None
    entry: str | None = None
    ash: Fraction = Fraction(0)
    ash_sd: Fraction = Fraction(0)
    span: Span = NOWHERE


@record
class Parameter:
    """A number with a name: exact, or measured where ``sd`` is given."""

    name: str
    value: Fraction
    sd: Fraction | None = None
    low: Fraction | None = None
    high: Fraction | None = None
    span: Span = NOWHERE


@record
class Term:
    """One species on one side of a reaction.

    ``coefficient`` is None for a ``?`` that is not solved yet; ``solved`` marks one that
    was. ``half_unit`` is half a unit of the last written decimal, 0 where the coefficient is
    a whole number, a parameter or an expression. ``written`` is the coefficient as typed
    (empty for 1).
    """

    species: str
    coefficient: Expression | None
    half_unit: Fraction = Fraction(0)
    written: str = ""
    solved: bool = False
    span: Span = NOWHERE


@record
class Reaction:
    """A reaction, its flux positive from left to right."""

    name: str
    compartment: str
    left: tuple[Term, ...]
    right: tuple[Term, ...]
    reversible: bool = False
    span: Span = NOWHERE

    @property
    def terms(self) -> tuple[tuple[int, Term], ...]:
        """All terms with their sign: -1 on the left, +1 on the right."""
        return tuple((-1, t) for t in self.left) + tuple((1, t) for t in self.right)


@record
class Compartment:
    """A part of metabolism (not a place in the cell)."""

    name: str
    span: Span = NOWHERE


@record
class Drop:
    """``drop NAME`` (a reaction or species) or ``drop limit QUANTITY``."""

    name: str = ""
    quantity: Quantity | None = None
    span: Span = NOWHERE


@record
class Variant:
    """A named set of changes, applied by :func:`fluxnet.network.variant.apply_variant`.

    ``acceptances`` are those of its own lines: they count only where it is applied.
    """

    name: str
    words: str = ""
    parents: tuple[str, ...] = ()
    species: tuple[Species, ...] = ()
    settings: tuple[Parameter, ...] = ()
    reactions: tuple[Reaction, ...] = ()
    limits: tuple[Limit, ...] = ()
    drops: tuple[Drop, ...] = ()
    acceptances: tuple[Acceptance, ...] = ()
    span: Span = NOWHERE


class Basis(Enum):
    """The unit of every rate of a model."""

    SPECIFIC = "mmol/g/h"
    CARBON = "C-mol/C-mol/h"
    VOLUMETRIC = "mmol/L/h"
    AMOUNT = "mmol"


@record
class Network:
    """A whole model, every line of it resolved; the order is the file's.

    ``free`` names species that any reaction may use or make unwritten; phosphate is one of
    them unless ``balance_phosphate``. Built by :func:`fluxnet.reading.model.read_model`;
    changed only by making another.
    """

    title: str
    basis: Basis
    species: tuple[Species, ...]
    parameters: tuple[Parameter, ...]
    compartments: tuple[Compartment, ...]
    reactions: tuple[Reaction, ...]
    limits: tuple[Limit, ...] = ()
    variants: tuple[Variant, ...] = ()
    free: tuple[str, ...] = ()
    acceptances: tuple[Acceptance, ...] = ()
    variant: str = "base"
    balance_phosphate: bool = False
    _species: dict[str, Species] = field(init=False, repr=False, compare=False, hash=False)
    _reactions: dict[str, Reaction] = field(init=False, repr=False, compare=False, hash=False)

    def __post_init__(self) -> None:
        object.__setattr__(self, "_species", {s.name: s for s in self.species})
        object.__setattr__(self, "_reactions", {r.name: r for r in self.reactions})

    def find_species(self, name: str) -> Species | None:
        """The species of that name, or None."""
        return self._species.get(name)

    def find_reaction(self, name: str) -> Reaction | None:
        """The reaction of that name, or None."""
        return self._reactions.get(name)

    @property
    def S(self) -> NDArray[np.float64]:  # noqa: N802
        """The stoichiometric matrix, species x reactions, at the parameters' values."""
        from fluxnet.network.matrix import matrix_of

        return matrix_of(self)

    def frame(self) -> pd.DataFrame:
        """The matrix with its labels: a row a species, a column a reaction."""
        from fluxnet.network.matrix import frame_of

        return frame_of(self)

    @property
    def boundary(self) -> tuple[Species, ...]:
        """The species that cross the boundary."""
        return tuple(s for s in self.species if s.role.is_boundary)

    @property
    def balanced(self) -> tuple[Species, ...]:
        """The species and carriers that cannot pile up."""
        return tuple(s for s in self.species if not s.role.is_boundary)

    @property
    def carriers(self) -> tuple[Species, ...]:
        """The carriers."""
        return tuple(s for s in self.species if s.role is Role.CARRIER)
