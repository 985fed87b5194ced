"""The Python face: what the commands do, as functions that return one frozen answer each."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any

from fluxnet.ground.diagnostic import Diagnostic, in_order, with_accepted
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.network.model import Network
from fluxnet.presenting.accepted import accepted_blocks
from fluxnet.presenting.answer import Answer
from fluxnet.presenting.records import Document

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from numpy.typing import NDArray

    from fluxnet.rates.cultivation import Mode, Phase
    from fluxnet.rates.measured import RatesTable, Run
    from fluxnet.studies.check import CheckResult
    from fluxnet.studies.closure_result import Closure
    from fluxnet.studies.compare_result import Comparison
    from fluxnet.studies.frontier_result import Frontier
    from fluxnet.studies.lump_overall import Overalls
    from fluxnet.studies.lump_result import Lumped
    from fluxnet.studies.rates import FoundRates
    from fluxnet.studies.routes_result import Routes
    from fluxnet.studies.solution import Solution

__all__ = [
    "Answer", "Model", "Network", "Rates", "check", "closure", "compare", "frontier", "lump",
    "overall", "read_cultivation", "read_model", "read_model_text", "read_rates",
    "read_rates_text", "routes", "solve", "write_model",
]

@dataclass(frozen=True)
class Model:
    """A model read without an error: its network, and what was noted on the way.

    Every function that takes a model takes a bare :class:`Network` as well.
    """

    network: Network
    diagnostics: tuple[Diagnostic, ...] = ()

    @cached_property
    def S(self) -> NDArray[np.float64]:  # noqa: N802
        """The stoichiometric matrix, species x reactions, at the parameters' values."""
        return self.network.S

    def frame(self) -> pd.DataFrame:
        """The matrix with its labels: a row a species, a column a reaction."""
        return self.network.frame()

    def elements(self) -> pd.DataFrame:
        """What a mole of each boundary species holds: a row a balance, a column a species.

        Electrons are the degree of reduction with ammonia as the reference for nitrogen. A
        balance of rates is a row times the releases (what is taken up counts negative).

        Examples
        --------
        >>> from fluxnet.cli.new import MODEL
        >>> read_model_text(MODEL).elements().loc[["C", "electrons"], ["glucose", "oxygen"]]
                   glucose  oxygen
        C              6.0     0.0
        electrons     24.0    -4.0
        """
        import pandas as pd

        from fluxnet.matrices.elements import network_elements

        held = network_elements(self.network)
        return pd.DataFrame(held.floats, index=list(held.balances), columns=list(held.species))

    def variant(self, names: str) -> Model:
        """The model with a variant, or a product of variants (``"a * b"``), applied.

        Raises
        ------
        InputError
            Where there is no such variant, or two of them clash.
        """
        from fluxnet.network.variant import apply_variant

        network, told = apply_variant(self.network, names)
        if network is None:
            raise InputError(told)
        return Model(network, (*self.diagnostics, *told))


@dataclass(frozen=True)
class Rates:
    """A rates table read without an error, and what was noted on the way."""

    table: RatesTable
    diagnostics: tuple[Diagnostic, ...] = ()

    @property
    def runs(self) -> tuple[Run, ...]:
        """The runs, in the order of the table."""
        return self.table.runs


def read_model(
    path: str | Path, *, large: bool = False, allow_use: tuple[Path, ...] = ()
) -> Model:
    """Read a ``*.flux`` file.

    Raises
    ------
    InputError
        With all findings, where the file holds errors.
    """
    from fluxnet.reading.model import read_model as read

    reading = read(path, large=large, allow_use=allow_use)
    return _model(reading.network, reading.diagnostics)


def read_model_text(text: str, *, file: str = "model.flux", folder: Path | None = None) -> Model:
    """Read a model given as text; ``folder`` is where its ``use`` lines look.

    Raises
    ------
    InputError
        With all findings, where the text holds errors.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> read_model_text(MODEL).S.shape
    (9, 6)
    """
    from fluxnet.reading.model import read_model_text as read

    reading = read(text, file=file, folder=folder)
    return _model(reading.network, reading.diagnostics)


