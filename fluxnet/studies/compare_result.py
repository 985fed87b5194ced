"""What each variant can do: the frozen answer of a comparison."""

from __future__ import annotations

from enum import Enum
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.model import Network
from fluxnet.solving.linear import Outcome
from fluxnet.studies.compare_cases import Skipped
from fluxnet.studies.compare_modes import Mode
from fluxnet.studies.heat import Heat
from fluxnet.studies.solution import SpeciesPrice
from fluxnet.studies.staircase import Staircase

__all__ = [
    "Ability", "ByProduct", "Comparison", "Destination", "Facts", "Holding", "Limiting",
    "ModeYield", "Odds", "Supply",
]  # fmt: skip


class Limiting(Enum):
    """What kind of thing holds a yield back."""

    CARBON = "carbon"
    ELECTRONS = "electrons"
    ENERGY = "energy"
    OXYGEN = "oxygen"
    LIMIT = "limit"


@record
class Holding:
    """One thing that holds a yield back, and what the first bit more of it would give.

    ``gain`` is in moles of product per unit (a mole of a carrier, a unit of a limit); None of
    carbon and electrons at their own ceilings, which nothing but more substrate lifts.
    """

    kind: Limiting
    name: str
    gain: float | None


@record
class ModeYield:
    """The most product per substrate in one mode.

    ``moles`` is exact, in mol/mol, None where nothing is feasible or there is no end;
    ``carbon`` in C-mol/C-mol (None where either holds no carbon) is exact too, ``mass`` is in
    g/g, ``share`` that of the electron-limited yield. ``low`` to ``high`` holds 95 % of the
    draws of the uncertain numbers. ``uptake`` is in the unit of the basis; ``is_cut`` marks one
    below what was asked, because more cannot be used.
    """

    mode: Mode
    outcome: Outcome
    moles: Fraction | None
    carbon: Fraction | None
    mass: float | None
    share: Fraction | None
    uptake: Fraction
    is_cut: bool
    proven: bool
    proof: str
    low: float | None = None
    high: float | None = None


@record
class ByProduct:
    """What else leaves at the optimum: least and most, in mol per mol of product."""

    species: str
    least: float
    most: float


@record
class Destination:
    """Where the substrate goes: the share of its carbon and of its electrons."""

    name: str
    carbon: float | None
    electrons: float | None


@record
class Facts:
    """A variant at its optimum, per mole of product.

    Rates are those of the optimum that takes least oxygen (and then the least total flux).
    ``oxygen_most`` is what another optimum may take. ``surplus`` is the most of each energy
    carrier that can be left over beside the product.
    """

    holding: tuple[Holding, ...]
    prices: tuple[SpeciesPrice, ...]
    oxygen: float | None
    oxygen_most: float | None
    carbon_dioxide: float | None
    heat: Heat | None
    base: float | None
    by_products: tuple[ByProduct, ...]
    surplus: tuple[tuple[str, float], ...]
    destinations: tuple[Destination, ...]
    releases: tuple[tuple[str, float], ...]
    fluxes: tuple[tuple[str, float], ...] = ()


@record
class Supply:
    """What an optimum takes and gives off an hour, at the uptake it was found at.

    In the units that :func:`fluxnet.studies.compare_supply.units_of` tells. Carbon dioxide and
    heat are given off; None is what is not known.
    """

    uptake: float
    product: float
    oxygen: float | None
    carbon_dioxide: float | None
    heat: float | None
    base: float | None


@record
class Ability:
    """What one variant can do on one substrate.

    ``yields`` has one entry for each mode; ``facts`` are those of the last. ``rank`` counts
    from 1; ``tied`` are others with exactly the same yield. ``is_best_of_all`` marks those that
    no other betters in yield, oxygen, heat and energy at once. ``without_growth`` is the most
    product [mol/mol] with no growth at all, ``most_growth`` the most biomass, ``forced`` the
    least product there (each None where the model has no biomass). ``reason`` tells why no
    product can be made. ``parts`` are the variants chosen, one from each list; ``name`` leaves
    out those that all have. ``supply`` is None where nothing gives the uptake.
    """

    name: str
    variant: str
    substrate: str
    yields: tuple[ModeYield, ...]
    ceiling: Fraction | None
    facts: Facts | None
    without_growth: float | None
    most_growth: float | None
    forced: float | None
    reason: str
    left_out: tuple[str, ...]
    rank: int = 0
    tied: tuple[str, ...] = ()
    is_best_of_all: bool = False
    staircase: Staircase | None = None
    parts: tuple[str, ...] = ()
    supply: Supply | None = None

    def is_called(self, name: str) -> bool:
        """Whether this is its name, with or without what all variants have."""
        head = f"{self.substrate}: "
        full = f"{head}{self.variant}" if self.name.startswith(head) else self.variant
        return name in (self.name, full)

    @property
    def final(self) -> ModeYield:
        """The yield that it is ranked by: with all that was asked for."""
        return self.yields[-1]

    @property
    def carbon_per_mole(self) -> Fraction:
        """C-mol/C-mol for each mol/mol of its yields; 1 where they have no carbon to count."""
        for one in self.yields:
            if one.carbon is not None and one.moles:
                return one.carbon / one.moles
        return Fraction(1)

    @property
    def worth(self) -> Fraction:
        """What it is ranked by: C-mol yields where there are any, else shares or moles."""
        final = self.final
        found = next((x for x in (final.carbon, final.share, final.moles) if x is not None), None)
        return Fraction(-1) if found is None else found


@record
class Odds:
    """How probable it is that one variant yields more than another (a tie counts half)."""

    better: str
    worse: str
    probability: float


@record
class Comparison:
    """What each variant can do, the best first.

    ``draws`` of the ``uncertain`` numbers were made with ``seed`` (0 where none is uncertain).
    ``second`` tells in one sentence why the second best is second. ``common`` are the variants
    that all have; ``biomass`` is in g/L, None where it was not given.
    """

    network: Network
    product: str
    unit: str
    modes: tuple[Mode, ...]
    reserve: str
    abilities: tuple[Ability, ...]
    skipped: tuple[Skipped, ...]
    notes: tuple[str, ...]
    uncertain: tuple[str, ...]
    odds: tuple[Odds, ...]
    draws: int
    seed: int
    words: str
    second: str
    common: tuple[str, ...] = ()
    biomass: float | None = None

    @property
    def counts_carbon(self) -> bool:
        """Whether yields are told in C-mol/C-mol: on several substrates moles say nothing."""
        known = [a for a in self.abilities if a.final.moles]
        several = len({a.substrate for a in self.abilities}) > 1
        return several and all(a.final.carbon is not None for a in known)

    @property
    def is_sound(self) -> bool:
        """Whether some variant makes product, and every yield is proven."""
        makes = any((a.final.moles or 0) > 0 for a in self.abilities)
        return makes and all(y.proven for a in self.abilities for y in a.yields)

    def find(self, name: str) -> Ability | None:
        """The one of that name, with or without what all variants have."""
        return next((a for a in self.abilities if a.is_called(name)), None)
