"""Which variant is worth building: what each can make of a substrate, ranked."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from fractions import Fraction

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.network.model import Network
from fluxnet.network.variant import BASE
from fluxnet.studies.compare_ability import Work, find_ability, solve_all
from fluxnet.studies.compare_cases import Case, find_cases, split_names
from fluxnet.studies.compare_cause import Cause, find_cause
from fluxnet.studies.compare_draws import SEED, Asked, Drawn, beats, draw_all, interval
from fluxnet.studies.compare_family import Family, gather
from fluxnet.studies.compare_modes import DEMANDS, Mode, find_demands
from fluxnet.studies.compare_rank import rank
from fluxnet.studies.compare_reserve import read_reserve
from fluxnet.studies.compare_result import Ability, Comparison, ModeYield, Odds
from fluxnet.studies.compare_staircase import find_staircase
from fluxnet.studies.compare_supply import read_biomass
from fluxnet.studies.compare_words import best_and_second, tell_comparison, tell_second
from fluxnet.studies.staircase import Staircase

__all__ = ["compare"]


def compare(
    model: Network,
    product: str,
    substrate: str,
    across: Sequence[str] = (),
    reserve: str | Sequence[str] | None = None,
    *,
    uptake: Fraction | float | str | None = None,
    beside: Sequence[str] = (),
    biomass: Fraction | float | str | None = None,
    staircase: Sequence[str] | bool = False,
    measured: Fraction | float | str | None = None,
    draws: int = 200,
    seed: int = SEED,
    progress: Progress = silent,
) -> Comparison:
    """What each variant, and each combination of variants, can make of a substrate at most.

    The yield is per mole of substrate at a fixed uptake: the one given, else the substrate's
    own limit, so that limits in absolute units count at that rate. Where there is none the
    yield is worked out per mole, and such limits take no part (told in ``left_out``).

    Parameters
    ----------
    substrate
        Several are written ``"glucose | xylose"``. Other sources of carbon or electrons are
        closed unless named in ``beside``.
    across
        Lists of variants such as ``"base | anaerobic"``; all combinations are compared.
        Without any: the unchanged model and each variant by itself.
    reserve
        What has to be kept back: ``"mu = 0.05"``, ``"X / glucose = 0.1"``, one or several.
    biomass
        A concentration of biomass, ``"20 g/L"`` or a number of g/L: what the best takes and
        gives off is told per litre too.
    staircase
        Show where the yield goes: of the best (True), or of those named.
    measured
        A yield that was measured [mol/mol], as the last step of each staircase.
    draws
        Of the uncertain numbers; 0 leaves the intervals out.

    Raises
    ------
    MisuseError
        Where the question makes no sense (product and substrate the same, a name that is not
        there, no combination left).
    InputError
        Where a variant does not exist.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   ethanol, lactate, CO2
    ... carrier   NADH  carries 2 electrons
    ... inside    pyruvate
    ... compartment c
    ...     glycolysis : glucose -> 2 pyruvate + 2 NADH
    ...     ferment    : pyruvate + NADH -> ethanol + CO2
    ...     ldh        : pyruvate + NADH -> lactate
    ... variant lactic
    ...     drop ferment
    ... ''').network
    >>> found = compare(network, "ethanol", "glucose")
    >>> [(a.name, str(a.final.moles), str(a.final.share)) for a in found.abilities]
    [('base', '2', '1'), ('lactic', '0', '0')]
    """
    if draws < 0:
        raise MisuseError("the number of draws is not negative")
    kept = (reserve,) if isinstance(reserve, str) else tuple(reserve or ())
    reserves = [read_reserve(text, model) for text in kept]
    substrates = split_names(substrate)
    cases = find_cases(
        model, product, substrates, across, reserves,
        uptake=None if uptake is None else _positive(uptake, "an uptake"), beside=beside,
    )  # fmt: skip
    grams = None if biomass is None else read_biomass(biomass, model.basis)
    families = gather(cases.members)
    common = _common([case.parts for case in cases.members])
    works = _works(families, common, several=len(substrates) > 1)
    modes = tuple(m for m in Mode if any(m in w.demands.modes for w in works))
    abilities: dict[str, Ability] = {}
    asked: list[Asked] = []
    for f, family in enumerate(families):
        for work, bests in solve_all(family, [w for w in works if w.family == f], product):
            progress("variants", len(abilities), len(works))
            abilities[work.name] = find_ability(work, bests, product, modes)
            asked += [
                Asked(work.name, mode, f, work.member, work.demands, DEMANDS[mode], product,
                      best.question.uptake)
                for mode, best in bests.items()
                if best.amount is not None
            ]  # fmt: skip
    by_name = {w.name: w for w in works}
    in_order = sorted(abilities, key=lambda name: _order(by_name[name].member.case, cases.members))
    drawn = draw_all(families, asked, draws, seed, progress=progress)
    ranked = rank([_with_intervals(abilities[name], drawn) for name in in_order])
    level = None if measured is None else _positive(measured, "a measured yield")
    wanted = _asked_stairs(ranked, staircase, told=level is not None)
    ranked = tuple(
        replace(a, staircase=_stairs(families, by_name[a.name], a, product, level))
        if a.name in wanted
        else a
        for a in ranked
    )
    comparison = Comparison(
        network=model,
        product=product,
        unit=model.basis.value,
        modes=modes,
        reserve=", ".join(r.words for r in reserves),
        abilities=ranked,
        skipped=cases.skipped,
        notes=(*cases.notes, *_cut_short(drawn, draws)),
        uncertain=drawn.names,
        odds=_odds(ranked, drawn),
        draws=drawn.count,
        seed=seed,
        words="",
        second="",
        common=tuple(name for names in common.values() for name in names),
        biomass=grams,
    )
    return replace(
        comparison,
        words=tell_comparison(comparison),
        second=tell_second(comparison, _cause(families, by_name, ranked, product)),
    )


def _cause(
    families: Sequence[Family], by_name: Mapping[str, Work], ranked: Sequence[Ability], product: str
) -> Cause | None:
    """What the pathway of the second takes more than that of the best."""
    pair = best_and_second(ranked)
    if pair is None:
        return None
    works = [by_name[a.name] for a in pair]
    if works[0].family != works[1].family:
        return None
    first, second = (w.member for w in works)
    return find_cause(families[works[0].family], (first, pair[0]), (second, pair[1]), product)


def _common(choices: Sequence[tuple[str, ...]]) -> dict[int, tuple[str, ...]]:
    """Which lists have one name in all cases, and that name; none where that goes for all."""
    lists = [set(names) for names in zip(*choices, strict=True)]
    if all(len(names) == 1 for names in lists):
        return {}
    return {
        k: tuple(name for name in names if name != BASE)
        for k, names in enumerate(lists)
        if len(names) == 1
    }


def _cut_short(drawn: Drawn, draws: int) -> tuple[str, ...]:
    if drawn.names and drawn.count < draws:
        return (f"interrupted: the intervals are of {drawn.count} draws, not {draws}",)
    return ()


def _positive(value: Fraction | float | str, what: str) -> Fraction:
    try:
        number = Fraction(value) if isinstance(value, (str, Fraction)) else Fraction(repr(value))
    except ValueError:
        raise MisuseError(f"{what} is a number, not {value!r}") from None
    if number <= 0:
        raise MisuseError(f"{what} is above zero")
    return number


def _works(
    families: Sequence[Family], common: Mapping[int, tuple[str, ...]], *, several: bool
) -> list[Work]:
    return [
        Work(f, member, find_demands(member), _name(member.case, common, several=several))
        for f, family in enumerate(families)
        for member in family.members
    ]


def _name(case: Case, common: Mapping[int, tuple[str, ...]], *, several: bool) -> str:
    """A case's variant without what all have; of several substrates with its own."""
    name = case.variant
    if common:
        own = [part for k, part in enumerate(case.parts) if k not in common and part != BASE]
        name = " * ".join(own) or BASE
    return f"{case.substrate}: {name}" if several else name


def _order(case: Case, cases: Sequence[Case]) -> int:
    return next(k for k, other in enumerate(cases) if other is case)


def _odds(ranked: Sequence[Ability], drawn: Drawn) -> tuple[Odds, ...]:
    """How probable it is that the best yields more than each other one."""
    found: list[Odds] = []
    first = drawn.last(ranked[0].name)
    each = float(ranked[0].carbon_per_mole)
    for other in ranked[1:]:
        own = drawn.last(other.name)
        if first is not None and own is not None:
            chance = beats(first * each, own * float(other.carbon_per_mole))
            found.append(Odds(ranked[0].name, other.name, chance))
    return tuple(found)


def _with_intervals(ability: Ability, drawn: Drawn) -> Ability:
    """The ability with the interval of each yield; a mode without its own has the one before."""
    yields: list[ModeYield] = []
    last = None
    for one in ability.yields:
        last = drawn.of(ability.name, one.mode, last)
        ends = (None, None) if last is None else interval(last)
        yields.append(replace(one, low=ends[0], high=ends[1]))
    return replace(ability, yields=tuple(yields))


def _asked_stairs(
    ranked: Sequence[Ability], staircase: Sequence[str] | bool, *, told: bool
) -> set[str]:
    """The names whose staircase is wanted."""
    if isinstance(staircase, bool):
        return {ranked[0].name} if staircase or told else set()
    wanted: set[str] = set()
    for name in staircase:
        found = next((a.name for a in ranked if a.is_called(name)), None)
        if found is None:
            there = ", ".join(a.name for a in ranked[:12])
            raise MisuseError(f"no variant compared is called {name!r}: there are {there}")
        wanted.add(found)
    return wanted


def _stairs(
    families: Sequence[Family], work: Work, ability: Ability, product: str, level: Fraction | None
) -> Staircase | None:
    return find_staircase(
        families[work.family], work.member, work.demands, product, ability.final.uptake, level
    )
