"""Plans as a whole: from nothing, beside runs already made, and how many are enough."""

from __future__ import annotations

import numpy as np
import pytest

import knought as kn
from knought.discussion.next_runs import Plan, plan
from knought.discussion.runs_curve import runs_curve

CELSIUS = np.array([15.0, 25.0, 35.0, 45.0, 55.0]) + 273.15
STRENGTHS = [0.005, 0.01, 0.02, 0.05, 0.1]


#: å alone is left open: 17 cells instead of 221, so that many plans take little time.
NARROW = kn.Priors(linear_coefficient=(0.1, 0.0))


def salted(**changes: object) -> Plan:
    wanted: dict[str, object] = {
        "runs": 8, "repeatability": 0.03, "charge_product": 2.0, "priors": NARROW,
        "starts": 2, "data_sets": 300,
    }  # fmt: skip
    wanted.update(changes)
    return plan(CELSIUS, STRENGTHS, **wanted)  # type: ignore[arg-type]


def test_a_plan_at_two_temperatures_has_the_known_u_of_the_energy() -> None:
    """Ends only, six runs, 3 %: 0.48 kJ/mol."""
    found = plan([288.15, 328.15], runs=6, repeatability=0.03)
    assert found.expected_uncertainty["activation_energy"] / 1e3 == pytest.approx(0.48, abs=0.005)
    assert found.efficiency == pytest.approx(1.0, abs=1e-4)
    assert found.price_of_floor == pytest.approx(1.0)
    assert found.I is None
    assert sorted(found.T) == [288.15] * 3 + [328.15] * 3


@pytest.mark.parametrize(
    ("temperatures", "expected"),
    [([15, 35, 55], 0.59), ([15, 23, 31, 39, 47, 55], 0.70), ([25, 30, 35, 40, 45, 50], 1.15)],
)
def test_runs_of_ones_own_choosing_are_judged_too(
    temperatures: list[float], expected: float
) -> None:
    found = plan([288.15, 328.15], runs=6, repeatability=0.03, data_sets=5)
    own = np.resize(np.array(temperatures) + 273.15, 6)
    u = found.expected_for(own)["activation_energy"] / 1e3
    assert u == pytest.approx(expected, abs=0.005)


def test_a_plan_keeps_three_temperatures_and_says_what_that_costs() -> None:
    found = plan(CELSIUS, runs=6, repeatability=0.03)
    assert len(set(found.T)) == 3
    free = plan(CELSIUS, runs=6, repeatability=0.03, least_temperatures=1)
    assert len(set(free.T)) == 2
    ratio = found.expected_uncertainty["activation_energy"]
    ratio /= free.expected_uncertainty["activation_energy"]
    assert found.price_of_floor == pytest.approx(ratio, rel=1e-4)
    assert found.efficiency == pytest.approx(1 / ratio**2, rel=1e-3)


def test_the_plan_of_the_readme_works() -> None:
    found = plan(
        temperatures=[288.15, 298.15, 308.15, 318.15, 328.15], ionic_strengths=STRENGTHS,
        runs=6, repeatability=0.03, aim="activation_energy", activation_energy=50e3,
        charge_product=2,
    )  # fmt: skip
    assert len(found.runs) == 6
    assert set(found.expected_uncertainty) >= {"activation_energy", "charge_product"}
    assert 400 < found.expected_uncertainty["activation_energy"] < 700


@pytest.mark.parametrize(
    "aim",
    ["rate_constant", "charge_product", "all", "activation_heat_capacity",
     "rate_constant at 310.15 K, 0.1 mol/L", "charge products 2 and 1",
     "laws guntelberg and davies"],
)  # fmt: skip
def test_every_aim_gives_a_plan_that_no_even_spread_beats(aim: str) -> None:
    found = salted(aim=aim)
    assert found.counts.sum() == 8
    even = np.zeros(25, dtype=np.intp)
    even[[0, 4, 6, 12, 18, 20, 22, 24]] = 1
    values = found.criterion.values(np.array([found.counts, even], dtype=float))
    assert values[0] < values[1]


def test_knowing_the_charges_narrows_the_rate_constant_most() -> None:
    open_charges = salted(aim="rate_constant")
    known = salted(aim="rate_constant", charge_product=None, reactants="A^2- + B^-")
    u = [each.expected_uncertainty["rate_constant"] for each in (open_charges, known)]
    assert u[1] < 0.6 * u[0]
    assert "charge_product" not in known.expected_uncertainty
    assert any("charges are known" in line for line in known.assumptions)


def made() -> kn.Assessment:
    rng = np.random.default_rng(2)
    T, I = (grid.ravel() for grid in np.meshgrid([288.15, 308.15], [0.01, 0.05, 0.1]))
    ln_k = -50e3 / 8.314 * (1 / T - 1 / 298.15) + 4.7 * np.sqrt(I) / (1 + np.sqrt(I)) * 1.0
    k = np.exp(ln_k + 0.03 * rng.standard_normal(6))
    return kn.assess(kn.RateTable.from_arrays(T, k, I, 0.03 * k, unit="L mol^-1 s^-1"))


