"""The acoustics of interfaces and losses that a physicist needs while testing.

Figures, not verdicts: binary floats serve. What is taken and given, and refused, is said in ``acoustic_quantities``.
"""

from __future__ import annotations

import math

import numpy as np

from qa_tracker.core.acoustic_quantities import (
    FloatArray,
    Quantity,
    finite,
    first,
    given,
    not_negative,
    positive,
)
from qa_tracker.core.constants import DB_PER_NP
from qa_tracker.core.errors import Invalid


def impedance_mrayl(density_kg_m3: Quantity, speed_m_s: Quantity) -> Quantity:
    """Return the characteristic acoustic impedance, Z = rho c, in MRayl (1e6 kg / (m2 s)).

    OpenStax College Physics 2e, 17.7, equation 17.38.

    Parameters
    ----------
    density_kg_m3, speed_m_s
        Above zero (``acoustics.not_positive``); numbers or arrays that broadcast.

    Examples
    --------
    >>> impedance_mrayl(925, 1450)
    1.34125
    """
    density, speed = positive(density_kg_m3, "density_kg_m3"), positive(speed_m_s, "speed_m_s")
    return given(density * speed / 1e6)


def reflected_intensity(first_mrayl: Quantity, second_mrayl: Quantity) -> Quantity:
    """Return the share of intensity reflected at normal incidence, R = ((Z2 - Z1) / (Z2 + Z1))^2, 0 to 1.

    OpenStax College Physics 2e, 17.7, equation 17.39. For a plane boundary that is wide against the wavelength.

    Parameters
    ----------
    first_mrayl, second_mrayl
        Impedances of both sides, above zero (``acoustics.not_positive``); numbers or arrays that broadcast. Which
        comes first makes no difference.

    Examples
    --------
    >>> round(reflected_intensity(1.34, 1.70), 7)
    0.0140235
    """
    first, second = positive(first_mrayl, "first_mrayl"), positive(second_mrayl, "second_mrayl")
    return given(((second - first) / (second + first)) ** 2)


def transmitted_intensity(first_mrayl: Quantity, second_mrayl: Quantity) -> Quantity:
    """Return the share of intensity that passes at normal incidence, T = 4 Z1 Z2 / (Z1 + Z2)^2 = 1 - R.

    OpenStax College Physics 2e, 17.7, worked example after equation 17.39: what is not reflected is transmitted.
    The product form keeps its digits where almost all is reflected.

    Parameters
    ----------
    first_mrayl, second_mrayl
        As for ``reflected_intensity``.

    Examples
    --------
    >>> round(transmitted_intensity(1.34, 1.70), 7)
    0.9859765
    """
    first, second = positive(first_mrayl, "first_mrayl"), positive(second_mrayl, "second_mrayl")
    both = first + second
    return given(4 * (first / both) * (second / both))


def db_from_np(loss_np: Quantity) -> Quantity:
    """Return a level difference in decibels, L_dB = (20 / ln 10) L_Np.

    ISO 80000-8, IEC 60027-3 (definitions).

    Parameters
    ----------
    loss_np
        Any finite number (``acoustics.not_finite``), or an array; likewise for a coefficient in Np/cm.

    Examples
    --------
    >>> round(db_from_np(1), 9)
    8.685889638
    """
    return given(finite(loss_np, "loss_np") * DB_PER_NP)


def np_from_db(loss_db: Quantity) -> Quantity:
    """Return a level difference in nepers, L_Np = L_dB ln 10 / 20; the inverse of ``db_from_np``.

    Examples
    --------
    >>> round(np_from_db(20), 6)
    2.302585
    """
    return given(finite(loss_db, "loss_db") / DB_PER_NP)


