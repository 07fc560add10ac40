"""Numbers that a caller gave: real, finite and within bounds, or refused by name."""

from __future__ import annotations

import math
import operator
from typing import TYPE_CHECKING, SupportsIndex, cast

import numpy as np

from knought.errors import InputError

if TYPE_CHECKING:
    from typing import TypeAlias

    from numpy.typing import ArrayLike, NDArray

    # Written out here: `arrays` stands on this file.
    FloatArray: TypeAlias = NDArray[np.float64]

__all__ = [
    "given_count",
    "given_number",
    "given_numbers",
    "given_pair",
    "given_shape",
    "real_array",
    "require_same_shape",
]


def given_numbers(
    values: ArrayLike, name: str, low: float = -math.inf, high: float = math.inf
) -> FloatArray:
    """Return `values` as an array of finite numbers that is shared with nobody.

    Parameters
    ----------
    values : (...) array_like
        What the caller gave: numbers, lists, arrays of any real type.
    name
        What it is called in the message.
    low, high
        Bounds, themselves allowed.

    Returns
    -------
    ndarray
        Same shape, float64.

    Raises
    ------
    InputError
        If these are no real numbers in one rectangular array, there are none, or one is not
        finite or out of bounds.
    """
    array = real_array(values, name)
    if array.size == 0:
        raise InputError(f"{name} is empty", "give at least one number")
    wrong = ~(np.isfinite(array) & (array >= low) & (array <= high))
    if np.any(wrong):
        raise InputError(f"{name} is {array[wrong].flat[0]:g}", _bounds(low, high))
    return array


def real_array(values: ArrayLike, name: str = "a value") -> FloatArray:
    """Return `values` as a new float64 array; a masked value becomes nan.

    Raises
    ------
    InputError
        If these are no real numbers in one rectangular array.
    """
    remedy = "give real numbers, or one rectangular array of them"
    try:
        if np.ma.isMaskedArray(values):
            values = np.ma.filled(np.ma.asarray(values, dtype=np.float64), np.nan)
        is_complex = np.iscomplexobj(values)
        array = np.array(np.real(values) if is_complex else values, dtype=np.float64)
    except (TypeError, OverflowError, ValueError) as error:
        raise InputError(f"{name} is no number, or its rows differ in length", remedy) from error
    if is_complex:
        raise InputError(f"{name} holds complex numbers", remedy)
    return array


def given_number(value: object, name: str, low: float = -math.inf, high: float = math.inf) -> float:
    """Return `value` as one finite number; arguments as for :func:`given_numbers`.

    Raises
    ------
    InputError
        If it is no single real number, not finite, or out of bounds.
    """
    array = given_numbers(cast("ArrayLike", value), name, low, high)
    if array.ndim:
        raise InputError(f"{name} has shape {array.shape}", "give one number")
    return float(array)


def given_count(value: object, name: str, low: int, high: int) -> int:
    """Return `value` as a whole number; arguments as for :func:`given_numbers`.

    Raises
    ------
    InputError
        If it is no whole number, or out of bounds.
    """
    try:
        count = operator.index(cast("SupportsIndex", value))
    except TypeError as error:
        raise InputError(f"{name} is no whole number", _bounds(low, high)) from error
    if not low <= count <= high:
        raise InputError(f"{name} is out of range", _bounds(low, high))
    return count


def given_pair(values: object, name: str) -> tuple[float, float]:
    """Return `values` as two finite numbers.

    Raises
    ------
    InputError
        If these are not two real numbers.
    """
    array = given_numbers(cast("ArrayLike", values), name)
    if array.shape != (2,):
        raise InputError(f"{name} has shape {array.shape}", "give two numbers")
    return float(array[0]), float(array[1])


def given_shape(values: FloatArray, shape: tuple[int, ...], name: str) -> FloatArray:
    """Return `values` broadcast to `shape`.

    Raises
    ------
    InputError
        If they cannot be.
    """
    try:
        return np.broadcast_to(values, shape)
    except ValueError as error:
        raise InputError(
            f"{name} has shape {values.shape}", f"give it with shape {shape}"
        ) from error


def require_same_shape(T: FloatArray, I: FloatArray) -> None:
    """Refuse temperatures and ionic strengths that cannot be paired.

    Raises
    ------
    InputError
        If their shapes do not broadcast to one dimension.
    """
    try:
        shape = np.broadcast_shapes(T.shape, I.shape)
    except ValueError as error:
        raise InputError(
            f"T has shape {T.shape} and I {I.shape}", "give one I for each T, or one for all"
        ) from error
    if len(shape) > 1:
        raise InputError(
            f"T and I have shape {shape}", "give them as numbers or one-dimensional arrays"
        )


def _bounds(low: float, high: float) -> str:
    if math.isinf(low) and math.isinf(high):
        return "give a finite number"
    if math.isinf(high):
        return f"give a finite number of at least {low:g}"
    return f"give a number from {low:g} to {high:g}"
