"""The files that travel with the package: grammar, models, examples."""

from __future__ import annotations

from pathlib import Path

__all__ = ["resource_folder"]

_PACKAGE = Path(__file__).resolve().parent.parent


def resource_folder(name: str) -> Path:
    """The folder ``grammar``, ``models`` or ``examples``: as installed, else of the checkout.

    Raises
    ------
    FileNotFoundError
        Where neither is there: the installation is broken.

    Examples
    --------
    >>> (resource_folder("models") / "yeast.flux").is_file()
    True
    """
    for folder in (_PACKAGE / "_packed" / name, _PACKAGE.parent / name):
        if folder.is_dir():
            return folder
    raise FileNotFoundError(f"the installation lacks its folder {name}")
