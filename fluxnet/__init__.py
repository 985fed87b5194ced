"""Metabolic rates of a cultivation: closed, explained and proven from a plain-text reaction list.

>>> import fluxnet as fx
>>> callable(fx.solve)
True
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from fluxnet.api import (
        Answer,
        Model,
        Network,
        Rates,
        check,
        closure,
        compare,
        frontier,
        lump,
        overall,
        read_cultivation,
        read_model,
        read_model_text,
        read_rates,
        read_rates_text,
        routes,
        solve,
        write_model,
    )
    from fluxnet.ground.errors import FluxnetError, InputError, MisuseError

__version__ = "0.1.0"

__all__ = [
    "Answer",
    "FluxnetError",
    "InputError",
    "MisuseError",
    "Model",
    "Network",
    "Rates",
    "__version__",
    "check",
    "closure",
    "compare",
    "frontier",
    "lump",
    "overall",
    "read_cultivation",
    "read_model",
    "read_model_text",
    "read_rates",
    "read_rates_text",
    "routes",
    "solve",
    "write_model",
]

_HOMES = dict.fromkeys(("FluxnetError", "InputError", "MisuseError"), "fluxnet.ground.errors")


def __getattr__(name: str) -> Any:
    """Import a public name when it is first used, so that ``import fluxnet`` costs nothing."""
    if name not in __all__:
        raise AttributeError(f"module 'fluxnet' has no attribute {name!r}")
    return getattr(import_module(_HOMES.get(name, "fluxnet.api")), name)


def __dir__() -> list[str]:
    return __all__
