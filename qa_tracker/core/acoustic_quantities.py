"""Numbers as the acoustic functions take and give them: one or many, finite, in range, refused by name.

Every function of acoustics takes a number, a NumPy scalar or an array for each physical quantity, arrays of shapes
that broadcast, and gives a ``float`` for numbers alone and else an array of the common shape. An empty array gives
an empty one. NaN and infinity are refused (``acoustics.not_finite``), and so is a number beyond 1e15 or, where it
may divide, below 1e-15 (``acoustics.magnitude``): so no result overflows.
"""

from __future__ import annotations

from typing import Final

import numpy as np
from numpy.typing import NDArray

from qa_tracker.core.errors import Invalid

FloatArray = NDArray[np.float64]
Quantity = float | FloatArray

MOST: Final = 1e15
"""Largest magnitude taken, that of a reading as typed."""
LEAST: Final = 1e-15


def first(array: FloatArray, wrong: NDArray[np.bool_]) -> str:
    """Write the first number that is wrong, as a refusal shows it; an empty text where none is.

    Examples
    --------
    >>> numbers = np.asarray([1.0, -2.5, -3.0])
    >>> first(numbers, numbers < 0), first(numbers, numbers > 9)
    ('-2.5', '')
    """
    return f"{array[wrong].flat[0]:g}" if np.any(wrong) else ""


def finite(value: Quantity, field: str) -> FloatArray:
    """Take any finite number.

    Parameters
    ----------
    value
        One number or an array of any shape.
    field
        The name of the quantity, carried by the refusal.

    Raises
    ------
    Invalid
        ``acoustics.not_finite`` or ``acoustics.magnitude``, with the first number that is refused.

    Examples
    --------
    >>> finite(-2.5, "velocity_cm_s")
    array(-2.5)
    """
    array = np.asarray(value, dtype=np.float64)
    if shown := first(array, ~np.isfinite(array)):
        raise Invalid("acoustics.not_finite", field=field, value=shown)
    if shown := first(array, np.abs(array) > MOST):
        raise Invalid("acoustics.magnitude", field=field, value=shown)
    return array


def positive(value: Quantity, field: str) -> FloatArray:
    """Take finite numbers above zero, or refuse them as ``finite`` does and with ``acoustics.not_positive``."""
    array = finite(value, field)
    if shown := first(array, array <= 0):
        raise Invalid("acoustics.not_positive", field=field, value=shown)
    if shown := first(array, array < LEAST):
        raise Invalid("acoustics.magnitude", field=field, value=shown)
    return array


def not_negative(value: Quantity, field: str) -> FloatArray:
    """Take finite numbers of zero or more, or refuse them as ``finite`` does and with ``acoustics.negative``."""
    array = finite(value, field)
    if shown := first(array, array < 0):
        raise Invalid("acoustics.negative", field=field, value=shown)
    return array


def given(value: FloatArray) -> Quantity:
    """Give a result as a plain number where there is but one.

    Examples
    --------
    >>> given(np.asarray(1.5)), given(np.asarray([1.5]))
    (1.5, array([1.5]))
    """
    return float(value) if np.ndim(value) == 0 else value
