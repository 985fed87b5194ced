from __future__ import annotations

from fluxnet.ground.names import Name
from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model_text
from fluxnet.studies.check import CheckResult, check_network

TEXT = """
substrate glucose
product ethanol
exchange CO2
carrier NADH
inside pyruvate, lactate
compartment a
    g : glucose -> 2 pyruvate + 2 NADH
    f : pyruvate + NADH -> ethanol + CO2
variant sour
    add to a
        l : pyruvate + NADH -> lactate  accept blocked-reaction: not yet drained
"""


def checked(variant: str) -> CheckResult:
    reading = read_model_text(TEXT)
    assert reading.network is not None, reading.diagnostics
    network, told = apply_variant(reading.network, variant)
    assert network is not None, told
    return check_network(network, reading.diagnostics)


def test_an_acceptance_inside_a_variant_is_not_unused_in_the_base() -> None:
    assert Name.ACCEPT_UNUSED not in [d.name for d in checked("base").diagnostics]


def test_an_acceptance_inside_a_variant_is_told_as_unused_where_it_meets_nothing() -> None:
    # The dead end is told at lactate, and the reaction with it: nothing is left to accept.
    names = [d.name for d in checked("sour").diagnostics]

    assert Name.DEAD_END in names
    assert Name.ACCEPT_UNUSED in names
