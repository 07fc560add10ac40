"""Activation parameters, k at zero ionic strength and the charge product, from rate constants.

>>> import knought as kn
>>> rates = kn.RateTable.from_arrays(T=[288.15, 298.15, 308.15], k=[1.1e-3, 2.4e-3, 5.0e-3])
>>> found = kn.assess(rates)
>>> print(found.parameters["activation_energy"].quantity.words)
activation energy

Names are loaded when they are first used, so that ``import knought`` costs little.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.version import __version__

if TYPE_CHECKING:
    from knought.chemistry.debye_huckel import debye_huckel
    from knought.chemistry.medium import ionic_strength
    from knought.chemistry.species import Species, charge_product, parse_reactants, parse_species
    from knought.discussion.candidates import Candidate, Expectation
    from knought.discussion.compare import compare
    from knought.discussion.compensation import compensation
    from knought.discussion.consensus import consensus
    from knought.discussion.electrostatics import electrostatic_part
    from knought.discussion.encounter import encounter_limit
    from knought.discussion.literature import LiteratureValue
    from knought.discussion.literature_table import read_literature
    from knought.discussion.mechanism import weigh
    from knought.discussion.next_runs import Plan, plan
    from knought.discussion.reach import Forbidden
    from knought.discussion.runs_curve import runs_curve
    from knought.discussion.solvent import solvent_series
    from knought.errors import Caveat, InputError, Problem
    from knought.fitting.assess import Assessment, assess
    from knought.fitting.assess_many import ManyAssessments, assess_many
    from knought.fitting.bootstrap import bootstrap
    from knought.fitting.estimate import Estimate
    from knought.fitting.fit import fit
    from knought.fitting.fit_many import fit_many
    from knought.fitting.ion_size import fit_ion_size
    from knought.fitting.k_space import fit_in_k
    from knought.fitting.monte_carlo import monte_carlo
    from knought.fitting.open_fit import OpenFit
    from knought.fitting.profile import profile_ion_size
    from knought.fitting.surface_fit import SurfaceFit
    from knought.laws.open_law import Priors
    from knought.measurement.first_order import first_order
    from knought.measurement.initial_slope import initial_slope
    from knought.measurement.reading import read_rates
    from knought.measurement.shared_errors import SharedError
    from knought.measurement.table import RateTable
    from knought.reporting import figures
    from knought.reporting.report import Report
    from knought.study import run_study

__all__ = [
    "Assessment",
    "Candidate",
    "Caveat",
    "Estimate",
    "Expectation",
    "Forbidden",
    "InputError",
    "LiteratureValue",
    "ManyAssessments",
    "OpenFit",
    "Plan",
    "Priors",
    "Problem",
    "RateTable",
    "Report",
    "SharedError",
    "Species",
    "SurfaceFit",
    "__version__",
    "assess",
    "assess_many",
    "bootstrap",
    "charge_product",
    "compare",
    "compensation",
    "consensus",
    "debye_huckel",
    "electrostatic_part",
    "encounter_limit",
    "figures",
    "first_order",
    "fit",
    "fit_in_k",
    "fit_ion_size",
    "fit_many",
    "initial_slope",
    "ionic_strength",
    "monte_carlo",
    "parse_reactants",
    "parse_species",
    "plan",
    "profile_ion_size",
    "read_literature",
    "read_rates",
    "run_study",
    "runs_curve",
    "solvent_series",
    "weigh",
]

_HOMES = {
    "Assessment": "fitting.assess",
    "Candidate": "discussion.candidates",
    "Caveat": "errors",
    "Estimate": "fitting.estimate",
    "Expectation": "discussion.candidates",
    "Forbidden": "discussion.reach",
    "InputError": "errors",
    "LiteratureValue": "discussion.literature",
    "ManyAssessments": "fitting.assess_many",
    "OpenFit": "fitting.open_fit",
    "Plan": "discussion.next_runs",
    "Priors": "laws.open_law",
    "Problem": "errors",
    "RateTable": "measurement.table",
    "Report": "reporting.report",
    "SharedError": "measurement.shared_errors",
    "Species": "chemistry.species",
    "SurfaceFit": "fitting.surface_fit",
    "assess": "fitting.assess",
    "assess_many": "fitting.assess_many",
    "bootstrap": "fitting.bootstrap",
    "charge_product": "chemistry.species",
    "compare": "discussion.compare",
    "compensation": "discussion.compensation",
    "consensus": "discussion.consensus",
    "debye_huckel": "chemistry.debye_huckel",
    "electrostatic_part": "discussion.electrostatics",
    "encounter_limit": "discussion.encounter",
    "first_order": "measurement.first_order",
    "fit": "fitting.fit",
    "fit_in_k": "fitting.k_space",
    "fit_ion_size": "fitting.ion_size",
    "fit_many": "fitting.fit_many",
    "initial_slope": "measurement.initial_slope",
    "ionic_strength": "chemistry.medium",
    "monte_carlo": "fitting.monte_carlo",
    "parse_reactants": "chemistry.species",
    "parse_species": "chemistry.species",
    "plan": "discussion.next_runs",
    "profile_ion_size": "fitting.profile",
    "read_literature": "discussion.literature_table",
    "read_rates": "measurement.reading",
    "run_study": "study",
    "runs_curve": "discussion.runs_curve",
    "solvent_series": "discussion.solvent",
    "weigh": "discussion.mechanism",
}


#: Modules that are reached as attributes.
_MODULES = {"figures": "reporting.figures"}


def __getattr__(name: str) -> object:
    """Load a public name when it is first used (PEP 562).

    Raises
    ------
    AttributeError
        If there is no such name.
    """
    if name not in _HOMES and name not in _MODULES:
        raise AttributeError(f"module 'knought' has no attribute {name!r}")
    from importlib import import_module

    if name in _MODULES:
        found: object = import_module(f"knought.{_MODULES[name]}")
    else:
        found = getattr(import_module(f"knought.{_HOMES[name]}"), name)
    globals()[name] = found
    return found


def __dir__() -> list[str]:
    return sorted(__all__)
