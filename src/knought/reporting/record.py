"""The record of a study, ``results.json``: every number at full precision, described by a schema.

Values stand in the customary units of the registry (energies in kJ/mol); k in (L/mol)^(n-1) s^-1.
The covariance is over the linear parameters, in the units that it names.
"""

from __future__ import annotations

import json
import math
from typing import TYPE_CHECKING, Any

from knought.chemistry.quantities import quantity
from knought.reporting.covariance_tables import basis_quantity, shown_covariance
from knought.reporting.uncertainty_tables import BUDGETED

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.errors import Caveat
    from knought.fitting.assess import Assessment
    from knought.fitting.budget import Budget
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found
    from knought.fitting.surface_fit import SurfaceFit
    from knought.laws.open_law import Priors

__all__ = ["COVERAGE", "estimate_record", "record", "record_text", "schema_text"]

#: Probability that every interval of the record holds.
COVERAGE = 0.95


def record_text(assessment: Assessment, **about: Any) -> str:
    """Return the record as JSON text that ends with a line break; see :func:`record`."""
    data = _json_numbers(record(assessment, **about))
    return json.dumps(data, ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def schema_text() -> str:
    """Return the JSON Schema of ``results.json``, as it ships with the package."""
    from importlib import resources

    place = resources.files("knought.reporting") / "schemas" / "results.schema.json"
    return place.read_text(encoding="utf-8")


def _json_numbers(data: Any) -> Any:
    """Return data with null for numbers that JSON does not have."""
    if isinstance(data, dict):
        return {key: _json_numbers(value) for key, value in data.items()}
    if isinstance(data, list | tuple):
        return [_json_numbers(value) for value in data]
    return _finite(data) if isinstance(data, float) else data


def record(
    assessment: Assessment,
    *,
    inputs: Sequence[tuple[str, str]] = (),
    seed: int | None = None,
    discussed: Mapping[str, Any] | None = None,
    checked: Mapping[str, Any] | None = None,
    reduction: Mapping[str, Any] | None = None,
) -> dict[str, Any]:
    """Return the record of an assessment as data that JSON can hold.

    Parameters
    ----------
    assessment
        What was found.
    inputs
        Name and SHA-256 of every file read; those of the rate table if not given.
    seed
        Seed of everything random.
    discussed
        What is kept of the discussion, by its keys.
    checked
        What is kept of Monte Carlo and bootstrap, by its keys.
    reduction
        How the rate constants came from traces.
    """
    from knought.version import __version__

    found = assessment.headline
    source = assessment.rates.source
    if not inputs and source is not None:
        inputs = ((source.name, source.sha256),)
    choices = assessment.choices
    return {
        "knought": __version__,
        "inputs": [{"path": path, "sha256": digest} for path, digest in inputs],
        "seed": seed,
        "reference_temperature": {"value": found.reference_temperature, "unit": "K"},
        "standard_concentration": {"value": choices.standard_concentration, "unit": "mol L^-1"},
        "order": float(assessment.rates.order),
        "reactants": choices.reactants,
        "parameters": parameters_record(found),
        "uncertainty": uncertainty_record(found),
        "covariance": _covariance_record(found),
        "temperature_law": found.temperature_law,
        "salt_law": found.salt_law,
        "priors": _priors_record(choices.priors) if found.salt_law == "open" else None,
        "charge_product_weights": _weights_record(assessment.data_alone or found),
        "data_alone": (
            None
            if assessment.data_alone is None
            else {
                "parameters": parameters_record(assessment.data_alone),
                "uncertainty": uncertainty_record(assessment.data_alone),
            }
        ),
        "at": _working_records(found),
        "laws": [_law_record(law) for law in (*assessment.laws, *assessment.temperature_laws)],
        "refused": [
            {"temperature": each.temperature_law, "salt": each.salt_law, "reason": each.reason}
            for each in assessment.refused
        ],
        "budget": {
            name: {
                "unit": f"({each.quantity.shown_unit})^2",
                "variances": {
                    source: part * each.quantity.shown(1.0) ** 2
                    for source, part in each.variances.items()
                },
            }
            for name, each in _budgets(assessment).items()
        },
        "diagnostics": _diagnostics_record(assessment),
        "runs": _runs_record(assessment),
        "understood": [str(line) for line in assessment.rates.account],
        "warnings": [_caveat_record(caveat) for caveat in assessment.caveats],
        **(checked or {}),
        **({} if reduction is None else {"reduction": dict(reduction)}),
        **(discussed or {}),
    }


def estimate_record(estimate: Estimate) -> dict[str, Any]:
    """Return value, standard uncertainty, unit and interval of one estimate."""
    what = estimate.quantity
    low, high = (what.shown(float(end)) for end in estimate.interval(COVERAGE))
    made: dict[str, Any] = {
        "value": what.shown(float(estimate.value)),
        "standard_uncertainty": what.shown(float(estimate.standard_uncertainty)),
        "unit": what.shown_unit,
        "interval": [low, high],
        "coverage": COVERAGE,
        "degrees_of_freedom": _finite(estimate.degrees_of_freedom),
    }
    if estimate.given:
        made["given"] = True
    return made


def parameters_record(found: Found) -> dict[str, Any]:
    """Return every parameter of a fit by its name."""
    return {name: estimate_record(each) for name, each in found.parameters.items()}


def uncertainty_record(found: Found) -> dict[str, Any]:
    """Return what the ± of a fit means, with both standard errors where the law is named."""
    scatter = found.scatter
    made: dict[str, Any] = {
        "means": f"standard uncertainty, {found.includes}",
        "not_included": found.excludes or None,
        "kind": scatter.kind,
        "chi_square": scatter.chi_square,
        "degrees_of_freedom": scatter.degrees_of_freedom,
        "probability": _finite(scatter.probability),
        "birge_ratio": _finite(scatter.birge_ratio),
    }
    return made


def _covariance_record(found: Found) -> dict[str, Any]:
    basis, matrix = shown_covariance(found)
    return {
        "names": list(found.covariance()[0]),
        "units": [each.shown_unit for each in basis],
        "matrix": matrix.tolist(),
    }


def _law_record(found: Found) -> dict[str, Any]:
    from knought.fitting.surface_fit import SurfaceFit

    made: dict[str, Any] = {
        "temperature": found.temperature_law,
        "salt": found.salt_law,
        "chi_square": found.scatter.chi_square,
        "degrees_of_freedom": found.scatter.degrees_of_freedom,
        "aicc": None,
        "parameters": parameters_record(found),
        "uncertainty": uncertainty_record(found),
        "warnings": [_caveat_record(caveat) for caveat in found.caveats],
    }
    if isinstance(found, SurfaceFit):
        made["aicc"] = _finite(found.aicc)
        made["standard_errors"] = _both_standard_errors(found)
    return made


def _both_standard_errors(found: SurfaceFit) -> dict[str, Any]:
    """Return standard errors of the linear parameters from u as given and from the scatter."""
    names = found.distribution.names
    made = {}
    for label, errors in (
        ("from_stated_u", found.standard_errors_given),
        ("from_scatter", found.standard_errors_scatter),
    ):
        stated = label == "from_scatter" or found.scatter.stated
        made[label] = {
            name: _finite(basis_quantity(found, name).shown(float(error))) if stated else None
            for name, error in zip(names, errors, strict=True)
        }
    return made


def _priors_record(priors: Priors) -> dict[str, Any]:
    size = quantity("ion_size")
    return {
        "constant_size": {"probability": priors.constant_size},
        "ion_size": {
            "distribution": "uniform",
            "low": size.shown(priors.ion_size[0]),
            "high": size.shown(priors.ion_size[1]),
            "unit": size.shown_unit,
        },
        **{
            name: {
                "distribution": "normal",
                "mean": getattr(priors, name)[0],
                "standard_uncertainty": getattr(priors, name)[1],
                "unit": "L mol^-1",
            }
            for name in ("linear_coefficient", "interaction_coefficient")
        },
    }


def _weights_record(found: Found) -> dict[str, float]:
    weights = getattr(found, "charge_product_weights", {})
    return {str(z): weight for z, weight in weights.items()}


def _working_records(found: Found) -> list[dict[str, Any]]:
    """Return k and activation parameters at T_ref and each working ionic strength."""
    if not found.describes_salt:
        return []
    made = []
    for I in found.observations.ionic_strength_levels:
        estimates = found.at(I=float(I))
        made.append(
            {
                "temperature": {"value": found.reference_temperature, "unit": "K"},
                "ionic_strength": {"value": float(I), "unit": "mol L^-1"},
                "parameters": {name: estimate_record(each) for name, each in estimates.items()},
            }
        )
    return made


def _budgets(assessment: Assessment) -> dict[str, Budget]:
    parameters = assessment.headline.parameters
    names = [n for n in BUDGETED if n in parameters and not parameters[n].given]
    return {name: assessment.budget(name) for name in names}


def _diagnostics_record(assessment: Assessment) -> dict[str, Any]:
    found, repeated = assessment.diagnostics, assessment.replicates
    checked = assessment.cross_check
    return {
        "runs_test": dict(found.runs_test),
        "curvature": None
        if found.curvature is None
        else {
            "value": found.curvature.value,
            "standard_uncertainty": found.curvature.standard_uncertainty,
            "unit": "J K^-1 mol^-1",
            "probability": found.curvature.probability,
        },
        "replicates": None
        if repeated is None
        else {
            "groups": repeated.groups,
            "degrees_of_freedom": repeated.degrees_of_freedom,
            "standard_deviation_of_ln_k": repeated.standard_deviation,
            "between_run_variance": _finite(repeated.between),
            "probability": _finite(repeated.probability),
            "lack_of_fit_probability": _finite(repeated.lack_probability),
        },
        "fit_of_k": None
        if checked is None
        else {
            "salt": checked.in_k.salt_law,
            "shifts_in_standard_uncertainties": dict(checked.shifts),
        },
    }


def _runs_record(assessment: Assessment) -> list[dict[str, Any]]:
    rates, found = assessment.rates, assessment.headline
    residuals = iter(found.residuals)
    studentised = iter(assessment.diagnostics.studentised)
    leverage = iter(assessment.diagnostics.leverage)
    made = []
    for i, run in enumerate(rates.run):
        row: dict[str, Any] = {
            "run": run,
            "temperature": float(rates.T[i]),
            "ionic_strength": None if rates.I is None else float(rates.I[i]),
            "rate_constant": float(rates.k[i]),
            "standard_uncertainty": None if rates.u_k is None else float(rates.u_k[i]),
            "used": bool(rates.used[i]),
        }
        if rates.used[i]:
            row["ln_residual"] = float(next(residuals))
            row["studentised_residual"] = _finite(float(next(studentised)))
            row["leverage"] = float(next(leverage))
        else:
            row["reason"] = rates.reason[i]
        made.append(row)
    return made


def _caveat_record(caveat: Caveat) -> dict[str, str]:
    return {"code": caveat.code, "message": caveat.message}


def _finite(value: float) -> float | None:
    """JSON has no infinity and no nan: both become null."""
    return value if math.isfinite(value) else None
