"""The joint region of two activation parameters holds what it says."""

from __future__ import annotations

import numpy as np
import pytest

import knought as kn
from knought.fitting.joint_region import joint_region
from tests.fitting.test_assess import table

PAIR = ("activation_entropy", "activation_enthalpy")


@pytest.fixture(scope="module")
def assessment() -> kn.Assessment:
    return kn.assess(table())


def reach(found: kn.Assessment, law: int | None, pair: tuple[str, str] = PAIR) -> float:
    """Return half the width of the ellipse over the standard uncertainty along its first axis."""
    region = joint_region(found.headline if law is None else found.laws[law], pair)
    return float(np.ptp(region.ring[:, 0]) / 2 / np.sqrt(region.covariance[0, 0]))


def test_a_normal_distribution_reaches_as_chi_square_says(assessment: kn.Assessment) -> None:
    # χ² with two degrees of freedom at 95 %: 5.991 (any table).
    law = next(i for i, each in enumerate(assessment.laws) if each.salt_law == "davies")
    assert reach(assessment, law) == pytest.approx(np.sqrt(5.991), rel=1e-3)


def test_a_student_distribution_reaches_as_f_says() -> None:
    found = kn.assess(table(u_k=None))
    law = next(i for i, each in enumerate(found.laws) if each.salt_law == "davies")
    assert found.laws[law].scatter.headline_degrees_of_freedom == 15
    # F(0.95; 2, 15) = 3.682 (any table).
    assert reach(found, law) == pytest.approx(np.sqrt(2 * 3.682), rel=1e-3)


def test_the_region_of_the_open_law_is_near_that_of_a_normal_one(
    assessment: kn.Assessment,
) -> None:
    assert reach(assessment, None) == pytest.approx(np.sqrt(5.991), rel=0.05)
    region = joint_region(assessment.headline, PAIR)
    u = float(assessment.parameters["activation_enthalpy"].standard_uncertainty)
    assert np.sqrt(region.covariance[1, 1]) == pytest.approx(u, rel=1e-9)
    assert region.centre[1] == pytest.approx(
        float(assessment.parameters["activation_enthalpy"].value), rel=1e-12
    )


def test_enthalpy_goes_with_entropy_and_hardly_with_gibbs_energy(
    assessment: kn.Assessment,
) -> None:
    slanting = joint_region(assessment.headline, PAIR).correlation
    round_ = joint_region(
        assessment.headline, ("activation_gibbs_energy", "activation_enthalpy")
    ).correlation
    assert slanting > 0.9
    assert abs(round_) < 0.5


@pytest.mark.parametrize("coverage", [0.0, 1.0])
def test_an_impossible_coverage_is_refused(assessment: kn.Assessment, coverage: float) -> None:
    with pytest.raises(kn.InputError, match="between 0 and 1"):
        joint_region(assessment.headline, PAIR, coverage=coverage)


def test_one_temperature_has_no_region_of_enthalpy() -> None:
    flat = kn.assess(
        kn.RateTable.from_arrays([298.15] * 4, [1.0, 1.2, 1.3, 1.5], [0.01, 0.02, 0.05, 0.1])
    )
    with pytest.raises(kn.InputError, match="no activation_entropy"):
        joint_region(flat.headline, PAIR)
