"""What holds for each model in models/."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from fluxnet.ground.names import Severity
from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model
from fluxnet.studies.check import check_network

MODELS = sorted((Path(__file__).resolve().parents[2] / "models").glob("*.flux"))


@pytest.fixture(params=MODELS, ids=[path.stem for path in MODELS])
def path(request) -> Path:
    return request.param


def test_there_are_at_least_five_models():
    assert len(MODELS) >= 5


def test_the_check_finds_neither_error_nor_warning(path):
    reading = read_model(path)
    assert reading.network is not None
    result = check_network(reading.network, reading.diagnostics)
    told = [d for d in result.diagnostics if d.severity is not Severity.NOTE]
    assert told == []
    assert not result.loops
    assert not result.blocked
    assert 15 <= result.counts.reactions <= 60


def test_every_variant_is_free_of_errors(path):
    network = read_model(path).network
    assert network is not None
    for variant in network.variants:
        changed, faults = apply_variant(network, variant.name)
        assert changed is not None, faults
        assert check_network(changed, faults).sound, variant.name


def test_the_header_names_organism_sources_units_assumptions_and_fitted_numbers(path):
    header = path.read_text(encoding="utf-8").split("\nmodel", 1)[0]
    found = re.findall(r"^# (\w+)  ", header, re.MULTILINE)
    assert found == ["Organism", "Sources", "Units", "Assumptions", "Fitted"]


def test_energy_of_each_substrate_is_paid_for(path):
    # the check warns where ATP times 45 kJ/mol exceeds the Gibbs energy of its conversion; none
    # may do so in any variant
    network = read_model(path).network
    assert network is not None
    for name in ("base", *(v.name for v in network.variants)):
        changed, _ = apply_variant(network, name)
        assert changed is not None
        names = {d.name.value for d in check_network(changed).diagnostics}
        assert "too-much-energy" not in names, name
