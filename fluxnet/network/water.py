"""Water and protons that a reaction writes: where they can be checked, and in which form."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction

from fluxnet.chemistry.formula import Formula
from fluxnet.ground.record import record
from fluxnet.network.contents import CHARGE, PHOSPHATE, Content, content_of_formula
from fluxnet.network.model import CargoKind, Network, Species

__all__ = [
    "Water", "at_ph_seven", "form_at_ph_seven", "free_forms", "is_proton", "is_water", "water_of",
]  # fmt: skip


@record
class Water:
    """``checked``: ``"O"`` where water is checked, ``"charge"`` where protons are.

    ``unchecked_for`` are the carriers that forbid it: those that carry energy, or a cargo
    without a charge.
    """

    checked: tuple[str, ...] = ()
    unchecked_for: tuple[str, ...] = ()


def is_water(formula: Formula | None) -> bool:
    """Whether a composition is water.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> is_water(read_formula("H2O")), is_water(read_formula("H2O2")), is_water(None)
    (True, False, False)
    """
    return formula is not None and _is(formula, {"H": 2, "O": 1}, 0)


def is_proton(formula: Formula | None) -> bool:
    """Whether a composition is the proton.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> is_proton(read_formula("H charge +1")), is_proton(read_formula("H2"))
    (True, False)
    """
    return formula is not None and _is(formula, {"H": 1}, 1)


def _is(formula: Formula, counts: Mapping[str, int], charge: int) -> bool:
    return dict(formula.counts) == counts and formula.charge == charge


def water_of(species: Sequence[Species]) -> Water:
    """Which of water and protons can be checked in a line with these species."""
    written: list[str] = []
    if any(is_water(s.formula) for s in species):
        written.append("O")
    if any(is_proton(s.formula) for s in species):
        written.append(CHARGE)
    if not written:
        return Water()
    blocking = tuple(
        s.name
        for s in species
        if s.cargo is not None
        and (s.cargo.kind is CargoKind.ENERGY or not s.cargo.checks_protons)
    )
    return Water((), blocking) if blocking else Water(tuple(written))


def form_at_ph_seven(species: Species) -> Formula | None:
    """The form in which a species stands at pH 7.

    The catalogue's form where the model takes the catalogue's formula; a formula of the
    model's own stands as written, and so do carbon dioxide and biomass.

    Examples
    --------
    >>> from fluxnet.network.model import Role
    >>> from fluxnet.chemistry.reader import read_formula
    >>> acid = Species("acetate", Role.PRODUCT, read_formula("C2H4O2"), entry="acetate")
    >>> form = form_at_ph_seven(acid)
    >>> form.count("H"), form.charge
    (Fraction(3, 1), Fraction(-1, 1))
    """
    if species.formula is None or species.entry is None or species.cargo is not None:
        return species.formula
    if _is(species.formula, {"C": 1, "O": 2}, 0):
        return species.formula
    from fluxnet.chemistry.catalogue import load_catalogue

    compound = load_catalogue().find(species.entry)
    if compound is None or dict(compound.formula.counts) != dict(species.formula.counts):
        return species.formula
    return species.formula if species.formula.charge else compound.formula_ph7


def at_ph_seven(
    species: Iterable[Species], present: Mapping[str, Content], free: Iterable[Content]
) -> tuple[dict[str, Content], tuple[Content, ...]]:
    """The contents of a line, and the free ones, with every acid in its form at pH 7."""
    ionised = dict(present)
    for one in species:
        form = form_at_ph_seven(one)
        if form is not None and one.cargo is None:
            ionised[one.name] = content_of_formula(form)
    return ionised, tuple(_phosphate_ion() if f is PHOSPHATE else f for f in free)


def free_forms(network: Network) -> tuple[tuple[str, Content], ...]:
    """The free species of a network by name, in their forms at pH 7.

    Examples
    --------
    >>> from fluxnet.network.model import Basis
    >>> network = Network("", Basis.SPECIFIC, (), (), (), (), free=("sulfate",))
    >>> [name for name, _ in free_forms(network)]
    ['phosphate', 'sulfate']
    """
    from fluxnet.chemistry.catalogue import load_catalogue

    found = [] if network.balance_phosphate else [("phosphate", _phosphate_ion())]
    for name in network.free:
        species = network.find_species(name)
        form = None if species is None else form_at_ph_seven(species)
        compound = load_catalogue().find(name) if species is None else None
        if compound is not None:
            form = compound.formula_ph7
        if form is not None and name not in dict(found):
            found.append((name, content_of_formula(form)))
    return tuple(found)


def _phosphate_ion() -> Content:
    from fluxnet.chemistry.catalogue import load_catalogue

    compound = load_catalogue().find("phosphate")
    if compound is not None:
        return content_of_formula(compound.formula_ph7)
    return Content({"P": Fraction(1), "O": Fraction(4), "H": Fraction(1), CHARGE: Fraction(-2)}, {})