def write_model(network: Model | Network) -> str:
    r"""The text of a network in the canonical layout: reading it gives the network again.

    Examples
    --------
    >>> text = "product CO2\nsubstrate formate, oxygen\ncompartment c\n a:formate+0.5 oxygen->CO2"
    >>> print(write_model(read_model_text(text)), end="")
    basis      mmol/g/h
    <BLANKLINE>
    product    CO2
    substrate  formate, oxygen
    <BLANKLINE>
    compartment c
        a : formate + 0.5 oxygen -> CO2
    """
    from fluxnet.reading.writer import write_model as write

    return write(_network(network))


def read_rates(
    path: str | Path, network: Model | Network | None = None, **options: Any
) -> Rates:
    """Read a rates table (CSV, TSV, XLSX), with a model's names and roles where one is given.

    ``options`` are those of :func:`fluxnet.tables.rates_table.read_rates`.

    Raises
    ------
    InputError
        With all findings, where the table holds errors.
    """
    from fluxnet.tables.rates_table import read_rates as read

    reading = read(path, network=_network_or_none(network), **options)
    return _rates(reading.table, reading.diagnostics)


def read_rates_text(
    text: str, network: Model | Network | None = None, **options: Any
) -> Rates:
    """Read a rates table given as text; as :func:`read_rates`."""
    from fluxnet.tables.rates_table import read_rates_text as read

    reading = read(text, network=_network_or_none(network), **options)
    return _rates(reading.table, reading.diagnostics)


def read_cultivation(
    path: str | Path,
    network: Model | Network | None = None,
    *,
    phases: Sequence[Phase] = (),
    mode: Mode | None = None,
) -> Answer[FoundRates]:
    """Rates from raw data as they came: a table, a workbook, or a folder of files.

    The answer can be given to :func:`closure` and :func:`solve` in place of rates.

    Raises
    ------
    InputError
        With all findings, where the data hold errors or give no rate.
    """
    from fluxnet.presenting.rates_record import rates_record
    from fluxnet.presenting.rates_screen import rates_screen
    from fluxnet.studies.rates import find_rates
    from fluxnet.tables.cultivation_tables import read_cultivation as read

    model = _network_or_none(network)
    reading = read(path, model, mode=mode)
    result = find_rates(reading.cultivations, model, phases=phases)
    told = in_order((*reading.diagnostics, *result.diagnostics))
    if not result.table.runs:
        raise InputError(told)
    screen = rates_screen(result)
    return Answer(result, Document.RATES, screen, rates_record(result), "rates", told)


def check(network: Model | Network) -> Answer[CheckResult]:
    """Check a model: is its reaction list sound?

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> check(read_model_text(MODEL)).sound
    True
    """
    from fluxnet.presenting.check_screen import check_record, check_screen
    from fluxnet.studies.check import check_network

    noted = network.diagnostics if isinstance(network, Model) else ()
    result = check_network(_network(network), noted)
    screen = check_screen(result)
    return Answer(result, Document.CHECK, screen, check_record(result), "findings")


def closure(
    rates: Rates | Answer[FoundRates],
    network: Model | Network | None = None,
    **options: Any,
) -> Answer[Closure]:
    """Do carbon, nitrogen and electrons close?

    ``options`` are those of :func:`fluxnet.studies.closure.close_rates`.

    Raises
    ------
    InputError
        Where no run can be closed: an option names what the table does not have.
    """
    from fluxnet.presenting.closure_record import closure_record
    from fluxnet.presenting.closure_screen import closure_screen
    from fluxnet.studies.closure import close_rates

    result = close_rates(rates.table, network=_network_or_none(network), **options)
    if not result.runs:
        raise InputError(result.diagnostics)
    record = closure_record(result)
    told = in_order((*_told(network), *rates.diagnostics, *result.diagnostics))
    screen = (*closure_screen(result), *accepted_blocks(told))
    return Answer(result, Document.CLOSURE, screen, record, "rates", told)


