"""Output: the mechanical index by its definition, and the caution that goes with a thermal index.

An index is a guide, never a permission; no verdict comes from here.
"""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal

import numpy as np

from qa_tracker.core.acoustic_quantities import Quantity, given, not_negative, positive
from qa_tracker.core.errors import Invalid
from qa_tracker.core.library_specs import DwellSpec


def mechanical_index(derated_peak_rarefactional_mpa: Quantity, frequency_mhz: Quantity) -> Quantity:
    """Return the mechanical index, MI = (p / 1 MPa) / sqrt(f / 1 MHz), a plain number.

    IEC 62359 (definition; from memory); FDA CDRH guidance, 27 June 2019. The pressure is derated by
    0.3 dB/(cm MHz) and taken where the derated pulse-intensity integral is greatest (from memory).

    Parameters
    ----------
    derated_peak_rarefactional_mpa
        The amount of the negative pressure, zero or more (``acoustics.negative``); a number or an array.
    frequency_mhz
        Acoustic working frequency, above zero (``acoustics.not_positive``).

    Examples
    --------
    >>> mechanical_index(1.9, 1.0), mechanical_index(2.0, 4.0)
    (1.9, 1.0)
    """
    field = "derated_peak_rarefactional_mpa"
    pressure = not_negative(derated_peak_rarefactional_mpa, field)
    return given(pressure / np.sqrt(positive(frequency_mhz, "frequency_mhz")))


def dwell(table: Sequence[DwellSpec], thermal_index: Decimal) -> DwellSpec | None:
    """Find the row of a dwell-time table that a thermal index lies in: a caution, never a permission.

    Parameters
    ----------
    table
        Rows of a shipped caution (BMUS 2009, from memory), half-open: a row holds its lower end, not its upper.
    thermal_index
        TIS before ten weeks, TIB after (from memory). Zero or more (``acoustics.not_finite``,
        ``acoustics.negative``).

    Returns
    -------
    DwellSpec or None
        None where the table has no row for it, as an empty one.

    Examples
    --------
    >>> rows = (DwellSpec("0", "0.7", None, "no limit"), DwellSpec("0.7", None, "60", "an hour at most"))
    >>> dwell(rows, Decimal("0.69")).says, dwell(rows, Decimal("0.70")).says
    ('no limit', 'an hour at most')
    """
    if not thermal_index.is_finite():
        raise Invalid("acoustics.not_finite", field="thermal_index", value=str(thermal_index))
    if thermal_index < 0:
        raise Invalid("acoustics.negative", field="thermal_index", value=str(thermal_index))
    held = (row for row in table if Decimal(row.from_value) <= thermal_index and _below(row, thermal_index))
    return next(held, None)


def _below(row: DwellSpec, thermal_index: Decimal) -> bool:
    return row.to_value is None or thermal_index < Decimal(row.to_value)
