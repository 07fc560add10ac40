"""Named errors that each run has of its own, and errors of a batch when the batch goes."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest

import knought as kn
from knought.arrays import frozen
from knought.chemistry.constants import GAS_CONSTANT
from knought.fitting.budget import budget
from knought.fitting.fit import fit
from knought.fitting.influence import influence
from knought.fitting.monte_carlo import monte_carlo
from knought.fitting.observations import Observations, observe
from knought.fitting.replicates import replicates
from knought.fitting.surface_fit import SurfaceFit, fit_surface
from tests.fitting.test_shared_errors import study


def own(
    kind: str, u: float, distribution: str = "normal", batch: str | None = None
) -> kn.SharedError:
    return kn.SharedError(
        "reading",
        kind,  # type: ignore[arg-type]
        u,
        batch,
        distribution,  # type: ignore[arg-type]
        each_run=True,
    )


@pytest.mark.parametrize("kind", ["temperature-offset", "ionic-strength-factor", "factor"])
def test_a_named_error_of_each_run_is_that_of_a_column(kind: str) -> None:
    """u(T) of 0.3 K, u(I) of 5 %, or 3 % more of k: the same fit whichever way it is said."""
    seen = study()
    n = seen.runs
    by_column = {
        "temperature-offset": replace(seen, u_T=frozen(np.full(n, 0.3))),
        "ionic-strength-factor": replace(seen, u_I=frozen(0.05 * seen.ionic_strength)),
        "factor": replace(seen, u=frozen(np.hypot(seen.u, 0.03))),
    }[kind]
    size = {"temperature-offset": 0.3, "ionic-strength-factor": 0.05, "factor": 0.03}[kind]
    by_name = replace(seen, own=(own(kind, size),))
    one, other = (
        fit_surface(each, salt_law="guntelberg", scatter="given") for each in (by_column, by_name)
    )
    assert np.allclose(one.distribution.mean, other.distribution.mean, rtol=1e-10)
    assert np.allclose(one.distribution.covariance, other.distribution.covariance, rtol=1e-8)
    parts = budget(other, "rate_constant")
    assert parts.variances["reading"] > 0
    u = float(other.parameters["rate_constant"].standard_uncertainty)
    assert parts.total == pytest.approx(u**2, rel=1e-10)
    assert "reading" in other.includes


def test_it_may_belong_to_a_batch_and_never_be_a_gain() -> None:
    seen = replace(study(), batch=("a",) * 8 + ("b",) * 8, own=(own("factor", 0.1, batch="b"),))
    u = fit_surface(seen, salt_law="guntelberg", scatter="given").errors.u
    assert u == pytest.approx([0.02] * 8 + [np.hypot(0.02, 0.1)] * 8)
    with pytest.raises(kn.InputError, match="belongs to a probe"):
        own("temperature-gain", 0.01)


def test_its_distribution_is_drawn_where_the_answer_is_linear() -> None:
    """One run, all but free of other errors, and a rectangular error: JCGM 101, 6.4.2."""
    found = fit(
        kn.RateTable.from_arrays([298.15], [1.0], u_k=[1e-6]),
        temperature_law="isothermal",
        scatter="given",
        shared_errors=[own("factor", 0.1, "rectangular")],
    )
    drawn = monte_carlo(found, 40_000)
    assert not drawn.refitted
    end = 0.95 * np.sqrt(3) * 0.1
    k = drawn.parameters["rate_constant"]
    assert np.log(k.interval()) == pytest.approx([-end, end], abs=2e-3)


def test_its_distribution_is_drawn_where_each_draw_is_refitted() -> None:
    """Two runs, the temperature of one of them rectangular: E_a at the ends of it."""
    T, k = np.array([288.15, 318.15]), np.array([1.0, 20.0])
    found = fit(
        kn.RateTable.from_arrays(T, k, u_k=1e-6 * k, batch=["a", "b"]),
        temperature_law="arrhenius",
        scatter="given",
        shared_errors=[own("temperature-offset", 1.0, "rectangular", batch="b")],
    )
    drawn = monte_carlo(found, 40_000)
    assert drawn.refitted
    ends = 318.15 + 0.95 * np.sqrt(3) * np.array([1, -1])
    expected = GAS_CONSTANT * np.log(20.0) / (1 / 288.15 - 1 / ends)
    assert drawn.parameters["activation_energy"].interval() == pytest.approx(expected, rel=2e-3)


def test_beside_scatter_it_is_in_the_scatter() -> None:
    seen = replace(study(), u_given=False)
    one = fit_surface(seen, salt_law="guntelberg")
    other = fit_surface(replace(seen, own=(own("temperature-offset", 0.3),)), salt_law="guntelberg")
    assert np.allclose(one.distribution.covariance, other.distribution.covariance)
    assert "reading" not in other.includes


def batches(offset: float) -> tuple[kn.RateTable, list[kn.SharedError]]:
    """Each condition measured in two batches, of which one is off; the size of that is known."""
    T = np.repeat([288.15, 298.15, 308.15, 318.15], 4)
    k = np.exp(-6000 * (1 / T - 1 / 298.15) + 0.02 * np.random.default_rng(3).standard_normal(16))
    batch = ["a", "a", "b", "b"] * 4
    k = k * np.where(np.array(batch) == "b", 1 + offset, 1)
    rates = kn.RateTable.from_arrays(T, k, u_k=0.02 * k, batch=batch)
    return rates, [kn.SharedError("stock of b", "factor", 0.1, batch="b")]


def test_a_batch_that_is_off_by_what_is_known_of_it_is_no_scatter_of_replicates() -> None:
    rates, errors = batches(0.12)
    known, unknown = (replicates(fit(rates, shared_errors=each)) for each in (errors, []))
    assert known is not None
    assert unknown is not None
    assert known.probability > 0.01 > unknown.probability
    assert known.lack_probability > 0.01


def test_a_batch_is_left_out_with_the_error_that_belongs_to_it() -> None:
    rates, errors = batches(0.12)
    found = fit(rates, shared_errors=errors)
    left_out = {each.label for each in influence(found) if each.kind == "batch"}
    assert left_out == {"a", "b"}


def test_weights_that_do_not_settle_are_said_not_to(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("knought.fitting.run_errors._MOST_ITERATIONS", 1)
    seen = replace(study(), u_T=frozen(np.full(16, 3.0)))
    found = fit_surface(seen, salt_law="guntelberg", scatter="given")
    assert "unsettled-weights" in {caveat.code for caveat in found.caveats}
    monkeypatch.undo()
    settled = fit_surface(seen, salt_law="guntelberg", scatter="given")
    assert "unsettled-weights" not in {caveat.code for caveat in settled.caveats}


def test_the_summary_says_what_is_not_included() -> None:
    plain = study()
    offset = kn.SharedError("probe offset", "temperature-offset", 0.2)
    by_probe = replace(plain, u_T=frozen(np.full(16, 0.1)))
    named = [
        (plain, ": errors of temperature and ionic strength."),
        (by_probe, ": errors of temperature that runs share, errors of ionic strength."),
        (
            replace(plain, own=(own("ionic-strength-factor", 0.01),), shared=(offset,)),
            ": errors of each run's temperature, errors of ionic strength that runs share.",
        ),
        (
            replace(plain, u_given=False),
            ": errors of temperature and ionic strength that runs share.",
        ),
        (replace(plain, I=None), ": errors of temperature."),
    ]
    for seen, words in named:
        law = "none" if seen.I is None else "guntelberg"
        found = fit_surface(seen, salt_law=law, scatter="given" if seen.u_given else None)
        assert isinstance(found, SurfaceFit)
        assert words in found.excludes
    whole = replace(by_probe, u_I=frozen(0.01 * plain.ionic_strength))
    scale = kn.SharedError("salt scale", "ionic-strength-factor", 0.02)
    whole = replace(whole, shared=(offset, scale))
    assert not fit_surface(whole, salt_law="guntelberg").excludes


def test_a_table_splits_named_errors_into_shared_ones_and_those_of_each_run() -> None:
    rates, errors = batches(0.0)
    seen = observe(rates, [*errors, own("factor", 0.01)])
    assert [error.name for error in seen.shared] == ["stock of b"]
    assert [error.name for error in seen.own] == ["reading"]


def test_shared_errors_that_explain_all_the_scatter_leave_a_fit() -> None:
    """Five runs of which known shared errors explain the misfit of four parameters: the independent
    scatter comes out as nothing, and the study was refused as undetermined.
    """
    I = np.array([0.0218708, 0.0049864, 0.02256425, 0.09845039, 0.02229626])
    seen = Observations(
        frozen(np.array([-0.09082141, 0.97673004, 0.6897401, 0.28617676, 1.44112649])),
        frozen(np.full(5, 0.01)),
        frozen(np.array([288.33589951, 298.43057108, 298.26582784, 298.28412256, 308.36985851])),
        frozen(I),
        frozen(np.full(5, 0.1)),
        frozen(0.03 * I),
        u_given=True,
        order=Fraction(2),
        shared=(
            kn.SharedError("absorptivity", "factor", 0.03),
            kn.SharedError("probe offset", "temperature-offset", 0.2),
            kn.SharedError("salt scale", "ionic-strength-factor", 0.02),
        ),
    )
    found = fit_surface(seen, salt_law="sit")
    assert found.scatter.kind == "given"
    assert np.all(found.standard_errors_scatter < found.standard_errors_given)
    assert np.all(np.isfinite(found.standard_errors_scatter))