def solve(
    network: Model | Network,
    rates: Rates | Answer[FoundRates] | None = None,
    **options: Any,
) -> Answer[Solution]:
    r"""What did the cell do, or what could it do at best?

    ``options`` are those of :func:`fluxnet.studies.solve.solve_network`: ``maximise``,
    ``minimise``, ``within``, ``fraction``.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> best = solve(read_model_text(MODEL + "limit glucose <= 1\n"),
    ...              maximise="ethanol")
    >>> best.runs[0].optimum < 2  # the ATP beyond the upkeep must go into growth
    True
    """
    from fluxnet.presenting.solve_record import solve_record
    from fluxnet.presenting.solve_screen import solve_screen
    from fluxnet.rates.aligning import align_table
    from fluxnet.studies.solve import solve_network

    table = None
    also: tuple[Diagnostic, ...] = ()
    if rates is not None:
        aligned = align_table(rates.table, _network(network))
        if aligned.table is None:
            raise InputError(aligned.diagnostics)
        table, also = aligned.table, aligned.diagnostics
    result = solve_network(_network(network), table, **options)
    noted = rates.diagnostics if rates is not None else ()
    told = in_order((*_told(network), *noted, *also))
    screen = (*solve_screen(result), *accepted_blocks(told))
    record = solve_record(result)
    return Answer(result, Document.SOLVE, screen, record, "fluxes", told)


def compare(
    network: Model | Network,
    product: str,
    substrate: str,
    across: tuple[str, ...] | list[str] = (),
    reserve: str | list[str] | None = None,
    *,
    detail: tuple[str, ...] | list[str] = (),
    **options: Any,
) -> Answer[Comparison]:
    r"""What each variant can make of a substrate at most, ranked.

    ``options`` are those of :func:`fluxnet.studies.compare.compare`: ``uptake``, ``beside``,
    ``staircase``, ``measured``, ``draws``. ``detail`` names variants that are shown in full.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> more = "variant anaerobic\n    limit oxygen <= 0\n"
    >>> found = compare(read_model_text(MODEL + more), "ethanol", "glucose", draws=0)
    >>> [(a.name, a.rank, str(a.final.moles)) for a in found.abilities]
    [('base', 1, '2'), ('anaerobic', 1, '2')]
    """
    from fluxnet.presenting.compare_record import compare_record
    from fluxnet.presenting.compare_screen import compare_screen
    from fluxnet.studies.compare import compare as compare_variants

    result = compare_variants(
        _network(network), product, substrate, across, reserve, **options
    )
    told = in_order(_told(network))
    screen = (*compare_screen(result, detail=detail), *accepted_blocks(told))
    return Answer(result, Document.COMPARE, screen, compare_record(result), "variants", told)


def frontier(
    network: Model | Network,
    x: str,
    y: str | None = None,
    *,
    figure: str | Path | Sequence[str | Path] | None = None,
    **options: Any,
) -> Answer[Frontier]:
    r"""The most (or least) y for each x: all break points, exact.

    ``options`` are those of :func:`fluxnet.studies.frontier.find_frontier`: ``across``,
    ``least``, ``over``, ``start``, ``stop``, ``only``. ``figure`` is a file that it is drawn
    into, or several; those that exist are overwritten.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> model = read_model_text(MODEL + "limit glucose <= 10\n")
    >>> found = frontier(model, "mu", "ethanol")
    >>> [(round(p.x, 3), round(p.y, 2)) for p in found.curves[0].points]
    [(0.0, 1.6), (0.243, 16.67), (0.259, 16.45), (1.015, 0.0)]
    """
    from fluxnet.presenting.frontier_record import frontier_record
    from fluxnet.presenting.frontier_screen import frontier_screen
    from fluxnet.studies.frontier import find_frontier

    result = find_frontier(_network(network), x, y, **options)
    for path in (figure,) if isinstance(figure, (str, Path)) else figure or ():
        from fluxnet.presenting.frontier_figure import draw_frontier

        draw_frontier(result, Path(path), force=True)
    told = in_order(_told(network))
    screen = (*frontier_screen(result), *accepted_blocks(told))
    return Answer(result, Document.FRONTIER, screen, frontier_record(result), "points", told)


