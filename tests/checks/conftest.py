from __future__ import annotations

from collections.abc import Callable

import pytest

from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text

HEAD = """model Invented
basis mmol/g/h
"""


def read_network(text: str) -> Network:
    """A network from its lines, which must hold no error; a blank head is put before them."""
    reading = read_model_text(HEAD + text)
    assert reading.network is not None, [d.message for d in reading.diagnostics]
    return reading.network


@pytest.fixture
def read() -> Callable[[str], Network]:
    return read_network
