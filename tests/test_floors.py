"""The house has floors: imports run down, and third-party packages keep to their room."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent / "fluxnet"

FLOOR = {
    "ground": 0,
    "chemistry": 1, "exact": 1,
    "network": 2, "rates": 2,
    "reading": 3, "tables": 3, "matrices": 3,
    "solving": 4, "modes": 4,
    "checks": 5, "cultivation": 5,
    "studies": 6,
    "presenting": 7,
    "api": 8, "cli": 8,
}  # fmt: skip

# Folders on one floor do not import one another; these pairs stand as the listed exceptions:
# a run is told in terms of the network's quantities.
SAME_FLOOR = {("rates", "network"), ("cli", "api")}

# Third-party packages and the only rooms that may import them. numpy is at home from floor 2 up.
ROOMS = {
    "lark": {"reading"},
    "flint": {"exact"},
    "highspy": {"solving"},
    "daqp": {"solving"},
    "networkx": {"checks/graph.py"},
    "pandas": {
        "tables", "ground/table.py", "network/matrix.py", "network/model.py",
        "presenting/answer.py", "api",
    },
    "python_calamine": {"tables"},
    "pint": {"chemistry/units.py", "chemistry"},
    "rich": {"presenting/terminal.py", "cli"},
    "xlsxwriter": {"presenting"},
    "matplotlib": {"presenting"},
    "scipy": {"cultivation"},
    "numpy": {
        "network/matrix.py", "network/model.py", "rates", "tables", "matrices", "solving", "modes",
        "checks", "cultivation", "studies", "presenting", "api",
    },
}


def modules() -> list[Path]:
    return [p for p in sorted(ROOT.rglob("*.py")) if "_packed" not in p.parts]


def imports(path: Path) -> Iterator[tuple[str, int]]:
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from ((alias.name, node.lineno) for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.module:
            assert node.level == 0, f"{path} line {node.lineno}: imports are written in full"
            yield node.module, node.lineno


def room(path: Path) -> str:
    parts = path.relative_to(ROOT).parts
    return parts[0].removesuffix(".py")


@pytest.mark.parametrize("path", modules(), ids=lambda p: p.relative_to(ROOT).as_posix())
def test_a_file_imports_only_from_lower_floors_and_its_own_folder(path: Path) -> None:
    here = room(path)
    if here in ("__init__", "__main__"):
        return
    for name, line in imports(path):
        parts = name.split(".")
        if parts[0] != "fluxnet" or len(parts) == 1:
            continue
        there = parts[1]
        allowed = (
            there == here or FLOOR[there] < FLOOR[here] or (here, there) in SAME_FLOOR
        )

        assert allowed, f"{path.name} line {line}: {here} imports {there}"


@pytest.mark.parametrize("path", modules(), ids=lambda p: p.relative_to(ROOT).as_posix())
def test_a_third_party_package_is_imported_only_in_its_room(path: Path) -> None:
    place = path.relative_to(ROOT).as_posix()
    for name, line in imports(path):
        package = name.split(".")[0]
        if package in ROOMS:
            rooms = ROOMS[package]

            assert place in rooms or room(path) in rooms, f"{place} line {line} imports {package}"


def test_every_folder_has_a_floor() -> None:
    folders = {p.name for p in ROOT.iterdir() if p.is_dir() and (p / "__init__.py").exists()}

    assert folders <= set(FLOOR)
