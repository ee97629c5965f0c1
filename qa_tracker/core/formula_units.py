"""Units in formulas: what a sum, a product, a quotient or a root of quantities is measured in.

Nothing is converted. mm, cm and m are three units, so are MHz and Hz; a formula goes from one to another by a named
value such as ``mm_per_cm``, whose own unit is mm/cm. A share in % is a unit too, and ``percent`` brings a plain ratio
to it. A unit is the powers of its parts: cm3 is cm to the third, dB/cm/MHz is dB over cm over MHz.
"""

from __future__ import annotations

from collections.abc import Iterable
from functools import lru_cache
from typing import Final, TypeAlias

from qa_tracker.core.units import UNITS, unit

Powers: TypeAlias = tuple[tuple[str, int], ...]
"""Parts of a unit with their powers, none of them 0, by name; empty for a plain number."""
Measure: TypeAlias = Powers | None
"""What a number is measured in; None for a written zero, which is zero of any unit."""

PLAIN: Final[Powers] = ()


class UnitClash(ValueError):
    """Two quantities that can't be joined so."""


@lru_cache(maxsize=256)
def powers_of(code: str) -> Powers:
    """Take a unit of the closed set apart; ``unit.unknown`` for another.

    Examples
    --------
    >>> powers_of("cd/m2"), powers_of("1")
    ((('cd', 1), ('m', -2)), ())
    """
    above, *below = unit(code).code.split("/")
    found = [] if above == "1" else [_factor(above, 1)]
    return _gathered(found + [_factor(part, -1) for part in below])


def times(left: Measure, right: Measure) -> Measure:
    """Multiply two units; zero stays zero of any unit.

    Examples
    --------
    >>> times(powers_of("mm"), powers_of("mm"))
    (('mm', 2),)
    """
    if left is None or right is None:
        return None
    return _gathered([*left, *right])


def over(left: Measure, right: Measure) -> Measure:
    """Divide two units: mm over mm is a plain number, mm over cm is not."""
    return times(left, right if right is None else tuple((name, -power) for name, power in right))


def root(measure: Measure) -> Measure:
    """Halve the powers of a unit.

    Raises
    ------
    UnitClash
        For an odd power: no quantity is measured in the root of a millimetre.

    Examples
    --------
    >>> root(powers_of("cm2"))
    (('cm', 1),)
    """
    if measure is None:
        return None
    if any(power % 2 for _, power in measure):
        raise UnitClash
    return tuple((name, power // 2) for name, power in measure)


def same(left: Measure, right: Measure) -> Measure:
    """Give the one unit of two quantities that are compared, chosen from or listed together.

    Raises
    ------
    UnitClash
        Where they differ.
    """
    if left is not None and right is not None and left != right:
        raise UnitClash
    return left if right is None else right


def added(left: Measure, right: Measure) -> Measure:
    """Add two quantities: of one unit, or a temperature and a temperature difference.

    Raises
    ------
    UnitClash
        Where they differ otherwise.
    """
    if {left, right} == {_CELSIUS, _KELVIN}:
        return _CELSIUS
    return same(left, right)


def subtracted(left: Measure, right: Measure) -> Measure:
    """Subtract: as ``added``, but that two temperatures in degC are a difference in K apart.

    Examples
    --------
    >>> subtracted(powers_of("degC"), powers_of("degC"))
    (('K', 1),)
    """
    if left == _CELSIUS and right == _KELVIN:
        return _CELSIUS
    found = same(left, right)
    return _KELVIN if left == right == _CELSIUS else found


def code_of(measure: Measure) -> str:
    """Write a unit: by its code where it has one, else by its parts.

    Examples
    --------
    >>> code_of(powers_of("cm/s")), code_of((("cm", -1), ("mm", 1))), code_of((("s", -2),)), code_of(None)
    ('cm/s', 'mm/cm', '1/s2', '1')
    """
    if not measure:
        return "1"
    known = {powers_of(code): code for code in UNITS}
    if measure in known:
        return known[measure]
    above = " ".join(_written(name, power) for name, power in measure if power > 0)
    below = "".join(f"/{_written(name, -power)}" for name, power in measure if power < 0)
    return (above or "1") + below


def _factor(text: str, sign: int) -> tuple[str, int]:
    name = text.rstrip("0123456789")
    return name, sign * int(text[len(name) :] or 1)


def _gathered(factors: Iterable[tuple[str, int]]) -> Powers:
    found: dict[str, int] = {}
    for name, power in factors:
        found[name] = found.get(name, 0) + power
    return tuple((name, power) for name, power in sorted(found.items()) if power)


def _written(name: str, power: int) -> str:
    return name if power == 1 else f"{name}{power}"


_CELSIUS: Final = powers_of("degC")
_KELVIN: Final = powers_of("K")
