"""Numbers as people type them, kept exactly.

A reading or a limit is the text that was entered, a whole number and a count of decimal places; no binary
float takes part. What a number *means* (its unit, its limits) is decided elsewhere.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import Context, Decimal
from fractions import Fraction

from qa_tracker.core.errors import Invalid

MAX_SCALED = 10**15
"""Largest magnitude of the stored whole number: leaves a factor of 9,000 below 64 bits for arithmetic."""
MAX_PLACES = 12
"""Most decimal places stored."""
MAX_TEXT = 40
"""Longest text read as a number."""

# How near ten times or a tenth of the last value asks again, and how far a value may stand outside a band of
# no width: common practice, no source.
ASK_AGAIN_SHARE = Fraction(15, 100)

# Wide enough that moving the point of any number admitted here rounds nothing.
_WIDE = Context(prec=300)

_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:[.,][0-9]+)?|[.,][0-9]+)", re.ASCII)
# What is wrong with a text that is no number, most telling first.
_REFUSALS = (
    ("number.not_finite", re.compile(r"[+-]?(?:s?nan|inf(?:inity)?|∞)", re.IGNORECASE)),
    ("number.qualifier", re.compile(r"[<>≤≥=].*")),
    ("number.exponent", re.compile(r"[+-]?[0-9.,]+e[+-]?[0-9]+", re.IGNORECASE)),
    ("number.unit", re.compile(r"[+-]?[0-9]*[.,]?[0-9]+ *(?P<unit>[a-zA-Zµμ°Ω%].*)")),
    ("number.digits", re.compile(r".*[^\x00-\x7f].*")),
    ("number.separators", re.compile(r"[+-]{2,}.*|[+-]?[0-9.,'_ ]*[0-9][.,'_ ]+[0-9][0-9.,'_ ]*")),
)


@dataclass(frozen=True)
class Exact:
    """A number as entered: ``scaled`` / 10 ** ``places``.

    Parameters
    ----------
    entered
        The text as typed, without space around it.
    scaled
        The number as a whole number of its last typed place.
    places
        Decimal places typed.
    """

    entered: str
    scaled: int
    places: int

    @property
    def decimal(self) -> Decimal:
        """The number as a decimal with the places that were typed."""
        return from_scaled(self.scaled, self.places)


def parse(text: str, resolution: str | None = None, *, field: str = "") -> Exact:
    """Read a typed number exactly, or refuse it with the one reason that helps.

    Comma or point is the decimal sign; a sign may stand before; only the digits 0 to 9 count.

    Parameters
    ----------
    text
        What was typed.
    resolution
        Step of the measurand (``"0.5"``); the number must be a whole multiple of it. None: any step.
    field
        Name of the input, carried by the refusal.

    Returns
    -------
    Exact
        ``entered`` is the text without surrounding space; trailing zeros are kept.

    Raises
    ------
    Invalid
        ``number.empty``, ``number.not_finite``, ``number.qualifier``, ``number.exponent``,
        ``number.digits``, ``number.separators``, ``number.unit``, ``number.not_a_number``,
        ``number.out_of_range``, ``number.too_many_places``, ``number.resolution``.

    Examples
    --------
    >>> parse(" 20,30 ")
    Exact(entered='20,30', scaled=2030, places=2)
    """
    entered = text.strip()
    if not _NUMBER.fullmatch(entered):
        raise _refusal(entered, field)
    whole, _, decimals = entered.replace(",", ".").partition(".")
    if len(entered) > MAX_TEXT or abs(scaled := int(whole + decimals)) > MAX_SCALED:
        raise Invalid("number.out_of_range", field=field, entered=entered[:MAX_TEXT], digits="15")
    if len(decimals) > MAX_PLACES:
        raise Invalid("number.too_many_places", field=field, entered=entered, places=str(MAX_PLACES))
    exact = Exact(entered, scaled, len(decimals))
    if resolution is not None and not is_multiple(exact.decimal, Decimal(resolution)):
        raise Invalid("number.resolution", field=field, entered=entered, resolution=resolution)
    return exact


def _refusal(entered: str, field: str) -> Invalid:
    """Name what keeps ``entered`` from being a number; only its beginning is looked at and shown."""
    if not entered:
        return Invalid("number.empty", field=field)
    shown = entered[:MAX_TEXT]
    for code, pattern in _REFUSALS:
        if match := pattern.fullmatch(shown):
            return Invalid(code, field=field, entered=shown, **match.groupdict())
    return Invalid("number.not_a_number", field=field, entered=shown)


def ten_to(power: int) -> int:
    """Return 10 ** power for a power >= 0 as a whole number."""
    return int(10**power)


def from_scaled(scaled: int, places: int) -> Decimal:
    """Return scaled / 10 ** places exactly, whatever the decimal context.

    Examples
    --------
    >>> from_scaled(2030, 2)
    Decimal('20.30')
    """
    return Decimal(f"{scaled}E{-places}")


def places_of(value: Decimal) -> int:
    """Count the decimal places of a finite decimal; 0 for whole numbers.

    Raises
    ------
    Invalid
        ``number.not_finite`` for NaN and infinity.
    """
    exponent = value.as_tuple().exponent
    if not isinstance(exponent, int):
        raise Invalid("number.not_finite", entered=str(value))
    return max(0, -exponent)


def scaled_at(value: Decimal, places: int) -> int:
    """Return value * 10 ** places as a whole number, refusing any loss.

    Raises
    ------
    Invalid
        ``number.loss`` when the value has more places, ``number.out_of_range`` beyond 10 ** 40 (so that a
        hostile exponent can't fill the memory), ``number.not_finite``.

    Examples
    --------
    >>> scaled_at(Decimal("20.3"), 2)
    2030
    """
    if value.is_finite() and value.adjusted() > MAX_TEXT:
        raise Invalid("number.out_of_range", entered=str(value)[:MAX_TEXT], digits=str(MAX_TEXT))
    own = places_of(value)
    if own > 2 * MAX_TEXT:
        raise Invalid("number.too_many_places", entered=str(value)[:MAX_TEXT], places=str(2 * MAX_TEXT))
    shifted = value.scaleb(places, _WIDE)
    whole = int(shifted)
    if shifted != whole:
        raise Invalid("number.loss", entered=plain(value), places=str(places))
    return whole


def subtract(value: Decimal, other: Decimal) -> Decimal:
    """Return value - other exactly, at the finer count of places, whatever the decimal context.

    Examples
    --------
    >>> subtract(Decimal("20.3"), Decimal("20"))
    Decimal('0.3')
    """
    places = max(places_of(value), places_of(other))
    return from_scaled(scaled_at(value, places) - scaled_at(other, places), places)


def rescale(exact: Exact, places: int) -> int:
    """Return the number as a whole number at another count of places, refusing any loss (``number.loss``).

    Examples
    --------
    >>> rescale(parse("1.50"), 1)
    15
    """
    return scaled_at(exact.decimal, places)


def plain(value: Decimal, *, strip: bool = False) -> str:
    """Write a decimal without exponent; with ``strip`` also without trailing zeros or a negative zero.

    Examples
    --------
    >>> plain(Decimal("1E+2")), plain(Decimal("1.500"), strip=True), plain(Decimal("10"), strip=True)
    ('100', '1.5', '10')
    """
    text = format(value, "f")
    if strip and "." in text:
        text = text.rstrip("0").rstrip(".")
    return text.lstrip("-") if strip and not value else text


def is_multiple(value: Decimal, step: Decimal) -> bool:
    """Tell whether ``value`` is a whole multiple of ``step``, exactly; ``number.step`` unless step > 0."""
    _check_step(step)
    places = max(places_of(value), places_of(step))
    return scaled_at(value, places) % scaled_at(step, places) == 0


def _check_step(step: Decimal) -> None:
    if not step.is_finite() or step <= 0:
        raise Invalid("number.step", step=str(step))


def round_half_even(value: Decimal | Fraction, step: Decimal) -> Decimal:
    """Round to the nearest multiple of ``step``, ties to the even multiple.

    ``round(value / step) * step`` on exact fractions: the rounding of IEEE 754, 4.3.1, in decimal.

    Parameters
    ----------
    value
        A finite decimal or a fraction.
    step
        Resolution, > 0; the result has its places.

    Raises
    ------
    Invalid
        ``number.not_finite`` for NaN and infinity, ``number.step`` unless step > 0.

    Examples
    --------
    >>> round_half_even(Decimal("0.25"), Decimal("0.1")), round_half_even(Decimal("1.75"), Decimal("0.5"))
    (Decimal('0.2'), Decimal('2.0'))
    """
    if isinstance(value, Decimal) and not value.is_finite():
        raise Invalid("number.not_finite", entered=str(value))
    _check_step(step)
    multiples = round(Fraction(value) / Fraction(step))
    places = places_of(step)
    return from_scaled(multiples * scaled_at(step, places), places)


def near_factor_ten(value: Decimal, last: Decimal) -> bool:
    """Tell whether a value is about ten times or a tenth of the last one, as when cm is typed for mm.

    "About" is within 15 % of the factor: 8.5 to 11.5 times, or 0.085 to 0.115 times, of the same sign.
    False where either is zero.

    Examples
    --------
    >>> near_factor_ten(Decimal("15.2"), Decimal("152")), near_factor_ten(Decimal("146"), Decimal("152"))
    (True, False)
    """
    if not value or not last:
        return False
    factor = Fraction(value) / Fraction(last)
    return any(abs(factor / ten - 1) <= ASK_AGAIN_SHARE for ten in (Fraction(10), Fraction(1, 10)))


def far_outside(value: Decimal, low: Decimal, high: Decimal) -> bool:
    """Tell whether a value lies further outside the band low..high than the band is wide.

    The distance that asks again is the larger of the band's width and 15 % of its larger end, so a band of no
    width does not ask about every change. A band without negative numbers asks about each of them: what is never
    below zero was typed with a stray sign, by which a leakage of 600 would be better than any limit.

    Examples
    --------
    >>> far_outside(Decimal("131"), Decimal("140"), Decimal("148"))
    False
    >>> far_outside(Decimal("15"), Decimal("140"), Decimal("148"))
    True
    """
    least, most, number = Fraction(low), Fraction(high), Fraction(value)
    margin = max(most - least, ASK_AGAIN_SHARE * max(abs(least), abs(most)))
    return number < 0 <= least or number < least - margin or number > most + margin
