"""Options that commands share, and where results go."""

from __future__ import annotations

import argparse
from pathlib import Path

__all__ = ["add_model_argument", "add_output_options", "add_table_options"]


def add_output_options(parser: argparse.ArgumentParser) -> None:
    """Where and how results are given."""
    group = parser.add_argument_group("output")
    group.add_argument("--json", action="store_true", help="results as data, to standard output")
    group.add_argument("--csv", metavar="DIR", type=Path, help="every table as a CSV file in DIR")
    group.add_argument("--xlsx", metavar="FILE", type=Path, help="every table as a workbook")
    group.add_argument("--quiet", "-q", action="store_true", help="the verdict only")
    group.add_argument("--force", "-f", action="store_true", help="overwrite files that exist")
    group.add_argument("--no-color", action="store_true", help="no colour")
    group.add_argument("--all", action="store_true", help="show every finding, not the first 20")


def add_model_argument(parser: argparse.ArgumentParser, *, optional: bool = False) -> None:
    """The model file and how it may be read."""
    if optional:
        parser.add_argument("--model", metavar="MODEL", help="a reaction list (*.flux)")
    else:
        parser.add_argument("model", metavar="MODEL", help="a reaction list (*.flux), or -")
    parser.add_argument(
        "--allow-use", metavar="PATH", type=Path, action="append", default=[],
        help="a folder outside the model's own that `use` may reach into",
    )  # fmt: skip
    parser.add_argument("--large", action="store_true", help="read files of over 20,000 lines")


def add_table_options(parser: argparse.ArgumentParser) -> None:
    """How a rates table is read."""
    group = parser.add_argument_group("rates table")
    group.add_argument(
        "--run", metavar="R", action="append", default=[], help="these runs only: --run A,B"
    )
    group.add_argument(
        "--unmeasured", metavar="NAME", action="append", default=[],
        help="as if this rate were blank: exchanged, but not measured",
    )  # fmt: skip
    group.add_argument("--sheet", help="the sheet of a workbook")
    group.add_argument("--decimal", choices=("point", "comma"), help="the decimal sign")
    group.add_argument("--separator", choices=("comma", "semicolon", "tab"), help="of columns")
    group.add_argument(
        "--sd", metavar="PERCENT", type=float, default=5.0,
        help="sd where none is given, in per cent of the value (5)",
    )  # fmt: skip
    group.add_argument(
        "--sd-floor", metavar="PERCENT", type=float, default=0.5,
        help="least such sd, in per cent of the run's largest rate (0.5)",
    )  # fmt: skip
