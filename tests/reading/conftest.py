"""What tests of reading share: a text that must be sound, and the faults of one that is not."""

from __future__ import annotations

from collections.abc import Callable
from textwrap import dedent

import pytest

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Severity
from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text

FERMENT = """
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
"""
HEAD = "substrate glucose\nproduct ethanol, CO2\n"


@pytest.fixture
def read() -> Callable[[str], Network]:
    """The network of a text that holds no error."""

    def read(text: str) -> Network:
        reading = read_model_text(dedent(text))
        assert reading.network is not None, [d.message for d in reading.diagnostics]
        return reading.network

    return read


@pytest.fixture
def faults() -> Callable[[str], list[Diagnostic]]:
    """The errors and warnings of a text."""

    def faults(text: str) -> list[Diagnostic]:
        found = read_model_text(dedent(text)).diagnostics
        return [d for d in found if d.severity is not Severity.NOTE]

    return faults


@pytest.fixture
def fault(faults: Callable[[str], list[Diagnostic]]) -> Callable[[str], Diagnostic]:
    """The one error or warning of a text that must hold exactly one."""

    def fault(text: str) -> Diagnostic:
        found = faults(text)
        assert len(found) == 1, [(d.name.value, d.message) for d in found]
        return found[0]

    return fault


@pytest.fixture
def reaction(read: Callable[[str], Network]) -> Callable[..., object]:
    """A reaction among made-up species without formulas: its line's own terms."""

    def reaction(line: str, *, inside: str, more: str = "") -> object:
        text = f"inside {inside}\n{more}\ncompartment c\n    {line}\n"
        network = read_model_text(text).network
        assert network is not None, [d.message for d in read_model_text(text).diagnostics]
        return network.reactions[0]

    return reaction
