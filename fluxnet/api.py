"""The Python face: what the commands do, as functions that return one frozen answer each."""

from __future__ import annotations

import io
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any, Generic, TypeVar

from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.ground.table import Table
from fluxnet.network.model import Network
from fluxnet.presenting.records import Document, document_text
from fluxnet.presenting.screen import Block, screen_tables

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from numpy.typing import NDArray

    from fluxnet.rates.measured import RatesTable, Run
    from fluxnet.studies.check import CheckResult
    from fluxnet.studies.closure_result import Closure
    from fluxnet.studies.solution import Solution

__all__ = [
    "Answer", "Model", "Rates", "check", "closure", "read_model", "read_model_text",
    "read_rates", "read_rates_text", "solve",
]

Result = TypeVar("Result")


@dataclass(frozen=True)
class Model:
    """A model read without an error: its network, and what was noted on the way."""

    network: Network
    diagnostics: tuple[Diagnostic, ...] = ()

    @cached_property
    def S(self) -> NDArray[np.float64]:  # noqa: N802
        """The stoichiometric matrix, species x reactions, at the parameters' values."""
        from fluxnet.matrices.stoichiometry import parameter_values, stoichiometry

        values = {name: float(v) for name, v in parameter_values(self.network).items()}
        matrix = stoichiometry(self.network).floats(values)
        matrix.setflags(write=False)
        return matrix

    def frame(self) -> pd.DataFrame:
        """The matrix with its labels: a row a species, a column a reaction."""
        import pandas as pd

        species = [s.name for s in self.network.species]
        return pd.DataFrame(
            self.S, index=species, columns=[r.name for r in self.network.reactions]
        )

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


@dataclass(frozen=True)
class Answer(Generic[Result]):
    """One result with its faces: data, frame, JSON, terminal, notebook.

    ``result`` is the study's frozen result; its fields can be had from the answer directly.
    """

    result: Result
    document: Document
    screen: tuple[Block, ...] = field(repr=False)
    record: Mapping[str, Any] = field(repr=False)
    main: str = field(repr=False)
    told: tuple[Diagnostic, ...] = field(default=(), repr=False)

    def __getattr__(self, name: str) -> Any:
        if name.startswith("__"):
            raise AttributeError(name)
        return getattr(self.result, name)

    @property
    def tables(self) -> Mapping[str, Table]:
        """All tables that it shows, by key."""
        return {table.key: table for table in screen_tables(self.screen)}

    def to_frame(self, key: str | None = None) -> pd.DataFrame:
        """One of its tables as a pandas frame, at full precision.

        By default the main one, or the first where the answer has no such table: an infeasible
        solve has an overview and no fluxes.

        Raises
        ------
        MisuseError
            Where there is no table of that key.
        """
        tables = self.tables
        wanted = key or (self.main if self.main in tables else next(iter(tables), ""))
        if wanted not in tables:
            raise MisuseError(f"there is no table {wanted!r}; there are {', '.join(tables)}")
        return tables[wanted].to_frame()

    def to_json(self) -> str:
        """The document that ``--json`` prints; what came from no file has no ``inputs``."""
        return document_text(self.document, (), self.told, self.record)

    def __str__(self) -> str:
        from fluxnet.presenting.terminal import Terminal

        stream = io.StringIO()
        Terminal.text(stream).show(self.screen)
        return stream.getvalue()

    def __repr__(self) -> str:
        return str(self)

    def _repr_html_(self) -> str:
        from fluxnet.presenting.notebook import screen_html

        return screen_html(self.screen)

    def __rich_console__(self, console: object, options: Any) -> Iterator[object]:
        from fluxnet.presenting.terminal import rich_text

        yield rich_text(self.screen, options.max_width)


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


def read_rates(path: str | Path, model: Model | None = None, **options: Any) -> Rates:
    """Read a rates table (CSV, TSV, XLSX), with a model's names and roles where one is given.

    ``options`` are those of :func:`fluxnet.tables.rates_table.read_rates`.

    Raises
    ------
    InputError
        With all findings, where the table holds errors.
    """
    from fluxnet.tables.rates_table import read_rates as read

    reading = read(path, network=_network(model), **options)
    return _rates(reading.table, reading.diagnostics)


def read_rates_text(text: str, model: Model | None = None, **options: Any) -> Rates:
    """Read a rates table given as text; as :func:`read_rates`."""
    from fluxnet.tables.rates_table import read_rates_text as read

    reading = read(text, network=_network(model), **options)
    return _rates(reading.table, reading.diagnostics)


def check(model: Model) -> Answer[CheckResult]:
    """Check a model: is its reaction list sound?"""
    from fluxnet.presenting.check_screen import check_record, check_screen
    from fluxnet.studies.check import check_network

    result = check_network(model.network, model.diagnostics)
    screen = check_screen(result)
    return Answer(result, Document.CHECK, screen, check_record(result), "findings")


def closure(rates: Rates, model: Model | None = None, **options: Any) -> Answer[Closure]:
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

    result = close_rates(rates.table, network=_network(model), **options)
    if not result.runs:
        raise InputError(result.diagnostics)
    record = closure_record(result)
    told = in_order((*_told(model), *rates.diagnostics, *result.diagnostics))
    return Answer(result, Document.CLOSURE, closure_screen(result), record, "rates", told)


def solve(model: Model, rates: Rates | None = None, **options: Any) -> Answer[Solution]:
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
        aligned = align_table(rates.table, model.network)
        if aligned.table is None:
            raise InputError(aligned.diagnostics)
        table, also = aligned.table, aligned.diagnostics
    result = solve_network(model.network, table, **options)
    told = in_order((*_told(model), *(rates.diagnostics if rates is not None else ()), *also))
    screen, record = solve_screen(result), solve_record(result)
    return Answer(result, Document.SOLVE, screen, record, "fluxes", told)


def _told(model: Model | None) -> tuple[Diagnostic, ...]:
    return () if model is None else model.diagnostics


def _network(model: Model | None) -> Network | None:
    return None if model is None else model.network


def _model(network: Network | None, diagnostics: tuple[Diagnostic, ...]) -> Model:
    if network is None:
        raise InputError(diagnostics)
    return Model(network, diagnostics)


def _rates(table: RatesTable | None, diagnostics: tuple[Diagnostic, ...]) -> Rates:
    if table is None:
        raise InputError(diagnostics)
    return Rates(table, diagnostics)
