"""The answer of a Python function: one frozen result with all its faces."""

from __future__ import annotations

import io
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any, Generic, TypeVar

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.table import Table
from fluxnet.presenting.records import Document, document_text
from fluxnet.presenting.screen import Block, screen_tables

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["Answer"]

Result = TypeVar("Result")


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
