"""Doors of the library: hostile numbers are refused in words, whatever their type or shape."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

import knought as kn
from knought.given import given_count, given_number, given_numbers, real_array

if TYPE_CHECKING:
    from collections.abc import Callable

T = np.repeat([288.15, 298.15, 308.15], 3)
I = np.tile([0.005, 0.02, 0.1], 3)
K = np.exp(2 - 6000 * (1 / T - 1 / 298.15) + 2 * np.sqrt(I)) * (1 + 0.01 * np.cos(np.arange(9)))
RATES = kn.RateTable.from_arrays(T, K, I, 0.02 * K, unit="L mol^-1 s^-1")
FOUND = kn.fit(RATES, salt_law="davies")
OPEN = kn.fit(RATES)
TIME = np.linspace(0, 100, 30)
SIGNAL = 1 - np.exp(-TIME / 30)

#: What stands where one good number or array should.
HOSTILE: tuple[Any, ...] = (
    math.nan,
    math.inf,
    -math.inf,
    -1e308,
    None,
    "x",
    [],
    [math.nan],
    np.zeros((2, 2, 2)),
    1 + 2j,
    {},
    10**400,
    object(),
    [[1.0], [2.0, 3.0]],
    np.ma.masked_array([1.0, 2.0], mask=[True, False]),
)

#: Door, its good arguments, and those that None leaves at their default.
DOORS: dict[str, tuple[Callable[..., object], dict[str, Any], set[str]]] = {
    "RateTable": (kn.RateTable.from_arrays, {"T": T, "k": K, "I": I, "u_k": K}, {"I", "u_k"}),
    "fit": (
        kn.fit,
        {
            "rates": RATES,
            "salt_law": "extended",
            "reference_temperature": 298.15,
            "standard_concentration": 1.0,
            "charge_product": 2.0,
            "ion_size": 4e-10,
        },
        {"reference_temperature", "charge_product", "ion_size", "salt_law"},
    ),
    "fit_many": (kn.fit_many, {"T": T, "I": I, "k": [K, K], "u_k": 0.02 * K}, {"I"}),
    "rate_constant": (FOUND.rate_constant, {"T": 310.0, "I": 0.1}, {"T"}),
    "open rate_constant": (OPEN.rate_constant, {"T": 310.0, "I": 0.1}, {"T"}),
    "correlated": (FOUND.correlated, {"T": 310.0, "I": 0.1}, {"T"}),
    "interval": (FOUND.parameters["rate_constant"].interval, {"coverage": 0.95}, set()),
    "first_order": (kn.first_order, {"time": TIME, "signal": SIGNAL}, set()),
    "initial_slope": (kn.initial_slope, {"time": TIME, "signal": SIGNAL}, set()),
    "ionic_strength": (kn.ionic_strength, {"composition": {"Na+": 0.1, "Cl-": 0.1}}, set()),
    "consensus": (kn.consensus, {"values": [1.0, 2.0], "uncertainties": [0.1, 0.2]}, set()),
    "debye_huckel": (kn.debye_huckel, {"T": 298.15}, set()),
    "encounter_limit": (
        kn.encounter_limit,
        {
            "T": 298.15,
            "charge_product": -1.0,
            "contact_distance": 5e-10,
            "diffusion_coefficients": (9e-9, 5e-9),
        },
        {"diffusion_coefficients"},
    ),
    "electrostatic_part": (
        kn.electrostatic_part,
        {"T": 298.15, "charge_product": 2.0, "contact_distance": 5e-10},
        set(),
    ),
    "SharedError": (kn.SharedError, {"name": "a", "kind": "factor", "u": 0.02}, set()),
    "Priors": (
        kn.Priors,
        {"ion_size": (1e-10, 6e-10), "interaction_coefficient": (0.0, 0.1)},
        set(),
    ),
    "Candidate": (kn.Candidate, {"name": "a", "reactants": "A^+ + B^-", "prior": 1.0}, set()),
}

#: Doors where nothing in is nothing out.
EMPTY = {("ionic_strength", "composition", "{}"), ("debye_huckel", "T", "[]")}

#: Words for which "x" is a good one.
TEXTS = {("SharedError", "name"), ("Candidate", "name"), ("Candidate", "reactants")}


@pytest.mark.parametrize("door", DOORS)
def test_hostile_arguments_are_refused_in_words(door: str) -> None:
    call, good, optional = DOORS[door]
    call(**good)
    for name in good:
        for hostile in HOSTILE:
            if (
                (hostile is None and name in optional)
                or (isinstance(hostile, str) and (door, name) in TEXTS)
                or (door, name, repr(hostile)) in EMPTY
            ):
                continue
            with pytest.raises(kn.InputError) as caught:
                call(**(good | {name: hostile}))
            assert all(problem.what for problem in caught.value.problems), (door, name, hostile)


@pytest.mark.parametrize(
    ("column", "value"),
    [
        ("k", 1e308),
        ("k", 1e-300),
        ("u_k", 1e-300),
        ("u_k", 1e300),
        ("u_T", 1e300),
        ("u_I", 1e300),
        ("T", 1e-300),
        ("T", 1e300),
        ("I", 1e300),
        ("determinations", 0.5),
    ],
)
def test_finite_numbers_that_no_measurement_has_are_refused(column: str, value: float) -> None:
    columns: dict[str, Any] = {"T": T, "k": K, "I": I, "u_k": 0.02 * K}
    columns |= {"u_T": np.full(9, 0.1), "u_I": 0.01 * I, "determinations": np.full(9, 2.0)}
    kn.RateTable.from_arrays(**columns)
    columns[column] = np.where(np.arange(9) == 4, value, columns[column])
    with pytest.raises(kn.InputError, match=r"run 5.*[:.]"):
        kn.RateTable.from_arrays(**columns)


def test_lists_integers_and_strided_arrays_are_the_same_numbers() -> None:
    wide = np.repeat(K, 2)[::2]
    tables = [
        kn.RateTable.from_arrays(T.tolist(), K.tolist()),
        kn.RateTable.from_arrays(T, wide),
        kn.RateTable.from_arrays(np.asfortranarray(T), K.astype(object)),
    ]
    assert all(tables[0].same_runs(other) for other in tables)
    whole = kn.RateTable.from_arrays([288, 298], np.array([1, 2], dtype=np.int8))
    assert whole.k.tolist() == [1.0, 2.0]


def test_numbers_that_are_given_are_copies() -> None:
    given = given_numbers(T, "T")
    assert not np.shares_memory(given, T)
    assert real_array([[1, 2]]).shape == (1, 2)


@pytest.mark.parametrize("value", [1.5, "3", None, -1, 11, math.nan, True + 10])
def test_counts_are_whole_numbers_within_bounds(value: object) -> None:
    assert given_count(np.int64(3), "n", 0, 10) == 3
    with pytest.raises(kn.InputError, match="n is"):
        given_count(value, "n", 0, 10)


def test_bounds_are_allowed_themselves_and_named_in_the_refusal() -> None:
    assert given_number(1, "x", 1.0, 2.0) == 1.0
    with pytest.raises(kn.InputError, match="from 1 to 2"):
        given_number(2.5, "x", 1.0, 2.0)
    with pytest.raises(kn.InputError, match="at least 1"):
        given_number(0.5, "x", 1.0)
