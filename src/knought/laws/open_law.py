"""The open law: every shape that chemistry allows the salt effect, instead of one.

    log10 k = log10 k° + Δz² A(T) [ √I/(1 + B å √I) - c I ] + β I

contains or closely follows the extended, Güntelberg, Davies, SIT and Pitzer forms. What chemistry
knows of å, c and β enters as priors. Given å and c, the rest is linear; so the law is a small grid
of (å, c) with a weight each, and every point of it an ordinary :class:`SaltLaw`.

Whether å or B å is the same at every temperature is left open as well, with even odds: two cells
for each (å, c).

The grid: Gauss-Legendre nodes in å over its uniform prior (the posterior need not vanish at the
ends, where a trapezoid would be crude) and equally spaced nodes in c over ±3 standard deviations
(the trapezoid rule converges fastest for what falls off like a normal distribution).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.activity import OpenForm
from knought.errors import InputError
from knought.given import given_pair
from knought.laws.salt import OPEN, SaltLaw

__all__ = ["DEFAULT_PRIORS", "OpenGrid", "Priors", "open_grid"]

#: Nodes of å and of c: with twice as many, results move by less than a hundredth of their u.
_ION_SIZE_NODES = 17
_LINEAR_NODES = 13

#: The grid in c reaches this many prior standard deviations to each side.
_LINEAR_REACH = 3.0

_ANGSTROM = 1e-10


@dataclass(frozen=True)
class Priors:
    """What is known of the open law before looking at the data.

    Parameters
    ----------
    ion_size
        Lower and upper bound of å in m, between which it is uniform; equal bounds fix it.
    linear_coefficient
        Mean and standard uncertainty of c in L/mol, normal; zero uncertainty fixes it.
    interaction_coefficient
        Mean and standard uncertainty of β in L/mol, normal.
    constant_size
        Probability that it is å that is the same at every temperature, as in the extended law, and
        not the product B å, as in the others; 0 or 1 decides it.

    Raises
    ------
    InputError
        If bounds are out of order or not positive, or an uncertainty is negative.
    """

    ion_size: tuple[float, float] = (1 * _ANGSTROM, 12 * _ANGSTROM)
    linear_coefficient: tuple[float, float] = (0.1, 0.3)
    interaction_coefficient: tuple[float, float] = (0.0, 0.3)
    constant_size: float = 0.5

    def __post_init__(self) -> None:
        for name in ("ion_size", "linear_coefficient", "interaction_coefficient"):
            pair = given_pair(getattr(self, name), f"the prior of {name}")
            object.__setattr__(self, name, pair)
        low, high = self.ion_size
        if not (0 < low <= high < np.inf):
            raise InputError(
                f"the bounds of the ion size are {low:g} m and {high:g} m",
                "give a lower and an upper bound above zero, in m: 1e-10 and 12e-10",
            )
        if high > 100 * _ANGSTROM:
            raise InputError(
                f"an ion size of {high:g} m is far larger than any ion",
                "give it in m: 4.5 Å is 4.5e-10",
            )
        for name in ("linear_coefficient", "interaction_coefficient"):
            mean, deviation = getattr(self, name)
            if not (np.isfinite(mean) and 0 <= deviation < np.inf):
                raise InputError(
                    f"the prior of {name} is {mean:g} ± {deviation:g}",
                    "give a finite mean and a standard uncertainty of at least zero, in L/mol",
                )
        if not 0 <= self.constant_size <= 1:
            raise InputError(
                f"the probability of a constant ion size is {self.constant_size:g}",
                "give it between 0 and 1",
            )
        if self.interaction_coefficient[1] == 0 and self.interaction_coefficient[0] != 0:
            # A fixed β other than zero would have to be carried as an offset: one more path for
            # something a narrow prior says just as well.
            raise InputError(
                "the interaction coefficient is fixed at a value other than zero",
                "give it a small standard uncertainty, 0.001 L/mol, instead of none",
            )


DEFAULT_PRIORS = Priors()


@dataclass(frozen=True, eq=False)
class OpenGrid:
    """The open law laid out as cells, each an ordinary salt law.

    Attributes
    ----------
    law
        The salt law whose form holds å and c as arrays of shape ``(c, 1)``: its columns have shape
        ``(c, n)``.
    ion_size, linear_coefficient : (c,) ndarray
        å in m and c in L/mol of each cell.
    follows_water : (c,) ndarray
        1 where å is the same at every temperature, 0 where B å is.
    log_weight : (c,) ndarray
        Logarithm of each cell's prior weight; the weights add up to one.
    priors
        What it was made from.
    """

    law: SaltLaw
    ion_size: FloatArray
    linear_coefficient: FloatArray
    follows_water: FloatArray
    log_weight: FloatArray
    priors: Priors

    @property
    def cells(self) -> int:
        """Number of cells."""
        return len(self.log_weight)

    @property
    def central(self) -> SaltLaw:
        """The ordinary salt law of the cell with the largest prior weight."""
        return self.cell(int(np.argmax(self.log_weight)))

    def cell(self, number: int) -> SaltLaw:
        """Return the ordinary salt law of one cell."""
        form = OpenForm(
            ion_size=float(self.ion_size[number]),
            linear_coefficient=float(self.linear_coefficient[number]),
            follows_water=float(self.follows_water[number]),
        )
        return replace(self.law, form=form)

    def with_charges(self, charge_product: float) -> OpenGrid:
        """Return the grid with the charges known."""
        return replace(self, law=self.law.with_charges(charge_product))


def open_grid(priors: Priors = DEFAULT_PRIORS, refinement: int = 1) -> OpenGrid:
    """Lay out the open law as a grid of cells.

    Parameters
    ----------
    priors
        What is known of å, c and β.
    refinement
        Multiplies the number of nodes in both directions; 2 or more serve to show that the grid is
        fine enough.

    Returns
    -------
    OpenGrid
        17 x 13 x 2 cells at `refinement` 1 with the default priors.
    """
    sizes, size_weights = _uniform_nodes(*priors.ion_size, _ION_SIZE_NODES * refinement)
    linears, linear_weights = _normal_nodes(
        *priors.linear_coefficient, (_LINEAR_NODES - 1) * refinement + 1
    )
    odds = np.array([1 - priors.constant_size, priors.constant_size])
    follows = np.flatnonzero(odds > 0).astype(float)
    size, linear, share = (
        axis.ravel() for axis in np.meshgrid(sizes, linears, follows, indexing="ij")
    )
    weight = np.einsum("a,b,c->abc", size_weights, linear_weights, odds[odds > 0]).ravel()
    return OpenGrid(
        law=_stacked_law(size, linear, share, priors.interaction_coefficient[1] > 0),
        ion_size=frozen(size),
        linear_coefficient=frozen(linear),
        follows_water=frozen(share),
        log_weight=frozen(np.log(weight / weight.sum())),
        priors=priors,
    )


def narrowed(priors: Priors, factor: float) -> Priors:
    """Return `priors` with every width multiplied by `factor` about its centre.

    Ion sizes keep within 0.1 Å and 30 Å.
    """
    low, high = priors.ion_size
    centre, half = (low + high) / 2, (high - low) / 2 * factor
    return replace(
        priors,
        ion_size=(max(0.1 * _ANGSTROM, centre - half), min(30 * _ANGSTROM, centre + half)),
        linear_coefficient=(priors.linear_coefficient[0], priors.linear_coefficient[1] * factor),
        interaction_coefficient=(
            priors.interaction_coefficient[0],
            priors.interaction_coefficient[1] * factor,
        ),
    )


def _stacked_law(
    size: FloatArray, linear: FloatArray, share: FloatArray, fits_interaction: bool
) -> SaltLaw:
    form = OpenForm(size[:, None], linear[:, None], share[:, None])
    return SaltLaw(OPEN, "open law", form, fits_interaction=fits_interaction)


def _uniform_nodes(low: float, high: float, nodes: int) -> tuple[FloatArray, FloatArray]:
    if low == high:
        return np.array([low]), np.array([1.0])
    x, weight = np.polynomial.legendre.leggauss(nodes)
    return (low + high) / 2 + (high - low) / 2 * x, weight / 2


def _normal_nodes(mean: float, deviation: float, nodes: int) -> tuple[FloatArray, FloatArray]:
    if deviation == 0:
        return np.array([mean]), np.array([1.0])
    z = np.linspace(-_LINEAR_REACH, _LINEAR_REACH, nodes)
    weight = np.exp(-0.5 * z**2)
    return mean + deviation * z, weight / weight.sum()