def routes(network: Model | Network, **options: Any) -> Answer[Routes]:
    r"""The elementary routes of a network: elementary flux modes, in whole numbers.

    ``options`` are those of :func:`fluxnet.studies.routes.find_routes`: ``substrate``,
    ``product``, ``best``, ``drain``, ``open_carriers``, ``keep_above``, ``memory``.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> found = routes(read_model_text(MODEL), substrate="glucose", product="ethanol")
    >>> found.count, float(found.groups[0].product_yield)
    (4, 2.0)
    """
    from fluxnet.presenting.routes_record import routes_record
    from fluxnet.presenting.routes_screen import routes_screen
    from fluxnet.studies.routes import find_routes

    result = find_routes(_network(network), **options)
    told = in_order(_told(network))
    screen = (*routes_screen(result), *accepted_blocks(told))
    return Answer(result, Document.ROUTES, screen, routes_record(result), "routes", told)


def lump(
    network: Model | Network, keep: tuple[str, ...] | list[str], *, variants: bool = True
) -> Answer[Lumped]:
    r"""A smaller model with the same net conversions of what is kept, compartment by compartment.

    ``keep`` are species, and reactions, that must stay; ``variants`` as in
    :func:`fluxnet.studies.lump.lump_network`. The answer's ``text`` is the model as a file,
    its ``network`` the same as a network.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> short = lump(read_model_text(MODEL), keep=["ethanol"])
    >>> short.eliminated, len(short.network.reactions), short.proof.verified
    (('pyruvate',), 5, True)
    """
    from fluxnet.presenting.lump_record import lump_record
    from fluxnet.presenting.lump_screen import lump_screen
    from fluxnet.studies.lump import lump_network

    result = lump_network(_network(network), keep, variants=variants)
    told = in_order(_told(network))
    screen = (*lump_screen(result), *accepted_blocks(told))
    return Answer(result, Document.LUMP, screen, lump_record(result), "lumped", told)


def overall(
    network: Model | Network, compartment: str, rates: Rates | None = None, **options: Any
) -> Answer[Overalls]:
    r"""The one reaction that a compartment makes at solved fluxes, per mol of substrate.

    ``options`` are those of :func:`solve`.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> model = read_model_text(MODEL + "limit glucose <= 2\n")
    >>> overall(model, "maintenance", maximise="mu").runs[0].text
    'maintenance : 0.2 ATP -> nothing'
    """
    from fluxnet.presenting.lump_record import overall_record
    from fluxnet.presenting.lump_screen import overall_screen
    from fluxnet.studies.lump_overall import find_overall

    solved = solve(network, rates, **options)
    result = find_overall(solved.result, compartment)
    screen = (*overall_screen(result), *accepted_blocks(solved.told))
    record = overall_record(result)
    return Answer(result, Document.LUMP, screen, record, "overall", solved.told)


def _told(network: Model | Network | None) -> tuple[Diagnostic, ...]:
    """What a report that does not check the model says of it."""
    if network is None:
        return ()
    noted = network.diagnostics if isinstance(network, Model) else ()
    return with_accepted(noted, _network(network).acceptances)


def _network(given: Model | Network) -> Network:
    """The bare network.

    Raises
    ------
    MisuseError
        Where something else was given, such as a path.
    """
    network = given.network if isinstance(given, Model) else given
    if not isinstance(network, Network):
        raise MisuseError(f"a model is needed, from read_model, not {type(given).__name__}")
    return network


def _network_or_none(given: Model | Network | None) -> Network | None:
    return None if given is None else _network(given)


def _model(network: Network | None, diagnostics: tuple[Diagnostic, ...]) -> Model:
    if network is None:
        raise InputError(diagnostics)
    return Model(network, diagnostics)


def _rates(table: RatesTable | None, diagnostics: tuple[Diagnostic, ...]) -> Rates:
    if table is None:
        raise InputError(diagnostics)
    return Rates(table, diagnostics)