def test_additions_start_from_the_runs_made_and_lower_every_u() -> None:
    found = plan(
        CELSIUS, STRENGTHS, runs=6, repeatability=0.03, found=made(), data_sets=400, starts=1
    )
    before, after = found.uncertainty_before, found.expected_uncertainty
    assert set(before) == set(after)
    assert all(after[name] < before[name] for name in after)
    # Three temperatures in all: the two that are made count.
    assert len({*np.round(found.T, 2), 288.15, 308.15}) >= 3
    assert found.runs[0].run == "7"
    assert any("6 runs already made" in line for line in found.assumptions)
    power = next(each for each in found.powers if "Cₚ" in each.words)
    assert power.by_simulation == pytest.approx(power.by_formula, abs=0.1)


def test_a_curve_says_how_many_runs_are_enough() -> None:
    found = plan(CELSIUS, runs=6, repeatability=0.03, starts=4)
    curve = runs_curve(found, 16)
    u = curve.u["activation_energy"]
    assert np.all(np.diff(u) < 1e-6)
    first = curve.until("activation_energy", 400.0)
    assert first is not None
    assert u[curve.runs == first][0] <= 400 < u[curve.runs == first - 1][0]
    assert curve.until("activation_energy", 1.0) is None
    with pytest.raises(kn.InputError, match="has no 'charge_product'"):
        curve.until_one_charge_product()
    with pytest.raises(kn.InputError, match="no point"):
        runs_curve(found, 1)


def test_a_curve_says_when_the_charge_product_is_one_integer() -> None:
    found = salted(aim="charge_product", repeatability=0.005, salt_law="guntelberg")
    curve = runs_curve(found, 10)
    first = curve.until_one_charge_product()
    assert first is not None
    assert curve.u["charge_product"][curve.runs == first][0] < 0.33


def test_information_is_highest_where_one_more_run_would_go() -> None:
    found = salted(aim="charge_product", priors=kn.Priors())
    assert found.information.shape == (25,)
    assert np.all(found.information > -0.01)
    best = int(np.argmax(found.information))
    more = found.counts + np.eye(25, dtype=np.intp)[best]
    now, then = found.criterion.values(np.array([found.counts, more], dtype=float))
    assert found.information[best] == pytest.approx(1 - np.sqrt(then / now), rel=1e-6)


@pytest.mark.parametrize("aim", ["charge_product", "activation_energy"])
def test_what_was_made_small_is_what_simulation_expects(aim: str) -> None:
    found = salted(aim=aim, priors=kn.Priors(), data_sets=1000)
    u = found.expected_uncertainty[aim]
    assert np.sqrt(found.exchanged.value) == pytest.approx(u, rel=0.05)


def test_what_is_assumed_is_said() -> None:
    offset = kn_shared()
    lines = "\n".join(salted(u_T=0.1, u_I=0.02, shared_errors=[offset]).assumptions)
    for words in ("3 %", "0.1 K", "2 %", "probe offset", "left open", "z_A z_B = 2", "E_a = 50"):
        assert words in lines
    assert "nothing was said of the charges" in "\n".join(salted(charge_product=None).assumptions)


def kn_shared() -> object:
    from knought.measurement.shared_errors import SharedError

    return SharedError("probe offset", kind="temperature-offset", u=0.2)


def test_the_same_call_gives_the_same_plan() -> None:
    one, other = salted(seed=5), salted(seed=5)
    assert one.runs == other.runs
    assert one.csv() == other.csv()
    assert dict(one.expected_uncertainty) == dict(other.expected_uncertainty)


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"runs": 0}, "0 runs"),
        ({"runs": 501}, "500 at most"),
        ({"runs": 2}, "cannot determine"),
        ({"repeatability": 3.0}, "3 % is 0.03"),
        ({"repeatability": 0.0}, "3 % is 0.03"),
        ({"u_T": -1.0}, "at least zero"),
        ({"activation_energy": float("nan")}, "finite"),
        ({"reactants": "A^2- + B^-", "charge_product": 3.0}, "not 3"),
        ({"charges_known": True, "charge_product": None}, "not given"),
        ({"least_temperatures": 9}, "there are 5"),
        ({"temperature_change_cost": -1.0}, "at least zero"),
        ({"hazards": ["sticky"]}, "volatile"),
        ({"aim": "colour"}, "no plan has the aim"),
        ({"salt_law": "davis"}, "no salt law"),
    ],
)
def test_what_cannot_be_planned_is_refused(changes: dict[str, object], message: str) -> None:
    with pytest.raises(kn.InputError, match=message):
        salted(**changes)


def test_water_outside_its_range_is_refused_only_where_a_salt_law_needs_it() -> None:
    hot = [450.0, 500.0]
    assert plan(hot, runs=4, repeatability=0.05).expected_uncertainty["activation_energy"] > 0
    with pytest.raises(kn.InputError, match="0"):
        plan(hot, STRENGTHS, runs=8, repeatability=0.05, charge_product=1)


def test_one_temperature_plans_the_salt_effect_alone() -> None:
    found = plan([298.15], STRENGTHS, runs=6, repeatability=0.02, aim="charge_product", starts=1,
                 charge_product=2)  # fmt: skip
    assert "activation_energy" not in found.expected_uncertainty
    assert found.powers
    with pytest.raises(kn.InputError, match="cannot give activation_energy"):
        plan([298.15], STRENGTHS, runs=6, repeatability=0.02, charge_product=2)
