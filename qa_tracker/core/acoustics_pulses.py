"""Wavelength, pulse and echo: how fine a pulse is, how thick its crystal, how long its way to a depth and back.

What is taken and given, and refused, is said in ``acoustic_quantities``.
"""

from __future__ import annotations

from qa_tracker.core.acoustic_quantities import Quantity, given, not_negative, positive
from qa_tracker.core.constants import SOFT_TISSUE_SPEED_M_S


def wavelength_mm(frequency_mhz: Quantity, speed_m_s: Quantity = SOFT_TISSUE_SPEED_M_S) -> Quantity:
    """Return the wavelength, lambda = c / f.

    OpenStax College Physics 2e, 17.7 (0.22 mm at 7 MHz).

    Parameters
    ----------
    frequency_mhz, speed_m_s
        Above zero (``acoustics.not_positive``); numbers or arrays that broadcast.

    Examples
    --------
    >>> wavelength_mm(7.0)
    0.22
    """
    frequency, speed = positive(frequency_mhz, "frequency_mhz"), positive(speed_m_s, "speed_m_s")
    return given(speed / frequency / 1e3)


def crystal_thickness_mm(frequency_mhz: Quantity, speed_m_s: Quantity) -> Quantity:
    """Return how thick a crystal is that resonates, d = lambda / 2 = c / (2 f), with its own speed of sound.

    Common practice, no source; refused as ``wavelength_mm`` is.

    Examples
    --------
    >>> crystal_thickness_mm(5.0, 5500)
    0.55
    """
    return wavelength_mm(frequency_mhz, speed_m_s) / 2


def axial_resolution_mm(
    frequency_mhz: Quantity, cycles: Quantity, speed_m_s: Quantity = SOFT_TISSUE_SPEED_M_S
) -> Quantity:
    """Return the expected axial resolution, half the spatial pulse length, n lambda / 2.

    Common practice, no source.

    Parameters
    ----------
    cycles
        In a pulse, above zero (``acoustics.not_positive``).
    frequency_mhz, speed_m_s
        As for ``wavelength_mm``.

    Examples
    --------
    >>> round(axial_resolution_mm(7.0, 3), 2)
    0.33
    """
    return given(positive(cycles, "cycles") * wavelength_mm(frequency_mhz, speed_m_s) / 2)


def echo_time_us(depth_cm: Quantity, speed_m_s: Quantity = SOFT_TISSUE_SPEED_M_S) -> Quantity:
    """Return the time to a depth and back, t = 2 d / c; 12.99 us a centimetre in soft tissue.

    OpenStax College Physics 2e, 17.7 (figure 17.42: the time is proportional to the distance).

    Parameters
    ----------
    depth_cm
        Zero or more (``acoustics.negative``), or an array.
    speed_m_s
        Above zero (``acoustics.not_positive``).

    Examples
    --------
    >>> round(echo_time_us(10), 4)
    129.8701
    """
    return given(2e4 * not_negative(depth_cm, "depth_cm") / positive(speed_m_s, "speed_m_s"))


def echo_depth_cm(time_us: Quantity, speed_m_s: Quantity = SOFT_TISSUE_SPEED_M_S) -> Quantity:
    """Return the depth of an echo from its time, d = c t / 2; the inverse of ``echo_time_us``.

    Examples
    --------
    >>> echo_depth_cm(130)
    10.01
    """
    return given(not_negative(time_us, "time_us") * positive(speed_m_s, "speed_m_s") / 2e4)
