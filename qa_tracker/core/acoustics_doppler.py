"""Doppler: the shift of an echo, the velocity from it, and what a wrongly set angle does to that velocity.

What is taken and given, and refused, is said in ``acoustic_quantities``.
"""

from __future__ import annotations

from typing import Final

import numpy as np

from qa_tracker.core.acoustic_quantities import FloatArray, Quantity, finite, first, given, positive
from qa_tracker.core.constants import SOFT_TISSUE_SPEED_M_S
from qa_tracker.core.errors import Invalid

MOST_SET_DEG: Final = 89.0
"""Largest angle a velocity is worked out for: at a right angle there is no shift to work from."""


def angle(value: Quantity, field: str, most: float) -> FloatArray:
    """Take angles between beam and motion from 0 degrees to ``most``, or refuse them (``acoustics.angle``)."""
    array = finite(value, field)
    if shown := first(array, (array < 0) | (array > most)):
        raise Invalid("acoustics.angle", field=field, value=shown, most=f"{most:g}")
    return array


def _cosine(angle_deg: FloatArray) -> FloatArray:
    """By the sine of the rest to 90 degrees, so that it is 0 at a right angle and not 6e-17."""
    return np.sin(np.radians(90 - angle_deg))


def doppler_shift_khz(
    velocity_cm_s: Quantity,
    frequency_mhz: Quantity,
    angle_deg: Quantity,
    speed_m_s: Quantity = SOFT_TISSUE_SPEED_M_S,
) -> Quantity:
    """Return the Doppler shift of an echo, 2 f v cos(theta) / c.

    To first order in v / c of OpenStax College Physics 2e, 17.7, equations 17.43 and 17.45 (two shifts in a row).

    Parameters
    ----------
    velocity_cm_s
        Any finite number (``acoustics.not_finite``), or an array; towards the probe the shift is positive.
    frequency_mhz, speed_m_s
        Above zero (``acoustics.not_positive``).
    angle_deg
        Between beam and motion, 0 to 180 (``acoustics.angle``).

    Examples
    --------
    >>> round(doppler_shift_khz(20, 2.5, 0), 3)
    0.649
    """
    velocity, frequency = finite(velocity_cm_s, "velocity_cm_s"), positive(frequency_mhz, "frequency_mhz")
    along = _cosine(angle(angle_deg, "angle_deg", 180))
    return given(20 * frequency * velocity * along / positive(speed_m_s, "speed_m_s"))


def doppler_velocity_cm_s(
    shift_khz: Quantity,
    frequency_mhz: Quantity,
    angle_deg: Quantity,
    speed_m_s: Quantity = SOFT_TISSUE_SPEED_M_S,
) -> Quantity:
    """Return the velocity a shift stands for, v = c df / (2 f cos(theta)); the inverse of ``doppler_shift_khz``.

    Parameters
    ----------
    shift_khz
        Any finite number (``acoustics.not_finite``), or an array.
    frequency_mhz, speed_m_s
        Above zero (``acoustics.not_positive``).
    angle_deg
        As set on the console, 0 to 89 (``acoustics.angle``).

    Examples
    --------
    >>> round(doppler_velocity_cm_s(1.6233766, 5, 60), 3)
    50.0
    """
    shift, frequency = finite(shift_khz, "shift_khz"), positive(frequency_mhz, "frequency_mhz")
    along = _cosine(angle(angle_deg, "angle_deg", MOST_SET_DEG))
    return given(shift * positive(speed_m_s, "speed_m_s") / (20 * frequency * along))


def velocity_error_percent(true_angle_deg: Quantity, set_angle_deg: Quantity) -> Quantity:
    """Return the error of a velocity whose angle was set wrongly, 100 (cos(true) / cos(set) - 1), in percent.

    Exact, from ``doppler_velocity_cm_s``; common practice, no source. To first order it is 100 tan(set) times the
    angle's error in radians, set less true.

    Parameters
    ----------
    true_angle_deg
        Between beam and motion, 0 to 90 (``acoustics.angle``); at 90 the velocity is missed altogether, -100.
    set_angle_deg
        As set on the console, 0 to 89 (``acoustics.angle``).

    Examples
    --------
    Set to 60 degrees while it is 55 or 65, then set to 65 or 55 while it is 60:

    >>> [round(velocity_error_percent(*pair), 1) for pair in ((55, 60), (65, 60), (60, 65), (60, 55))]
    [14.7, -15.5, 18.3, -12.8]
    """
    true = _cosine(angle(true_angle_deg, "true_angle_deg", 90))
    as_set = _cosine(angle(set_angle_deg, "set_angle_deg", MOST_SET_DEG))
    return given(100 * (true / as_set - 1))
