"""Exceptions: misuse of the Python interface, and input that cannot be read at all."""

from __future__ import annotations

from fluxnet.ground.diagnostic import Diagnostic

__all__ = ["FluxnetError", "InputError", "MisuseError"]


class FluxnetError(Exception):
    """Base of all that fluxnet raises on purpose."""


class MisuseError(FluxnetError, ValueError):
    """The Python interface was called with arguments that make no question."""


class InputError(FluxnetError, ValueError):
    """An input holds errors, so that no value can be made of it.

    Raised only by the convenience functions of the Python interface; the floors below
    return their diagnostics instead.
    """

    def __init__(self, diagnostics: tuple[Diagnostic, ...]) -> None:
        self.diagnostics = diagnostics
        super().__init__("; ".join(d.message for d in diagnostics))
