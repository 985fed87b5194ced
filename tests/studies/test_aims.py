from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.cli.new import MODEL
from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind
from fluxnet.reading.model import read_model_text
from fluxnet.studies.aims import Sense, read_aim


@pytest.fixture(scope="module")
def network() -> Network:
    network = read_model_text(MODEL).network
    assert network is not None
    return network


@pytest.mark.parametrize(
    ("text", "quantity"),
    [
        ("ethanol", Quantity(QuantityKind.RATE, "ethanol", Direction.OUT)),
        ("glucose", Quantity(QuantityKind.RATE, "glucose", Direction.IN)),
        ("in CO2", Quantity(QuantityKind.RATE, "CO2", Direction.IN)),
        ("CO2 in", Quantity(QuantityKind.RATE, "CO2", Direction.IN)),
        ("mu", Quantity(QuantityKind.MU)),
        ("oxphos", Quantity(QuantityKind.FLUX, "oxphos")),
        ("ATP", Quantity(QuantityKind.SURPLUS, "ATP")),
    ],
)
def test_a_name_stands_for_its_usual_quantity(
    network: Network, text: str, quantity: Quantity
) -> None:
    assert read_aim(text, Sense.MAXIMISE, network).terms == ((Fraction(1), quantity),)


def test_a_weighted_sum_is_read(network: Network) -> None:
    aim = read_aim("2.5 ethanol + X", Sense.MINIMISE, network)

    assert [weight for weight, _ in aim.terms] == [Fraction(5, 2), 1]
    assert str(aim) == "minimise 5/2 ethanol out + X out"


@pytest.mark.parametrize("text", ["ethnol", "pyruvate", "", "ethanol lactate"])
def test_what_is_no_aim_is_refused_with_a_reason(network: Network, text: str) -> None:
    with pytest.raises(MisuseError, match=r"near to it are ethanol|inside species|an aim is"):
        read_aim(text, Sense.MAXIMISE, network)
