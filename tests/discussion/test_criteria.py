"""The fast road to a design says what the solver of real runs says."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.arrays import frozen
from knought.discussion.criteria import QuantityCriterion, RivalLawsCriterion, criterion_of
from knought.discussion.plan_aims import Aim, aim_rows, headline_rows, read_aim
from knought.discussion.reach import Reach
from knought.errors import InputError
from knought.fitting.observations import Observations
from knought.fitting.open_fit import fit_open
from knought.fitting.surface_fit import fit_surface
from tests.discussion.test_exchange import model

REACH = Reach.of([288.15, 308.15, 328.15], [0.005, 0.02, 0.05, 0.1])
DESIGN = np.array([2, 0, 1, 1, 0, 1, 0, 1, 1, 2, 0, 1])


def noise_free() -> Observations:
    which = np.repeat(np.arange(12), DESIGN)
    T, I = REACH.T[which], REACH.ionic_strength[which]
    return Observations(
        frozen(model(salt_law="open").expected_ln_k(T, I)),
        frozen(np.full(len(T), 0.03)),
        frozen(T),
        frozen(I),
        None,
        None,
        u_given=True,
        order=Fraction(2),
    )


@pytest.mark.parametrize(
    "name", ["activation_energy", "charge_product", "activation_entropy", "activation_gibbs_energy"]
)
def test_the_criterion_is_the_variance_that_a_fit_to_the_expected_runs_reports(name: str) -> None:
    criterion = criterion_of(read_aim(name), model(salt_law="open"), REACH)
    found = fit_open(noise_free(), scatter="given").parameters[name]
    u = np.sqrt(criterion.values(DESIGN[None].astype(float))[0])
    assert u == pytest.approx(float(found.standard_uncertainty), rel=2e-4)


def test_a_rate_constant_at_working_conditions_is_that_of_the_fit() -> None:
    aim = read_aim("rate_constant at 310.15 K, 0.15 mol/L")
    criterion = criterion_of(aim, model(salt_law="open"), REACH)
    k = fit_open(noise_free(), scatter="given").rate_constant(310.15, 0.15)
    u = np.sqrt(criterion.values(DESIGN[None].astype(float))[0])
    assert u == pytest.approx(float(k.standard_uncertainty) / float(k.value), rel=1e-4)


@pytest.mark.parametrize(
    "aim", ["activation_energy", "all", "charge products 2 and 3", "laws guntelberg and davies"]
)
@given(seed=st.integers(0, 1000))
@settings(max_examples=5, deadline=None)
def test_one_run_more_is_the_design_with_that_run(aim: str, seed: int) -> None:
    criterion = criterion_of(read_aim(aim), model(salt_law="open"), REACH)
    runs = np.random.default_rng(seed).integers(0, 3, 12) + DESIGN
    each = criterion.values((runs + np.eye(12)).astype(float))
    assert np.allclose(criterion.with_one_more(runs.astype(float)), each, rtol=1e-6)


def test_telling_two_laws_apart_is_the_misfit_of_a_fit() -> None:
    criterion = criterion_of(read_aim("laws guntelberg and davies"), model(salt_law="open"), REACH)
    assert isinstance(criterion, RivalLawsCriterion)
    misfits = []
    for true, rival in (("guntelberg", "davies"), ("davies", "guntelberg")):
        which = np.repeat(np.arange(12), DESIGN)
        T, I = REACH.T[which], REACH.ionic_strength[which]
        ln_k = model(salt_law=true).expected_ln_k(T, I)
        seen = Observations(
            frozen(ln_k), frozen(np.full(len(T), 0.03)), frozen(T), frozen(I), None, None,
            u_given=True, order=Fraction(2),
        )  # fmt: skip
        misfits.append(fit_surface(seen, salt_law=rival).scatter.chi_square)
    value = criterion.values(DESIGN[None].astype(float))[0]
    assert 1 / value == pytest.approx(min(misfits), rel=2e-3)


def test_aims_are_read_as_people_write_them() -> None:
    assert read_aim("all") == Aim("all")
    assert read_aim("rate_constant at 310.15, 0.15") == read_aim(
        "rate_constant  at 310.15 K,  0.15 mol/L"
    )
    assert read_aim("charge products -1 and -2").pair == (-1.0, -2.0)
    assert read_aim("laws eyring and eyring-cp").name == "activation_heat_capacity"
    assert "telling" in read_aim("laws davies and sit").words


@pytest.mark.parametrize(
    "text", ["", "colour", "laws eyring and arrhenius", "laws davies and davies",
             "charge products 2 and 2", "rate_constant at -5, 0.1"]
)  # fmt: skip
def test_what_is_no_aim_is_refused(text: str) -> None:
    with pytest.raises(InputError):
        read_aim(text)


def test_an_aim_that_the_fit_will_not_have_is_refused_with_those_that_it_has() -> None:
    with pytest.raises(InputError, match=r"cannot give charge_product.*activation_energy"):
        aim_rows(read_aim("charge_product"), model())


def test_headline_quantities_carry_the_axis_of_the_cells() -> None:
    opened = model(salt_law="open")
    for rows in headline_rows(opened).values():
        assert rows.rows.shape == (opened.cells, 1, 4)
        assert rows.offset.shape == (opened.cells, 1)


def test_criteria_say_how_many_candidates_they_have() -> None:
    for text in ("activation_energy", "laws guntelberg and davies"):
        criterion = criterion_of(read_aim(text), model(salt_law="open"), REACH)
        assert isinstance(criterion, (QuantityCriterion, RivalLawsCriterion))
        assert len(criterion) == 12
