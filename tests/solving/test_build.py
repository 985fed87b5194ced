"""Which rows a problem has, with which bounds."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, Direction, Quantity, QuantityKind
from fluxnet.solving.build import build_problem, quantity_row, rebuild
from fluxnet.solving.problem import RowKind
from fluxnet.solving.quantities import ash_key, derivative_frame

YEAST = """
substrate glucose, oxygen
product ethanol
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate
parameter PO 1.4 0.2
parameter K_X 2 0.3
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
adh : pyruvate + NADH <-> ethanol + CO2
oxphos : NADH + 0.5 oxygen -> PO ATP
growth : 0.2 glucose + K_X ATP -> X + 0.2 CO2
upkeep : ATP -> nothing
"""
GLUCOSE = Quantity(QuantityKind.RATE, "glucose", Direction.IN)
MU = Quantity(QuantityKind.MU)


def named(built, name, kind=None):
    rows = built.problem.rows
    found = [i for i, r in enumerate(rows) if r.name == name and kind in (None, r.kind)]
    return found[0] if len(found) == 1 else found


def bounds(built, i):
    return built.problem.row_low[i], built.problem.row_high[i]


def test_balanced_species_have_rows_that_are_zero_and_no_boundary_species_has(make_network):
    built = build_problem(make_network(YEAST))
    balances = [r.name for r in built.problem.rows if r.kind is RowKind.BALANCE]
    assert balances == ["ATP", "NADH", "pyruvate"]
    for name in balances:
        assert bounds(built, named(built, name, RowKind.BALANCE)) == (0, 0)
    atp = built.problem.matrix[named(built, "ATP")]
    assert atp.tolist() == [2, 0, 1.4, -2, -1]


def test_role_rows_give_magnitudes_in_the_direction_of_the_role(make_network):
    built = build_problem(make_network(YEAST))
    glucose, co2 = named(built, "glucose"), named(built, "CO2")
    assert built.problem.matrix[glucose].tolist() == [1, 0, 0, 0.2, 0]
    assert bounds(built, glucose) == (0, np.inf)
    assert built.problem.matrix[co2].tolist() == [0, 1, 0, 0.2, 0]
    assert bounds(built, co2) == (-np.inf, np.inf)


def test_irreversible_reactions_start_at_zero(make_network):
    built = build_problem(make_network(YEAST))
    assert built.problem.column_low.tolist() == [0, -np.inf, 0, 0, 0]


def test_a_limit_is_a_row_named_as_it_is_written(make_network):
    built = build_problem(
        make_network(YEAST, ("oxygen <= 8", "CO2 in <= 1", "upkeep >= 0.5", "mu = 0.1"))
    )
    names = [r.name for r in built.problem.rows if r.kind is RowKind.LIMIT]
    assert names == [
        "limit oxygen <= 8", "limit CO2 in <= 1", "limit upkeep >= 0.5", "limit mu = 0.1",
    ]
    co2 = named(built, "limit CO2 in <= 1")
    assert built.problem.matrix[co2].tolist() == [0, -1, 0, -0.2, 0]
    assert bounds(built, co2) == (-np.inf, 1)


def test_mu_counts_dry_weight_with_its_ash(make_network):
    network = make_network(YEAST, ash="0.08")
    built = build_problem(network)
    row = quantity_row(network, built.stoichiometry, MU, {})
    mass = (12.011 + 1.8 * 1.008 + 0.5 * 15.999 + 0.2 * 14.007) / 0.92
    assert row == pytest.approx([0, 0, 0, mass / 1000, 0], rel=1e-12)
    bare = quantity_row(network, built.stoichiometry, MU, {ash_key("X"): 0.0})
    assert bare[3] == pytest.approx(0.92 * mass / 1000, rel=1e-12)


def test_a_measured_value_is_without_bounds_until_it_is_held_within_its_sd(make_network, make_run):
    network = make_network(YEAST)
    run = make_run(network, "glucose in 2 ± 0.1", "mu 0.1 ± 0", "ethanol out")
    soft = build_problem(network, run)
    i, mu = named(soft, "glucose in"), named(soft, "mu")
    assert bounds(soft, i) == (-np.inf, np.inf)
    assert bounds(soft, mu) == (0.1, 0.1)
    assert soft.measured == (i,)
    assert (soft.problem.rows[i].value, soft.problem.rows[i].sd) == (2.0, 0.1)
    assert soft.left_free == ("oxygen", "ethanol", "CO2")
    hard = build_problem(network, run, within=2)
    assert bounds(hard, i) == pytest.approx((1.8, 2.2))
    assert bounds(hard, mu) == (0.1, 0.1)


def test_a_row_of_the_run_replaces_a_measured_value_of_the_model(make_network, make_run):
    network = make_network(YEAST, ("upkeep = 1.2 ± 0.3", "glucose = 2 ± 0.1"))
    built = build_problem(network, make_run(network, "glucose in 3 ± 0.2"))
    assert [str(x.quantity) for x in built.replaced] == ["glucose in"]
    kept = named(built, "limit upkeep = 1.2 ± 0.3")
    assert built.problem.rows[kept].kind is RowKind.MEASURED_LIMIT
    assert built.measured_values.tolist() == [3.0, 1.2]
    assert [n.name.value for n in built.notes] == ["limit-replaced"]


def test_measured_mu_replaces_the_measured_rate_of_the_only_biomass(make_network, make_run):
    network = make_network(YEAST, ("X = 3 ± 0.1",))
    built = build_problem(network, make_run(network, "mu 0.1 ± 0.01"))
    assert len(built.replaced) == 1
    assert "X" not in built.left_free


def test_a_run_in_amounts_keeps_only_limits_of_zero_and_ratios(make_network, make_run):
    network = make_network(
        YEAST, ("oxygen <= 0", "glucose <= 9", "upkeep = 1.2 ± 0.3", "CO2 / glucose <= 2")
    )
    run = make_run(network, "glucose in 100 ± 2", basis=Basis.AMOUNT)
    built = build_problem(network, run)
    kept = [r.name for r in built.problem.rows if r.kind is RowKind.LIMIT]
    assert sorted(set(kept)) == ["limit CO2 out / glucose <= 2", "limit oxygen <= 0"]
    assert [str(x.quantity) for x in built.left_out] == ["glucose in", "flux upkeep"]
    assert "oxygen" not in built.left_free
    with pytest.raises(MisuseError, match="mu"):
        build_problem(network, make_run(network, "mu 0.1 ± 0.01", basis=Basis.AMOUNT))


def test_no_growth_stays_no_growth_in_amounts(make_network, make_run):
    network = make_network(YEAST, ("mu <= 0",))
    built = build_problem(network, make_run(network, "glucose in 1 ± 0.1", basis=Basis.AMOUNT))
    i = named(built, "limit mu <= 0")
    assert built.problem.matrix[i].tolist() == [0, 0, 0, 1, 0]
    assert bounds(built, i) == (-np.inf, 0)
    assert built.left_out == ()


def test_limits_between_zero_and_a_number_keep_their_zero_in_amounts(make_network, make_run):
    network = make_network(YEAST, ("adh between 0 and 5",))
    built = build_problem(network, make_run(network, "glucose in 1 ± 0.1", basis=Basis.AMOUNT))
    assert bounds(built, named(built, "limit adh between 0 and 5")) == (0, np.inf)
    assert len(built.left_out) == 1


def test_a_ratio_is_linear_and_its_sd_grows_with_the_measured_denominator(make_network, make_run):
    network = make_network(YEAST, ("CO2 / oxygen = 1.05 ± 0.03",))
    built = build_problem(network, make_run(network, "oxygen in 4 ± 0.2"))
    i = named(built, "limit CO2 out / oxygen = 1.05 ± 0.03")
    row = built.problem.rows[i]
    assert built.problem.matrix[i].tolist() == pytest.approx([0, 1, -0.525, 0.2, 0])
    assert (row.value, row.ratio, row.denominator) == (0.0, 1.05, 4.0)
    assert row.sd == pytest.approx(0.12)
    assert built.estimated == ()
    assert built.covariance[1, 1] == pytest.approx(0.12**2)


def test_a_ratio_without_a_measured_denominator_says_so_until_rebuilt(make_network, make_run):
    network = make_network(YEAST, ("CO2 / oxygen = 1.05 ± 0.03",))
    built = build_problem(network, make_run(network, "glucose in 2 ± 0.1"))
    (i,) = built.estimated
    oxygen = Quantity(QuantityKind.RATE, "oxygen", Direction.IN)
    again = rebuild(built, denominators={oxygen: 5.0})
    assert again.estimated == ()
    assert again.problem.rows[i].sd == pytest.approx(0.15)
    assert again.covariance[again.measured.index(i), again.measured.index(i)] == pytest.approx(
        0.0225
    )
    assert np.array_equal(again.problem.matrix, built.problem.matrix)


def test_a_measured_ratio_held_within_its_sd_is_exact_whatever_the_denominator(
    make_network, make_run
):
    network = make_network(YEAST)
    run = make_run(network, "CO2 out / oxygen in 1 ± 0.1")
    built = build_problem(network, run, within=2)
    pair = [
        i for i, r in enumerate(built.problem.rows)
        if r.kind is RowKind.MEASUREMENT and r.value is None
    ]
    low, high = (built.problem.matrix[i] for i in pair)
    v = np.array([0, 1.19, 2.0, 0, 0])
    assert low @ v >= built.problem.row_low[pair[0]]
    assert high @ v <= built.problem.row_high[pair[1]]
    v = np.array([0, 1.21, 2.0, 0, 0])
    assert high @ v > built.problem.row_high[pair[1]]


def test_a_one_sided_ratio_keeps_a_denominator_that_could_turn_round_from_doing_so(make_network):
    built = build_problem(make_network(YEAST, ("ethanol / CO2 out <= 2",)))
    ratio, guard = named(built, "limit ethanol / CO2 out <= 2")
    assert bounds(built, ratio) == (-np.inf, 0)
    assert built.problem.matrix[guard].tolist() == [0, 1, 0, 0.2, 0]
    assert bounds(built, guard) == (0, np.inf)
    sure = build_problem(make_network(YEAST, ("ethanol / glucose <= 2",)))
    assert isinstance(named(sure, "limit ethanol / glucose <= 2"), int)


@pytest.mark.parametrize("name", ["PO", "K_X", "ash X"])
def test_the_derivative_of_a_frame_is_a_difference_quotient(make_network, make_run, name):
    network = make_network(
        YEAST, ("CO2 / oxygen = 1.05 ± 0.03", "mu <= 0.3"), ash="0.08", ash_sd="0.01"
    )
    built = build_problem(network, make_run(network, "glucose in 2 ± 0.1", "mu 0.1 ± 0.01"))
    step = 1e-5
    up = rebuild(built, {name: built.values[name] + step}).problem.matrix
    down = rebuild(built, {name: built.values[name] - step}).problem.matrix
    frame = derivative_frame(built.network, built.stoichiometry, built.values, built.basis, name)
    derived = np.array([
        frame.balance(row.name) if row.quantity is None else frame.row(row.quantity, row.ratio)
        for row in built.problem.rows
    ])  # fmt: skip
    assert derived == pytest.approx((up - down) / (2 * step), abs=1e-9)
    assert np.abs(derived).max() > 0


def test_uncertain_numbers_are_those_that_the_rows_depend_on(make_network, make_run):
    network = make_network(YEAST + "parameter unused 1 0.1\n", ash="0.08", ash_sd="0.01")
    run = make_run(network, "glucose in 2 ± 0.1")
    assert [u.name for u in build_problem(network, run).uncertain] == ["PO", "K_X"]
    run = make_run(network, "mu 0.1 ± 0.01")
    assert [u.name for u in build_problem(network, run).uncertain] == ["PO", "K_X", "ash X"]


def test_the_covariance_of_a_run_follows_its_rows(make_network, make_run):
    network = make_network(YEAST, ("upkeep = 1.2 ± 0.3",))
    covariance = np.array([[0.04, 0, 0.006], [0, 0, 0], [0.006, 0, 0.01]])
    run = make_run(
        network, "glucose in 2 ± 0.2", "mu 0.1 ± 0", "ethanol out 3 ± 0.1", covariance=covariance
    )
    built = build_problem(network, run)
    expected = [[0.04, 0.006, 0], [0.006, 0.01, 0], [0, 0, 0.09]]
    assert built.covariance == pytest.approx(np.array(expected))


def test_rates_that_count_carbon_are_read_in_carbon(make_network, make_run):
    network = make_network(YEAST, basis=Basis.CARBON)
    built = build_problem(network)
    row = quantity_row(network, built.stoichiometry, GLUCOSE, {})
    assert row.tolist() == pytest.approx([6, 0, 0, 1.2, 0])
    assert quantity_row(network, built.stoichiometry, MU, {}).tolist() == [0, 0, 0, 1, 0]


def test_what_the_model_does_not_have_cannot_be_asked_for(make_network, make_run):
    network = make_network(YEAST)
    built = build_problem(network)
    for quantity in (
        Quantity(QuantityKind.FLUX, "nowhere"),
        Quantity(QuantityKind.RATE, "nowhere", Direction.OUT),
    ):
        with pytest.raises(MisuseError, match="nowhere"):
            quantity_row(network, built.stoichiometry, quantity, {})
    with pytest.raises(MisuseError, match="parameter"):
        build_problem(network, values={"nothing_such": 1.0})
    with pytest.raises(MisuseError, match="no number"):
        build_problem(network, make_run(network, "glucose in nan ± 0.1"))
    with pytest.raises(MisuseError, match="within"):
        build_problem(network, within=float("nan"))


def test_ratios_count_moles_also_where_rates_count_carbon(make_network, make_run):
    network = make_network(YEAST, ("ethanol / glucose = 1.8 ± 0.1",), basis=Basis.CARBON)
    built = build_problem(network, make_run(network, "glucose in 3 ± 0.2"))
    i = named(built, "limit ethanol / glucose = 1.8 ± 0.1")
    # One ethanol a pass of adh, one glucose a pass of glycolysis, whatever carbon they hold.
    assert built.problem.matrix[i].tolist() == pytest.approx([-1.8, 1, 0, -0.36, 0])
    row = built.problem.rows[i]
    assert row.denominator == pytest.approx(0.5)  # 3 C-mol of glucose
    assert row.sd == pytest.approx(0.05)


def test_a_measured_ratio_over_a_rate_that_a_limit_closes_is_left_out_and_told(make_network):
    lines = "substrate oxygen\nexchange CO2\na : oxygen -> CO2"
    open_ = make_network(lines, ("CO2 / oxygen = 1.05 ± 0.03",))
    closed = make_network(lines, ("oxygen <= 0", "CO2 / oxygen = 1.05 ± 0.03"))

    assert build_problem(open_).left_out == ()
    built = build_problem(closed)
    assert [row.ratio for row in built.problem.rows if row.ratio is not None] == []
    assert [str(limit.quantity) for limit in built.left_out] == ["CO2 out / oxygen in"]
    (note,) = built.notes
    assert note.name is Name.LIMIT_LEFT_OUT
    assert "a limit closes oxygen in" in note.message
