"""Which ± is the headline: stated uncertainties, or the scatter about the fit.

Stated uncertainties of k are taken as absolute. Where none are stated, the scatter about the fit
gives them, with Student's t. Both are always computed; where χ² says that the stated ones are too
small to explain the scatter, the larger (Birge-scaled: Birge, Phys. Rev. 40 (1932) 207) is the
headline and the result says so.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from knought.errors import InputError
from knought.numerics.quantiles import chi_square_survival

if TYPE_CHECKING:
    from knought.arrays import BoolArray, FloatArray, IndexArray

__all__ = [
    "SIGNIFICANCE",
    "Scatter",
    "ScatterChoice",
    "first_scale_node",
    "from_scatter_many",
    "judge_scatter",
    "scale_nodes",
    "scale_nodes_from",
]

#: Below this probability of χ², stated uncertainties do not explain the scatter.
SIGNIFICANCE = 0.05

#: Steps between nodes of σ where it is found from the scatter, and the tail probability left out.
_SCALE_STEPS = 24
_SCALE_TAIL = 5e-4

ScatterChoice = Literal["given", "scatter"]


@dataclass(frozen=True)
class Scatter:
    """How the runs scatter about a fit, and what its ± is made of.

    Attributes
    ----------
    chi_square
        With the uncertainties as stated; with unit weights, where none are.
    degrees_of_freedom
        Runs less parameters.
    stated
        Whether uncertainties of k are stated.
    kind
        ``"given"`` (stated and taken as absolute), ``"scatter"`` (from the scatter) or
        ``"enlarged"`` (stated, but too small to explain the scatter).
    shared_scale
        Where runs share errors, whose size the scatter does not tell: the factor on independent
        uncertainties alone that explains the scatter.
    shared_degrees_of_freedom
        Degrees of freedom to which that factor is known.
    """

    chi_square: float
    degrees_of_freedom: int
    stated: bool
    kind: Literal["given", "scatter", "enlarged"]
    shared_scale: float | None = None
    shared_degrees_of_freedom: float | None = None

    @property
    def reduced_chi_square(self) -> float:
        """χ²/ν; nan where there are no degrees of freedom."""
        nu = self.degrees_of_freedom
        return self.chi_square / nu if nu > 0 else math.nan

    @property
    def birge_ratio(self) -> float:
        """√(χ²/ν): scatter over stated uncertainty; nan where there are no degrees of freedom."""
        return math.sqrt(self.reduced_chi_square)

    @property
    def probability(self) -> float:
        """Probability of a χ² at least this large if stated uncertainties hold; nan if none."""
        if not self.stated or self.degrees_of_freedom <= 0:
            return math.nan
        return chi_square_survival(self.chi_square, self.degrees_of_freedom)

    @property
    def from_scatter(self) -> bool:
        """Whether the headline ± comes from the scatter."""
        return self.kind != "given"

    @property
    def factor(self) -> float:
        """What independent uncertainties of the runs are multiplied by for the headline."""
        if not self.from_scatter:
            return 1.0
        return self.birge_ratio if self.shared_scale is None else self.shared_scale

    @property
    def headline_degrees_of_freedom(self) -> float:
        """Degrees of freedom of the headline ±: infinite where u is stated and holds."""
        if not self.from_scatter:
            return math.inf
        known = self.shared_degrees_of_freedom
        return float(self.degrees_of_freedom) if known is None else known

    @property
    def words(self) -> str:
        """What the ± is made of, as a phrase."""
        if self.kind == "given":
            return "from the stated uncertainties of k"
        nu = f"{self.headline_degrees_of_freedom:.3g}"
        if self.kind == "scatter":
            return f"from the scatter of the runs about the fit, {nu} degrees of freedom"
        return (
            f"from the stated uncertainties of k enlarged by {self.birge_ratio:.2f} to explain the "
            f"scatter, {nu} degrees of freedom"
        )


def judge_scatter(
    chi_square: float,
    degrees_of_freedom: int,
    *,
    stated: bool,
    choice: ScatterChoice | None = None,
) -> Scatter:
    """Decide what the headline ± is made of.

    Parameters
    ----------
    chi_square, degrees_of_freedom
        Of the fit, with the uncertainties as given.
    stated
        Whether uncertainties of k are stated.
    choice
        ``"given"`` or ``"scatter"`` overrides the rule.

    Raises
    ------
    InputError
        If the scatter is needed and there are no degrees of freedom to take it from, or stated
        uncertainties are asked for and there are none.
    """
    nu = degrees_of_freedom
    if choice == "given" and not stated:
        raise InputError(
            "no uncertainty of k is given", "add a column u(k), or let the scatter speak"
        )
    if stated and choice != "scatter":
        too_small = nu > 0 and chi_square_survival(chi_square, nu) < SIGNIFICANCE
        enlarged = too_small and choice is None
        return Scatter(chi_square, nu, stated, "enlarged" if enlarged else "given")
    if nu < 1:
        raise InputError(
            "there are as many parameters as runs, so that the scatter says nothing about u(k)",
            "measure more runs, or give the uncertainty of k in a column u(k) or u_r(k)/%",
        )
    return Scatter(chi_square, nu, stated, "scatter")


def from_scatter_many(
    chi_square: FloatArray,
    degrees_of_freedom: int,
    *,
    stated: bool,
    choice: ScatterChoice | None = None,
) -> BoolArray:
    """Decide for many data sets of one design whether the headline ± comes from the scatter.

    Parameters
    ----------
    chi_square : (m,) ndarray
        Of the fits, with the uncertainties as given.
    degrees_of_freedom, stated, choice
        As for :func:`judge_scatter`, the same for all.

    Returns
    -------
    (m,) ndarray of bool

    Raises
    ------
    InputError
        As :func:`judge_scatter` does.
    """
    from scipy.special import chdtrc

    nu = degrees_of_freedom
    one = judge_scatter(0.0, nu, stated=stated, choice=choice)
    if one.from_scatter or choice is not None or nu <= 0:
        return np.full(len(chi_square), one.from_scatter)
    return np.asarray(chdtrc(nu, chi_square) < SIGNIFICANCE)


def scale_nodes(chi_square: float, degrees_of_freedom: int) -> FloatArray:
    """Return values of σ that hold its distribution given the scatter, equally spaced in ln σ.

    Nodes stand at whole multiples of their spacing, so that many data sets share them.

    Parameters
    ----------
    chi_square, degrees_of_freedom
        Of the fit with unit σ.

    Returns
    -------
    (25,) ndarray
        From the σ below which all but a tail of its distribution lies, to that above which it
        does: σ² = χ²/χ²_ν (JCGM 101, 6.4.9, for Student's t as a scale mixture of normals).
    """
    first, spacing = first_scale_node(np.array([chi_square]), degrees_of_freedom)
    return scale_nodes_from(int(first[0]), spacing)


def first_scale_node(chi_square: FloatArray, degrees_of_freedom: int) -> tuple[IndexArray, float]:
    """Return the first node of each data set as a multiple of the spacing, and the spacing.

    Parameters
    ----------
    chi_square : (m,) ndarray
        Of the fits with unit σ.
    degrees_of_freedom
        The same for all.
    """
    from scipy.special import chdtri

    most, least = chdtri(degrees_of_freedom, np.array([_SCALE_TAIL, 1 - _SCALE_TAIL]))
    spacing = 0.5 * math.log(most / least) / (_SCALE_STEPS - 1)
    # A fit that happens to leave no residual still has the rounding of the numbers it was given.
    lowest = np.maximum(np.sqrt(chi_square / most), 1e-12)
    return np.floor(np.log(lowest) / spacing).astype(np.intp), spacing


def scale_nodes_from(first: int, spacing: float) -> FloatArray:
    """Return the nodes of σ that begin at a multiple of their spacing."""
    return np.asarray(np.exp(spacing * np.arange(first, first + _SCALE_STEPS + 1)))
