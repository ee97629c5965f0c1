"""The closed set of units a measurand may have. Nothing is converted: a reading in another unit is refused."""

from __future__ import annotations

from dataclasses import dataclass

from qa_tracker.core.errors import Invalid


@dataclass(frozen=True)
class Unit:
    """A unit by its code (plain ASCII, stored and signed) and its symbol (shown)."""

    code: str
    symbol: str
    quantity: str


_ROWS = (
    ("1", "", "number"),
    ("%", "%", "share"),
    ("mm", "mm", "length"),
    ("cm", "cm", "length"),
    ("m", "m", "length"),
    ("cm2", "cm²", "area"),
    ("cm3", "cm³", "volume"),
    ("ml", "ml", "volume"),
    ("deg", "°", "angle"),
    ("s", "s", "time"),
    ("min", "min", "time"),
    ("h", "h", "time"),
    ("d", "d", "time"),
    ("MHz", "MHz", "frequency"),
    ("kHz", "kHz", "frequency"),
    ("Hz", "Hz", "frequency"),
    ("cm/s", "cm/s", "speed"),
    ("m/s", "m/s", "speed"),
    ("dB", "dB", "level difference"),
    ("dB/cm/MHz", "dB/(cm MHz)", "attenuation"),
    ("uA", "µA", "current"),
    ("mA", "mA", "current"),
    ("V", "V", "voltage"),
    ("mOhm", "mΩ", "resistance"),
    ("Ohm", "Ω", "resistance"),
    ("MOhm", "MΩ", "resistance"),
    ("degC", "°C", "temperature"),
    ("K", "K", "temperature difference"),
    ("g", "g", "mass"),
    ("kPa", "kPa", "elastic modulus"),
    ("mW/cm2", "mW/cm²", "intensity"),
    ("cd/m2", "cd/m²", "luminance"),
    ("lux", "lx", "illuminance"),
)

UNITS: dict[str, Unit] = {code: Unit(code, symbol, quantity) for code, symbol, quantity in _ROWS}


def unit(code: str, *, field: str = "") -> Unit:
    """Return the unit of a code.

    Raises
    ------
    Invalid
        ``unit.unknown`` for anything outside the set; codes are exact ("MM" is not "mm").

    Examples
    --------
    >>> unit("uA").symbol
    'µA'
    """
    if code not in UNITS:
        raise Invalid("unit.unknown", field=field, unit=code, known=", ".join(UNITS))
    return UNITS[code]


def with_symbol(number: str, code: str) -> str:
    """Write a number with its unit's symbol: a no-break space between, none for plain numbers and degrees.

    Examples
    --------
    >>> with_symbol("3", "1"), with_symbol("20", "deg")
    ('3', '20°')
    """
    symbol = unit(code).symbol
    return number + symbol if symbol in ("", "°") else f"{number}\N{NO-BREAK SPACE}{symbol}"
