"""What a formula may name beside the readings of its own procedure: attributes, named values and functions.

Closed tables: a name that is in none of them is refused when the edition is published.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from typing import Final, Literal

from qa_tracker.core.units import UNITS

YES_NO: Final = "yes_no"
"""Stands for the unit of an attribute that is a yes or a no."""
NOMINAL: Final = "nominal"
"""The derived measurand's own nominal value, in its own unit."""
NOMINALS: Final = "nominals"
"""Nominal values of the procedure's measurands by code: ``nominals.vertical_distance``, in that one's unit."""
OBJECT_SPEED: Final = "test_object.sound_speed_m_s"
CONSOLE_SPEED: Final = "condition.sound_speed_m_s"
LAYOUT_COMPENSATED: Final = "test_object.layout_compensated"

NAMES: Final[dict[str, str]] = {
    "device.handheld": YES_NO,
    "probe.wireless": YES_NO,
    "aperture.elements": "1",
    "aperture.pitch_mm": "mm",
    "condition.test_frequency_mhz": "MHz",
    CONSOLE_SPEED: "m/s",
    OBJECT_SPEED: "m/s",
    "test_object.depth_mm": "mm",
    LAYOUT_COMPENSATED: YES_NO,
}
"""Attributes and the code of their unit. ``condition.sound_speed_m_s`` is the console's setting."""


@dataclass(frozen=True, slots=True)
class NamedValue:
    """A number with a name.

    Parameters
    ----------
    value
        Exact; of pi the first 40 digits, which no double can tell from it.
    above, below
        Codes of its unit: ``above`` over ``below``.
    """

    value: Fraction
    above: str
    below: str = "1"


# A ratio of two units by their definitions: how many of the first make one of the second.
_RATIOS: Final = (
    ("mm", "cm", 10),
    ("mm", "m", 1000),
    ("cm", "m", 100),
    ("ml", "cm3", 1),
    ("s", "min", 60),
    ("s", "h", 3600),
    ("min", "h", 60),
    ("h", "d", 24),
    ("Hz", "kHz", 1000),
    ("Hz", "MHz", 1_000_000),
    ("kHz", "MHz", 1000),
    ("uA", "mA", 1000),
    ("mOhm", "Ohm", 1000),
    ("Ohm", "MOhm", 1_000_000),
)
PI: Final = "pi"
NAMED_VALUES: Final[dict[str, NamedValue]] = (
    {
        PI: NamedValue(Fraction("3.141592653589793238462643383279502884197"), "1"),
        "percent": NamedValue(Fraction(100), "%"),
    }
    | {f"{many}_per_{one}": NamedValue(Fraction(count), many, one) for many, one, count in _RATIOS}
    | {
        f"unit.{code}": NamedValue(Fraction(1), code)
        for code in UNITS
        if re.fullmatch("[A-Za-z][A-Za-z0-9]*", code)
    }
)
"""Numbers by name: pi, ``percent`` (100 %), ratios such as ``mm_per_cm`` (10 mm/cm), and one of each unit
(``unit.mm`` is 1 mm), by which a written number gets its unit."""


@dataclass(frozen=True, slots=True)
class Function:
    """A function's place in the language; what it computes is in ``formula_arithmetic``.

    Parameters
    ----------
    takes
        One number, one list, or either a list or two and more numbers.
    measured
        The result's unit: the same, a difference's (K for temperatures in degC), or the root.
    exact
        Whether fractions can say the result.
    """

    takes: Literal["number", "list", "numbers"]
    measured: Literal["same", "difference", "root"]
    exact: bool = True


FUNCTIONS: Final[dict[str, Function]] = {
    "mean": Function("list", "same"),
    "range": Function("list", "difference"),
    "standard_deviation": Function("list", "difference", exact=False),
    "least": Function("numbers", "same"),
    "greatest": Function("numbers", "same"),
    "abs": Function("number", "same"),
    "sqrt": Function("number", "root", exact=False),
}
"""Functions by name. ``range`` is largest less smallest, ``standard_deviation`` that of a sample (n - 1)."""
