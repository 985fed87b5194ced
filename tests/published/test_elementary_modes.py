"""The elementary modes of glycolysis with the pentose phosphate pathway.

Schuster, Fell & Dandekar 2000, Nature Biotechnology 18:326: 19 reactions, 15 balanced
metabolites, seven modes. The abstract was read; the list of reactions and the number seven are
from memory; the modes themselves were computed by exhaustive search. Whole numbers: no tolerance.
"""

from __future__ import annotations

from pathlib import Path

import fluxnet as fx

MODEL = Path(__file__).with_name("glycolysis-pentoses.flux")
CARRIERS = ("ATP", "NADH", "NADPH")

NET = [
    {"ATP": -1},
    {"G6P": -1, "ribose-5P": 1, "CO2": 1, "NADPH": 2},
    {"G6P": -1, "pyruvate": 2, "ATP": 3, "NADH": 2},
    {"G6P": -5, "ATP": -1, "ribose-5P": 6},
    {"G6P": -1, "CO2": 6, "NADPH": 12},
    {"G6P": -1, "pyruvate": 1, "ATP": 2, "NADH": 1, "CO2": 3, "NADPH": 6},
    {"G6P": -3, "pyruvate": 5, "ATP": 8, "NADH": 5, "CO2": 3, "NADPH": 6},
]

TO_CO2 = {
    "g6pdh": 6, "pgl": 6, "gnd": 6, "rpi": 2, "rpe": 4, "tk1": 2, "ta": 2, "tk2": 2, "pgi": -5,
    "ald": -1, "tpi": 1, "fbpase": 1,
}  # fmt: skip
TO_PYRUVATE = {
    "g6pdh": 3, "pgl": 3, "gnd": 3, "rpi": 1, "rpe": 2, "tk1": 1, "ta": 1, "tk2": 1, "pfk": 2,
    "ald": 2, "tpi": -2, "gapdh": 5, "pgk": 5, "pgm": 5, "eno": 5, "pyk": 5,
}  # fmt: skip


def test_there_are_seven_modes_with_these_net_reactions() -> None:
    model = fx.read_model(MODEL)
    routes = fx.routes(model, open_carriers=CARRIERS)
    balanced = {s.name for s in model.network.balanced} - set(CARRIERS)
    found = [dict(group.terms) for group in routes.groups]

    assert (len(model.network.reactions), len(balanced)) == (19, 15)
    assert routes.count == 7
    assert sorted(map(sorted, (n.items() for n in NET))) == sorted(
        map(sorted, (n.items() for n in found))
    )


def test_the_modes_to_carbon_dioxide_and_to_pyruvate_run_in_these_proportions() -> None:
    routes = fx.routes(fx.read_model(MODEL), open_carriers=CARRIERS)
    runs = {
        tuple(sorted(group.terms)): dict(routes.route(int(group.members[0]), group).reactions)
        for group in routes.groups
    }

    assert runs[tuple(sorted(NET[4].items()))] == TO_CO2
    assert runs[tuple(sorted(NET[6].items()))] == TO_PYRUVATE


def test_the_circle_of_pfk_and_fbpase_only_spends_atp() -> None:
    routes = fx.routes(fx.read_model(MODEL), open_carriers=CARRIERS)
    circle = next(group for group in routes.groups if dict(group.terms) == NET[0])

    assert routes.route(int(circle.members[0]), circle).reactions == (("pfk", 1), ("fbpase", 1))
