"""The acoustics a physicist needs while testing: interfaces, losses, wavelengths, echoes, Doppler, sound speeds.

Figures, not verdicts: binary floats serve. The one correction that may feed a verdict, of a distance for the speed
of sound, is exact and in decimals.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from decimal import Decimal
from fractions import Fraction

from qa_tracker.core.constants import DB_PER_NP, SOFT_TISSUE_SPEED
from qa_tracker.core.decimals import round_half_even
from qa_tracker.core.errors import Invalid
from qa_tracker.core.library_specs import DwellSpec

WATER_RANGE_DEGC = (0.0, 95.0)
WATER_COEFFICIENTS = (1402.385, 5.038813, -5.799136e-2, 3.287156e-4, -1.398845e-6, 2.787860e-9)
AIR_RANGE_DEGC = (-20.0, 50.0)


def _positive(**given: float) -> None:
    """Refuse what is not finite and above zero, by name (``acoustics.not_positive``)."""
    for name, value in given.items():
        if not math.isfinite(value) or value <= 0:
            raise Invalid("acoustics.not_positive", field=name, value=f"{value:g}")


def _not_negative(**given: float) -> None:
    for name, value in given.items():
        if not math.isfinite(value) or value < 0:
            raise Invalid("acoustics.negative", field=name, value=f"{value:g}")


def impedance_mrayl(density_kg_m3: float, speed_m_s: float) -> float:
    """Return the characteristic acoustic impedance Z = rho c.

    OpenStax College Physics 2e, 17.7, equation 17.35.

    Parameters
    ----------
    density_kg_m3, speed_m_s
        Above zero (``acoustics.not_positive``).

    Returns
    -------
    float
        In MRayl: 1e6 kg / (m2 s).

    Examples
    --------
    >>> round(impedance_mrayl(925, 1450), 2)
    1.34
    """
    _positive(density_kg_m3=density_kg_m3, speed_m_s=speed_m_s)
    return density_kg_m3 * speed_m_s / 1e6


def reflected_intensity(first_mrayl: float, second_mrayl: float) -> float:
    """Return the share of intensity reflected at right angles, R = ((Z2 - Z1) / (Z2 + Z1))^2.

    OpenStax College Physics 2e, 17.7, equation 17.36. The rest, 1 - R, is transmitted.

    Parameters
    ----------
    first_mrayl, second_mrayl
        Impedances of both sides, above zero (``acoustics.not_positive``); which comes first makes no difference.

    Examples
    --------
    >>> round(reflected_intensity(1.34, 1.70), 3)
    0.014
    """
    _positive(first_mrayl=first_mrayl, second_mrayl=second_mrayl)
    return ((second_mrayl - first_mrayl) / (second_mrayl + first_mrayl)) ** 2


def transmitted_intensity(first_mrayl: float, second_mrayl: float) -> float:
    """Return the share of intensity that passes at right angles, T = 4 Z1 Z2 / (Z1 + Z2)^2 = 1 - R.

    Examples
    --------
    >>> round(transmitted_intensity(1.34, 1.70), 3)
    0.986
    """
    _positive(first_mrayl=first_mrayl, second_mrayl=second_mrayl)
    return 4 * first_mrayl * second_mrayl / (first_mrayl + second_mrayl) ** 2


def db_from_np(loss_np: float) -> float:
    """Return a level difference in decibels: 1 Np = 20 / ln 10 dB (ISO 80000-8).

    Examples
    --------
    >>> round(db_from_np(1), 9)
    8.685889638
    """
    return loss_np * DB_PER_NP


def np_from_db(loss_db: float) -> float:
    """Return a level difference in nepers.

    Examples
    --------
    >>> round(np_from_db(8.685889638), 9)
    1.0
    """
    return loss_db / DB_PER_NP


def attenuation_db(
    coefficient_db_cm_mhz: float, frequency_mhz: float, depth_cm: float, *, both_ways: bool = True
) -> float:
    """Return the loss over a depth, a f d, and twice that for an echo (``both_ways``).

    Linear in frequency, which holds for soft tissue roughly and for water not at all (common practice, no source).

    Parameters
    ----------
    coefficient_db_cm_mhz, depth_cm
        Zero or more (``acoustics.negative``).
    frequency_mhz
        Above zero (``acoustics.not_positive``).

    Examples
    --------
    >>> attenuation_db(0.5, 3.5, 10)
    35.0
    """
    _not_negative(coefficient_db_cm_mhz=coefficient_db_cm_mhz, depth_cm=depth_cm)
    _positive(frequency_mhz=frequency_mhz)
    return coefficient_db_cm_mhz * frequency_mhz * depth_cm * (2 if both_ways else 1)


def intensity_share(loss_db: float) -> float:
    """Return what a loss leaves of the intensity, 10^(-L / 10), as I = I0 exp(-mu x) with mu x = L ln 10 / 10.

    Parameters
    ----------
    loss_db
        Any finite number (``acoustics.not_finite``); a gain gives more than one.

    Examples
    --------
    >>> round(intensity_share(35), 7)
    0.0003162
    """
    if not math.isfinite(loss_db):
        raise Invalid("acoustics.not_finite", field="loss_db", value=f"{loss_db:g}")
    return float(10 ** (-loss_db / 10))


def wavelength_mm(frequency_mhz: float, speed_m_s: float = SOFT_TISSUE_SPEED.value) -> float:
    """Return lambda = c / f.

    Examples
    --------
    >>> wavelength_mm(7.0)
    0.22
    """
    _positive(frequency_mhz=frequency_mhz, speed_m_s=speed_m_s)
    return speed_m_s / frequency_mhz / 1e3


def axial_resolution_mm(
    frequency_mhz: float, cycles: float = 2.0, speed_m_s: float = SOFT_TISSUE_SPEED.value
) -> float:
    """Return the expected axial resolution, half the length of a pulse: n lambda / 2 (common practice, no source).

    Parameters
    ----------
    cycles
        Of a pulse, above zero (``acoustics.not_positive``).

    Examples
    --------
    >>> round(axial_resolution_mm(7.0), 2)
    0.22
    """
    _positive(cycles=cycles)
    return cycles * wavelength_mm(frequency_mhz, speed_m_s) / 2


def echo_time_us(depth_cm: float, speed_m_s: float = SOFT_TISSUE_SPEED.value) -> float:
    """Return the time to a depth and back, 2 d / c: 12.99 us a centimetre in soft tissue.

    Examples
    --------
    >>> round(echo_time_us(10), 4)
    129.8701
    """
    _not_negative(depth_cm=depth_cm)
    _positive(speed_m_s=speed_m_s)
    return 2 * depth_cm / speed_m_s * 1e4


def doppler_shift_khz(
    velocity_cm_s: float, frequency_mhz: float, angle_deg: float, speed_m_s: float = SOFT_TISSUE_SPEED.value
) -> float:
    """Return the Doppler shift 2 f v cos(theta) / c of an echo from something slow against sound.

    OpenStax College Physics 2e, 17.7 (the shift doubles on reflection). Negative away from the probe.

    Parameters
    ----------
    velocity_cm_s
        Finite (``acoustics.not_finite``).
    angle_deg
        Between beam and motion, 0 to 180 (``acoustics.angle``).

    Examples
    --------
    >>> round(doppler_shift_khz(50, 5, 60), 3)
    1.623
    """
    _positive(frequency_mhz=frequency_mhz, speed_m_s=speed_m_s)
    if not math.isfinite(velocity_cm_s):
        raise Invalid("acoustics.not_finite", field="velocity_cm_s", value=f"{velocity_cm_s:g}")
    _check_angle(angle_deg, 180)
    return 2 * frequency_mhz * velocity_cm_s * math.cos(math.radians(angle_deg)) / speed_m_s * 10


def _check_angle(angle_deg: float, most: float, name: str = "angle_deg") -> None:
    if not math.isfinite(angle_deg) or not 0 <= angle_deg <= most:
        raise Invalid("acoustics.angle", field=name, value=f"{angle_deg:g}", most=f"{most:g}")


def velocity_error_percent(true_angle_deg: float, set_angle_deg: float) -> float:
    """Return the error of a velocity from an angle set wrongly: 100 (cos(true) / cos(set) - 1).

    Parameters
    ----------
    true_angle_deg
        0 to 90.
    set_angle_deg
        0 to 89, since at a right angle nothing can be corrected (``acoustics.angle``).

    Examples
    --------
    >>> round(velocity_error_percent(60, 65), 1), round(velocity_error_percent(60, 55), 1)
    (18.3, -12.8)
    """
    _check_angle(true_angle_deg, 90, "true_angle_deg")
    _check_angle(set_angle_deg, 89, "set_angle_deg")
    return 100 * (math.cos(math.radians(true_angle_deg)) / math.cos(math.radians(set_angle_deg)) - 1)


def water_sound_speed_m_s(temperature_degc: float) -> float:
    """Return the speed of sound in pure water at atmospheric pressure.

    ``c = 1402.385 + 5.038813 T - 5.799136e-2 T^2 + 3.287156e-4 T^3 - 1.398845e-6 T^4 + 2.787860e-9 T^5``
    Marczak 1997, JASA 102:2776-2779.

    Parameters
    ----------
    temperature_degc
        0 to 95 (``acoustics.temperature`` outside, and for NaN).

    Examples
    --------
    >>> round(water_sound_speed_m_s(20), 2)
    1482.38
    """
    _check_temperature(temperature_degc, WATER_RANGE_DEGC)
    return sum(part * temperature_degc**power for power, part in enumerate(WATER_COEFFICIENTS))


def air_sound_speed_m_s(temperature_degc: float) -> float:
    """Return the speed of sound in dry air, 331.3 sqrt(1 + T / 273.15): the simple law, 0.2 m/s from Cramer 1993.

    Parameters
    ----------
    temperature_degc
        -20 to 50 (``acoustics.temperature``).

    Examples
    --------
    >>> round(air_sound_speed_m_s(20), 1)
    343.2
    """
    _check_temperature(temperature_degc, AIR_RANGE_DEGC)
    return 331.3 * math.sqrt(1 + temperature_degc / 273.15)


def _check_temperature(temperature_degc: float, within: tuple[float, float]) -> None:
    low, high = within
    if not low <= temperature_degc <= high:
        value = f"{temperature_degc:g}"
        raise Invalid(
            "acoustics.temperature", field="temperature_degc", value=value, low=f"{low:g}", high=f"{high:g}"
        )


def corrected_distance_mm(
    reading_mm: Decimal,
    *,
    object_m_s: Decimal,
    console_m_s: Decimal,
    resolution_mm: Decimal,
    along_beam: bool,
    layout_compensated: bool,
) -> Decimal:
    """Return a distance along the beam, corrected for the speed of sound: reading * c_object / c_console.

    Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143. Exact, rounded once, half-even, to the resolution.

    Parameters
    ----------
    reading_mm
        As read from the screen.
    object_m_s, console_m_s
        Speed in the test object, and the console's own setting (usually 1540); above zero.
    along_beam
        Also radially in a sector; a lateral distance is placed by the scan's geometry, not by time of flight.
    layout_compensated
        Whether the object's targets already stand where an uncorrected scan shows them right.

    Raises
    ------
    Invalid
        ``acoustics.lateral``, ``acoustics.compensated``, ``acoustics.not_positive``.

    Examples
    --------
    >>> corrected_distance_mm(Decimal("106.2"), object_m_s=Decimal(1450), console_m_s=Decimal(1540),
    ...     resolution_mm=Decimal("0.1"), along_beam=True, layout_compensated=False)
    Decimal('100.0')
    """
    if not along_beam:
        raise Invalid("acoustics.lateral", field="along_beam")
    if layout_compensated:
        raise Invalid("acoustics.compensated", field="layout_compensated")
    _positive(object_m_s=float(object_m_s), console_m_s=float(console_m_s))
    exact = Fraction(reading_mm) * Fraction(object_m_s) / Fraction(console_m_s)
    return round_half_even(exact, resolution_mm)


def shown_distance_mm(true_mm: float, object_m_s: float, console_m_s: float) -> float:
    """Return what a console shows of a distance along the beam: true * c_console / c_object (Goldstein 2000).

    Examples
    --------
    >>> round(shown_distance_mm(100, 1450, 1540), 2)
    106.21
    """
    _positive(object_m_s=object_m_s, console_m_s=console_m_s)
    return true_mm * console_m_s / object_m_s


def mechanical_index(derated_peak_negative_mpa: float, frequency_mhz: float) -> float:
    """Return MI = p / sqrt(f) in the units it is defined in: MPa, derated by 0.3 dB/cm/MHz, and MHz.

    IEC 62359:2010, 3.28 (clause from memory); FDA CDRH guidance, 27 June 2019.

    Parameters
    ----------
    derated_peak_negative_mpa
        Peak rarefactional pressure, zero or more (``acoustics.negative``).
    frequency_mhz
        Acoustic working frequency, above zero (``acoustics.not_positive``).

    Examples
    --------
    >>> mechanical_index(1.9, 1.0)
    1.9
    """
    _not_negative(derated_peak_negative_mpa=derated_peak_negative_mpa)
    _positive(frequency_mhz=frequency_mhz)
    return derated_peak_negative_mpa / math.sqrt(frequency_mhz)


def dwell(table: Sequence[DwellSpec], thermal_index: Decimal) -> DwellSpec | None:
    """Find the row of a dwell-time table that an index lies in; a caution, never a permission.

    Parameters
    ----------
    table
        Of a caution, half-open rows (BMUS 2009, from memory).
    thermal_index
        TIS before ten weeks, TIB after (from memory). Below the first row, and NaN, there is none.
    """
    if not thermal_index.is_finite():
        return None
    for row in table:
        ends = row.to_value is not None and thermal_index >= Decimal(row.to_value)
        if Decimal(row.from_value) <= thermal_index and not ends:
            return row
    return None
