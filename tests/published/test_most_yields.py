"""The most product per substrate.

The sources, and how each value was got, stand in the headers of the models beside this file.
Tolerances: 1e-4 for printed values; exact fractions to the solver's 1e-9.
"""

from __future__ import annotations

from pathlib import Path

import pytest

HERE = Path(__file__).parent

# product: mol/mol, CO2 released (+) or fixed (-), g/g where printed. Computed from degrees of
# reduction; ethanol, isobutanol and succinate were also read in print.
ELECTRON_LIMITED = {
    "ethanol": (2, 2, 0.5114),
    "lactate": (2, 0, 1.000),
    "acetate": (3, 0, 1.000),
    "succinate": (1.7143, -0.857, 1.1237),
    "butyrate": (1.2, 1.2, None),
    "butanol": (1, 2, 0.4114),
    "isobutanol": (1, 2, 0.4114),
    "propionate": (1.7143, 0.857, 0.7049),
    "2,3-butanediol": (1.0909, 1.636, 0.5457),
    "1,3-propanediol": (1.5, 1.5, 0.6336),
    "citrate": (1.3333, -2, None),
    "glutamate": (1.3333, -0.667, 1.0889),
    "lysine": (0.8571, 0.857, 0.6955),
    "3-hydroxypropionate": (2, 0, None),
    "hydrogen": (12, 6, None),
    "methane": (3, 3, None),
    "glycerol": (1.7143, 0.857, None),
    "itaconate": (1.3333, -0.667, 0.9629),
    "malate": (2, -2, None),
    "fumarate": (2, -2, None),
}


@pytest.mark.parametrize("product", ELECTRON_LIMITED)
def test_electron_limited_yield_on_glucose(ask, product):
    moles, carbon_dioxide, mass = ELECTRON_LIMITED[product]
    run = ask(HERE / "electron-limited.flux", maximise=product)
    assert run.optimum == pytest.approx(moles, abs=1e-4)
    assert run.rate("CO2") == pytest.approx(carbon_dioxide, abs=5e-4)
    if mass is not None:
        found = next(y for y in run.yields if y.product == product and y.substrate == "glucose")
        assert found.per_mass == pytest.approx(mass, abs=1e-4)


def test_lysine_by_its_pathway_stays_below_the_electron_limit(ask):
    # 6/7 C-mol/C-mol from the redox balance, 0.75 by the true pathway. A textbook's
    # page 77 (read in print); the network is models/amino-acid.flux.
    black_box = ask(HERE / "electron-limited.flux", maximise="lysine")
    assert black_box.optimum == pytest.approx(6 / 7, abs=1e-9)
    pathway = ask("amino-acid", {"glucose in": 1}, maximise="lysine")
    found = next(y for y in pathway.yields if y.product == "lysine")
    assert found.per_carbon == pytest.approx(0.75, abs=1e-9)


# variant: succinate, acetate, ethanol, net CO2 (where it is printed), all per glucose
SUCCINATE = {
    "pts * reductive": (1.0, None, None, None),
    "glk * reductive": (4 / 3, 2 / 3, 0.0, -2 / 3),
    "pts": (1.2, None, None, None),
    "glk": (12 / 7, 0.0, 0.0, -6 / 7),
}


@pytest.mark.parametrize("variant", SUCCINATE)
def test_succinate_without_air_in_four_networks(ask, variant):
    succinate, acetate, ethanol, carbon_dioxide = SUCCINATE[variant]
    run = ask(HERE / "succinate.flux", variant=variant, maximise="succinate")
    assert run.optimum == pytest.approx(succinate, abs=1e-9)
    for name, value in (("acetate", acetate), ("ethanol", ethanol), ("CO2", carbon_dioxide)):
        if value is not None:
            assert run.rate(name) == pytest.approx(value, abs=1e-7)


def test_the_third_network_reaches_its_most_succinate_with_ethanol_beside_it(ask):
    # 24 = 1.2 x 14 + 0.6 x 12 electrons; lactate could stand in the place of ethanol
    beside = {"glucose in": 1, "ethanol out": 0.6}
    run = ask(HERE / "succinate.flux", beside, variant="pts", maximise="succinate")
    assert run.optimum == pytest.approx(1.2, abs=1e-9)
    assert run.rate("CO2") == pytest.approx(0, abs=1e-7)


def test_xylose_gives_as_much_ethanol_by_mass_as_glucose(ask):
    run = ask(HERE / "xylose.flux", maximise="ethanol")
    assert run.optimum == pytest.approx(1.67, abs=0.005)
    assert run.optimum == pytest.approx(5 / 3, abs=1e-9)
    found = next(y for y in run.yields if y.product == "ethanol")
    assert found.per_mass == pytest.approx(0.51, abs=0.005)


def test_acetate_of_a_strain_that_makes_nothing_else(ask):
    # 572 mM of 333 mM glucose; each hexose gives two acetyl-CoA, two CO2 and two acetate at most.
    made = {"glucose in": 333, "acetate out": 572}
    run = ask(HERE / "homoacetate.flux", made)
    found = next(y for y in run.yields if y.product == "acetate" and y.substrate == "glucose")
    assert found.per_mole == pytest.approx(1.718, abs=5e-4)
    assert found.per_carbon == pytest.approx(0.573, abs=5e-4)
    most = ask(HERE / "homoacetate.flux", {"glucose in": 333}, maximise="acetate")
    assert most.optimum == pytest.approx(666, abs=1e-6)
    assert run.rate("acetate") / most.optimum == pytest.approx(0.859, abs=5e-4)
    # 24 - 2 x 8 electrons a hexose go to air
    assert most.rate("oxygen") == pytest.approx(666, abs=1e-6)
