from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.cli.new import MODEL
from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind
from fluxnet.reading.model import read_model_text
from fluxnet.studies.aims import Sense, read_aim
from fluxnet.studies.solve import solve_network


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
        ("flux oxphos", Quantity(QuantityKind.FLUX, "oxphos")),
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


def test_a_difference_is_read_and_told(network: Network) -> None:
    aim = read_aim("ethanol - 2 X + mu", Sense.MAXIMISE, network)

    assert [weight for weight, _ in aim.terms] == [1, -2, 1]
    assert str(aim) == "maximise ethanol out - 2 X out + mu"
    assert str(read_aim("-3 X", Sense.MINIMISE, network)) == "minimise -3 X out"


@pytest.mark.parametrize("text", ["ethnol", "pyruvate", "", "ethanol lactate"])
def test_what_is_no_aim_is_refused_with_a_reason(network: Network, text: str) -> None:
    with pytest.raises(MisuseError, match=r"near to it are ethanol|inside species|an aim is"):
        read_aim(text, Sense.MAXIMISE, network)


@pytest.mark.parametrize("weight", ["1e30", "1e-30", "9999999999", "1/9999999999"])
def test_a_weight_beside_which_the_rest_vanishes_is_refused(network: Network, weight: str) -> None:
    with pytest.raises(MisuseError, match="out of reach"):
        read_aim(f"{weight} ethanol + X", Sense.MAXIMISE, network)


@pytest.mark.parametrize("weight", ["1/0", "1e9999999999", "1e-400", "nan", "9" * 5000, "٣"])
def test_a_weight_that_is_no_number_is_refused(network: Network, weight: str) -> None:
    with pytest.raises(MisuseError, match="an aim is a name"):
        read_aim(f"{weight} ethanol", Sense.MAXIMISE, network)


def test_weights_may_be_fractions_negative_or_zero(network: Network) -> None:
    aim = read_aim("1/3 ethanol + -2 X + 0 mu", Sense.MAXIMISE, network)

    assert [weight for weight, _ in aim.terms] == [Fraction(1, 3), -2, 0]


def test_rates_are_not_held_within_a_number_of_sd_that_holds_nothing(network: Network) -> None:
    with pytest.raises(MisuseError, match="hold nothing"):
        solve_network(network, maximise="mu", within=1e20)


def test_a_sum_of_rates_and_mu_tells_the_unit_of_each_of_its_terms(network: Network) -> None:
    limited = read_model_text(MODEL + "limit glucose <= 1\n").network
    assert limited is not None
    (run,) = solve_network(limited, maximise="2 ethanol + mu").runs
    assert f"{run.optimum:.4g} (ethanol out in mmol/g/h, mu in 1/h)." in run.words
    assert run.bill is not None
    assert run.bill.unit == "(ethanol out in mmol/g/h, mu in 1/h)"
    assert any(limit.unit == "of the sum per mmol/g/h glucose" for limit in run.limits)