def attenuation_db(
    coefficient_db_cm_mhz: Quantity,
    frequency_mhz: Quantity,
    depth_cm: Quantity,
    *,
    both_ways: bool,
    power: Quantity = 1.0,
) -> Quantity:
    """Return the loss along a depth, L = a f^n d, or for an echo there and back, L = 2 a f^n d, in dB.

    Common practice, no source. Linear (n = 1) for soft tissue, as its coefficient in dB/(cm MHz) means; n = 2 for
    water, whose coefficient is in dB/(cm MHz2).

    Parameters
    ----------
    coefficient_db_cm_mhz, depth_cm
        Zero or more (``acoustics.negative``); numbers or arrays that broadcast.
    frequency_mhz
        Above zero (``acoustics.not_positive``).
    both_ways
        Whether the sound comes back.
    power
        The power n of the frequency, 0 to 2 (``acoustics.power``).

    Examples
    --------
    >>> attenuation_db(0.5, 3.5, 10, both_ways=False), attenuation_db(0.5, 3.5, 10, both_ways=True)
    (17.5, 35.0)
    """
    coefficient = not_negative(coefficient_db_cm_mhz, "coefficient_db_cm_mhz")
    frequency, depth = positive(frequency_mhz, "frequency_mhz"), not_negative(depth_cm, "depth_cm")
    return given(coefficient * frequency ** frequency_power(power, "power") * depth * (2 if both_ways else 1))


def frequency_power(value: Quantity, field: str) -> FloatArray:
    """Take powers of the frequency that a loss goes with, 0 to 2, or refuse them (``acoustics.power``)."""
    array = finite(value, field)
    if shown := first(array, (array < 0) | (array > 2)):
        raise Invalid("acoustics.power", field=field, value=shown)
    return array


def pressure_share(loss_db: Quantity) -> Quantity:
    """Return what a loss leaves of the pressure, p / p0 = 10^(-L / 20), 0 to 1.

    ISO 80000-8, IEC 60027-3 (definitions).

    Parameters
    ----------
    loss_db
        Zero or more (``acoustics.negative``), or an array. A loss of thousands of decibels leaves 0.

    Examples
    --------
    >>> round(pressure_share(35), 8)
    0.01778279
    """
    return given(10.0 ** (-not_negative(loss_db, "loss_db") / 20))


def intensity_share(loss_db: Quantity) -> Quantity:
    """Return what a loss leaves of the intensity, I / I0 = 10^(-L / 10), 0 to 1.

    ISO 80000-8, IEC 60027-3 (definitions): the square of ``pressure_share``, and refused as it is.

    Examples
    --------
    >>> round(intensity_share(35), 10)
    0.0003162278
    """
    return given(10.0 ** (-not_negative(loss_db, "loss_db") / 10))


def intensity_coefficient_per_cm(loss_db_cm: Quantity) -> Quantity:
    """Return the coefficient mu of I = I0 exp(-mu x) that a loss per centimetre stands for, mu = L ln 10 / 10.

    It is twice the coefficient of pressure in Np/cm. Zero or more (``acoustics.negative``).

    Examples
    --------
    >>> round(intensity_coefficient_per_cm(10), 6)
    2.302585
    """
    return given(not_negative(loss_db_cm, "loss_db_cm") * (math.log(10) / 10))


def remaining_intensity(initial: Quantity, coefficient_per_cm: Quantity, path_cm: Quantity) -> Quantity:
    """Return the intensity left after a path, I = I0 exp(-mu x), in the unit of the initial one.

    Common practice, no source (Beer and Lambert's law).

    Parameters
    ----------
    initial, coefficient_per_cm, path_cm
        Zero or more (``acoustics.negative``); numbers or arrays that broadcast. The path is the whole way of the
        sound: for an echo, twice the depth.

    Examples
    --------
    >>> round(remaining_intensity(100, intensity_coefficient_per_cm(1), 10), 6)
    10.0
    """
    start, path = not_negative(initial, "initial"), not_negative(path_cm, "path_cm")
    return given(start * np.exp(-not_negative(coefficient_per_cm, "coefficient_per_cm") * path))
