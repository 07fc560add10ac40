"""The one array type of the package, and arrays that cannot be changed behind a result's back."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeAlias

import numpy as np
import numpy.typing as npt

from knought.given import real_array

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

__all__ = ["BoolArray", "FloatArray", "IndexArray", "frozen"]

FloatArray: TypeAlias = npt.NDArray[np.float64]
BoolArray: TypeAlias = npt.NDArray[np.bool_]
IndexArray: TypeAlias = npt.NDArray[np.intp]


def frozen(values: ArrayLike) -> FloatArray:
    """Return a read-only copy of `values` as floats, so that no caller's array is shared.

    Parameters
    ----------
    values
        Anything NumPy can turn into floats.

    Returns
    -------
    ndarray
        Same shape, dtype float64, not writeable.

    Raises
    ------
    InputError
        If these are no real numbers.
    """
    array = real_array(values)
    array.setflags(write=False)
    return array
