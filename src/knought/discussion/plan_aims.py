"""What a plan is for, as a number to make small: u of one quantity, of all, or a verdict.

| aim | made small |
| a quantity | its variance: c-optimal |
| ``"all"`` | det^(1/t) of the covariance of the t fitted parameters: D-optimal |
| charge products a and b | 1/(log odds of the true one against the other) |
| salt laws a and b | 1/χ² of the wrong law on the other's data, whichever is less: T-optimal |

(Fedorov, Theory of Optimal Experiments, 1972; Atkinson and Fedorov, Biometrika 62 (1975) 57 for the
last.) Every one of them falls like 1/n with the number of runs n, as a variance does, so that
efficiencies and the cost of changing temperature read alike for all.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from knought.errors import InputError, quoted
from knought.laws.activation import activation_rows
from knought.laws.salt import SALT_LAWS
from knought.laws.surface import Rows
from knought.laws.temperature import TEMPERATURE_LAWS

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.discussion.cell_information import Moments
    from knought.discussion.plan_model import PlanModel

__all__ = ["QUANTITIES_AIMED_AT", "Aim", "aim_rows", "aim_score", "headline_rows", "read_aim"]

#: Quantities that a plan can be for, in the order in which they are shown.
QUANTITIES_AIMED_AT = (
    "rate_constant",
    "activation_energy",
    "ln_pre_exponential_factor",
    "activation_enthalpy",
    "activation_entropy",
    "activation_gibbs_energy",
    "activation_heat_capacity",
    "charge_product",
)

_NUMBER = r"([+-]?\d+(?:\.\d*)?(?:[eE][+-]?\d+)?)"
_RATE_CONSTANT = re.compile(
    rf"rate_constant\s+at\s+{_NUMBER}\s*K?\s*(?:,|and)\s*{_NUMBER}\s*(?:mol/L)?$"
)
_CHARGES = re.compile(rf"charge[ _]products?\s+{_NUMBER}\s+(?:and|or|from|,)\s+{_NUMBER}$")
_LAWS = re.compile(r"laws?\s+([a-z-]+)\s+(?:and|or|from|,)\s+([a-z-]+)$")

#: The log odds are never taken as smaller than this, so that the aim stays finite.
_LEAST_ODDS = 1e-9

Kind = Literal["quantity", "all", "rate_constant", "charge_products", "laws"]


@dataclass(frozen=True)
class Aim:
    """What a plan is for.

    Attributes
    ----------
    kind
        ``"quantity"``, ``"all"``, ``"rate_constant"`` (at T and I), ``"charge_products"`` (telling
        two apart) or ``"laws"`` (telling two apart).
    name
        Name of the quantity.
    T, I
        K and mol/L, for a rate constant.
    pair
        The charge products: the true one and the rival.
    laws
        The two laws.
    """

    kind: Kind
    name: str = ""
    T: float | None = None
    I: float = 0.0
    pair: tuple[float, float] = (0.0, 0.0)
    laws: tuple[str, str] = ("", "")

    @property
    def words(self) -> str:
        """The aim in words."""
        if self.kind == "all":
            return "all fitted parameters together"
        if self.kind == "rate_constant":
            return f"k at {self.T:.2f} K and I = {self.I:.4g} mol/L"
        if self.kind == "charge_products":
            return f"telling z_A z_B = {self.pair[0]:g} from {self.pair[1]:g}"
        if self.kind == "laws":
            return f"telling the laws {self.laws[0]} and {self.laws[1]} apart"
        from knought.chemistry.quantities import quantity

        return quantity(self.name).words


def read_aim(text: str | Aim) -> Aim:
    """Read what a plan is for.

    Parameters
    ----------
    text
        The name of a quantity (``"activation_energy"``), ``"all"``,
        ``"rate_constant at 310.15 K, 0.15 mol/L"``, ``"charge products 2 and 3"`` (the first
        is taken as true) or ``"laws guntelberg and davies"``.

    Raises
    ------
    InputError
        If it is none of these.
    """
    if isinstance(text, Aim):
        return text
    plain = " ".join(text.split())
    if plain in QUANTITIES_AIMED_AT:
        return Aim("quantity", plain)
    if plain == "all":
        return Aim("all")
    if found := _RATE_CONSTANT.match(plain):
        T, I = float(found[1]), float(found[2])
        if T <= 0 or I < 0:
            raise InputError(f"the aim {quoted(text)} has no such condition", "give T in K and I")
        return Aim("rate_constant", "rate_constant", T=T, I=I)
    if found := _CHARGES.match(plain):
        pair = float(found[1]), float(found[2])
        if pair[0] == pair[1]:
            raise InputError(f"the charge products of the aim {quoted(text)} are the same", "")
        return Aim("charge_products", "charge_product", pair=pair)
    if (found := _LAWS.match(plain)) and (aim := _law_aim(found[1], found[2])) is not None:
        return aim
    raise InputError(
        f"no plan has the aim {quoted(text)}",
        f"choose from {', '.join(QUANTITIES_AIMED_AT)}, all, 'rate_constant at 310.15 K, 0.15 "
        "mol/L', 'charge products 2 and 3', 'laws guntelberg and davies'",
    )


def _law_aim(one: str, other: str) -> Aim | None:
    """Return the aim of telling two laws apart; None where it is none."""
    if one != other and one in SALT_LAWS and other in SALT_LAWS:
        return Aim("laws", laws=(one, other))
    if one in TEMPERATURE_LAWS and other in TEMPERATURE_LAWS:
        curved = [
            "activation_heat_capacity" in TEMPERATURE_LAWS[x].parameters for x in (one, other)
        ]
        # Of nested linear models the larger has one parameter more, and telling them apart is
        # the same as finding it (Atkinson and Fedorov 1975, section 3).
        if sum(curved) == 1:
            return Aim("quantity", "activation_heat_capacity")
    return None


def headline_rows(model: PlanModel) -> dict[str, Rows]:
    """Return every headline quantity as an affine function of the parameters, in every cell.

    Parameters
    ----------
    model
        What will be fitted.

    Returns
    -------
    dict
        Quantity name to rows ``(c, 1, p)``, at T_ref and I → 0; ``rate_constant`` is ln k, so that
        its u is relative.
    """
    surface = model.surface
    rows = activation_rows(surface, surface.reference_temperature)
    found = {"rate_constant": rows.pop("ln_rate_constant"), **rows}
    for name in ("activation_heat_capacity", "charge_product"):
        if name in model.parameters:
            found[name] = _parameter(model, name)
    return {name: model.in_cells(found[name]) for name in QUANTITIES_AIMED_AT if name in found}


def _parameter(model: PlanModel, *names: str) -> Rows:
    where = [model.parameters.index(name) for name in names]
    return Rows(np.zeros(len(where)), np.eye(len(model.parameters))[where])


def aim_rows(aim: Aim, model: PlanModel) -> Rows:
    """Return the affine functions of the parameters that an aim is about, in every cell.

    Raises
    ------
    InputError
        If the fit will not have the quantity.
    """
    if aim.kind == "all":
        names = [name for name in model.parameters if name != "interaction_coefficient"]
        return model.in_cells(_parameter(model, *names))
    if aim.kind == "rate_constant":
        return model.in_cells(model.surface.ln_k(np.array([aim.T]), np.array([aim.I])))
    known = headline_rows(model)
    if aim.name not in known:
        raise InputError(
            f"the runs of this plan cannot give {aim.name}, by the laws "
            f"{model.surface.temperature_law.name} and {model.surface.salt_law.name}",
            f"choose an aim from {', '.join(known)}, or give more temperatures or ionic strengths",
        )
    return known[aim.name]


def aim_score(aim: Aim, moments: Moments) -> FloatArray:
    """Return what is to be made small after each of d designs, shape ``(d,)``.

    Parameters
    ----------
    aim
        The aim; not that of two laws, which compares fits.
    moments
        Of the functions of :func:`aim_rows`.
    """
    if aim.kind == "charge_products":
        odds = _log_density(moments, aim.pair[0]) - _log_density(moments, aim.pair[1])
        return np.asarray(1.0 / np.maximum(odds, _LEAST_ODDS))
    total = moments.total
    if aim.kind == "all":
        return np.asarray(np.exp(np.linalg.slogdet(total)[1] / total.shape[-1]))
    return np.asarray(total[:, 0, 0])


def _log_density(moments: Moments, at: float) -> FloatArray:
    """Return the logarithm of the mixture's density of the first target, ``(d,)``."""
    variance = moments.covariance[..., 0, 0]
    each = (
        np.log(np.maximum(moments.weight, 1e-300))
        - 0.5 * (at - moments.location[..., 0]) ** 2 / variance
        - 0.5 * np.log(variance)
    )
    highest = each.max(axis=0)
    return np.asarray(highest + np.log(np.exp(each - highest).sum(axis=0)))
