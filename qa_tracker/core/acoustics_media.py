"""The speed of sound in water and in air against temperature, and a distance corrected for it.

The speeds are figures, and binary floats serve. A corrected distance may feed a verdict: it is exact, in decimals.
"""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction
from typing import Final

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
from qa_tracker.core.decimals import round_half_even
from qa_tracker.core.errors import Invalid

WATER_RANGE_DEGC: Final = (0.0, 95.0)
AIR_RANGE_DEGC: Final = (0.0, 30.0)
MARCZAK: Final = (1402.385, 5.038813, -5.799136e-2, 3.287156e-4, -1.398845e-6, 2.787860e-9)
"""By rising power of the temperature. Two codes in wide use have -5.779136e-2: 0.08 m/s too much at 20 degC."""
_LEAST: Final = Decimal("1E-15")
_MOST: Final = Decimal("1E15")


def temperature(value: Quantity, field: str, within_degc: tuple[float, float]) -> FloatArray:
    """Take temperatures within a formula's range, or refuse them (``acoustics.temperature``)."""
    array, (low, high) = finite(value, field), within_degc
    if shown := first(array, (array < low) | (array > high)):
        raise Invalid("acoustics.temperature", field=field, value=shown, low=f"{low:g}", high=f"{high:g}")
    return array


def water_sound_speed_m_s(temperature_degc: Quantity) -> Quantity:
    """Return the speed of sound in pure water at atmospheric pressure.

    ``c = 1402.385 + 5.038813 T - 5.799136e-2 T^2 + 3.287156e-4 T^3 - 1.398845e-6 T^4 + 2.787860e-9 T^5``,
    Marczak 1997, JASA 102:2776-2779. Within 0.034 m/s of IAPWS-95 from 1 to 50 degC.

    Parameters
    ----------
    temperature_degc
        0 to 95 (``acoustics.temperature``); a number or an array. Nothing is extrapolated.

    Examples
    --------
    >>> round(water_sound_speed_m_s(20), 2)
    1482.38
    """
    degc = temperature(temperature_degc, "temperature_degc", WATER_RANGE_DEGC)
    speed = np.zeros_like(degc)
    for part in reversed(MARCZAK):
        speed = speed * degc + part
    return given(speed)


def air_sound_speed_m_s(temperature_degc: Quantity) -> Quantity:
    """Return the speed of sound in dry air, c = 331.3 sqrt(1 + T / 273.15).

    The simple law (common practice, no source). Against Cramer 1993, JASA 93:2510, at 101.325 kPa it is 0.15 m/s
    low in dry air; saturated air is faster, by 0.5 m/s at 0 degC and 2.5 m/s at 30 degC.

    Parameters
    ----------
    temperature_degc
        0 to 30, where it was compared (``acoustics.temperature``); a number or an array.

    Examples
    --------
    >>> round(air_sound_speed_m_s(20), 3)
    343.215
    """
    degc = temperature(temperature_degc, "temperature_degc", AIR_RANGE_DEGC)
    return given(331.3 * np.sqrt(1 + degc / 273.15))


def corrected_distance_mm(
    reading_mm: Decimal,
    *,
    object_m_s: Decimal,
    console_m_s: Decimal,
    resolution_mm: Decimal,
    along_beam: bool,
    layout_compensated: bool,
) -> Decimal:
    """Return a distance along the beam corrected for the speed of sound, reading * c_object / c_console.

    Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143. Exact, and rounded once, half-even, to the resolution.

    Parameters
    ----------
    reading_mm
        As read from the screen, zero or more (``acoustics.negative``).
    object_m_s, console_m_s
        Speed in the test object, and the console's own setting (usually 1540); above zero
        (``acoustics.not_positive``).
    resolution_mm
        Step of the result, above zero (``number.step``).
    along_beam
        Also radially in a sector; a lateral distance is placed by the scan's geometry, not by time of flight.
    layout_compensated
        Whether the object's targets already stand where an uncorrected scan shows them right.

    Raises
    ------
    Invalid
        ``acoustics.lateral``, ``acoustics.compensated``; for NaN and infinity ``acoustics.not_finite``, beyond 1e15
        or below 1e-15 ``acoustics.magnitude``, and the codes named above.

    Examples
    --------
    >>> corrected_distance_mm(Decimal("106.21"), object_m_s=Decimal(1450), console_m_s=Decimal(1540),
    ...     resolution_mm=Decimal("0.01"), along_beam=True, layout_compensated=False)
    Decimal('100.00')
    """
    if not along_beam:
        raise Invalid("acoustics.lateral", field="along_beam")
    if layout_compensated:
        raise Invalid("acoustics.compensated", field="layout_compensated")
    not_negative(_float(reading_mm, "reading_mm"), "reading_mm")
    positive(_float(object_m_s, "object_m_s"), "object_m_s")
    positive(_float(console_m_s, "console_m_s"), "console_m_s")
    exact = Fraction(reading_mm) * Fraction(object_m_s) / Fraction(console_m_s)
    return round_half_even(exact, resolution_mm)


def _float(value: Decimal, field: str) -> float:
    """Keep an exponent that would fill the memory as a fraction from being taken."""
    if not value.is_finite():
        raise Invalid("acoustics.not_finite", field=field, value=str(value))
    if value and not _LEAST <= abs(value) <= _MOST:
        raise Invalid("acoustics.magnitude", field=field, value=f"{value:.3g}")
    return float(value)


def shown_distance_mm(true_mm: Quantity, object_m_s: Quantity, console_m_s: Quantity) -> Quantity:
    """Return what a console shows of a distance along the beam, true * c_console / c_object.

    Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143; the inverse of ``corrected_distance_mm``, as a figure.

    Parameters
    ----------
    true_mm
        Zero or more (``acoustics.negative``); a number or an array.
    object_m_s, console_m_s
        Above zero (``acoustics.not_positive``).

    Examples
    --------
    >>> round(shown_distance_mm(100, 1450, 1540), 2)
    106.21
    """
    true, inside = not_negative(true_mm, "true_mm"), positive(object_m_s, "object_m_s")
    return given(true * positive(console_m_s, "console_m_s") / inside)
