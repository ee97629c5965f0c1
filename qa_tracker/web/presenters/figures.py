"""The results of acoustic figures in words: amounts to some significant digits, where they come from."""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import Decimal

from django.utils.functional import Promise
from django.utils.translation import gettext as _

from qa_tracker.core.acoustic_quantities import Quantity
from qa_tracker.services import wording

Words = str | Promise
DIGITS = 4
PLAIN = range(-5, 7)
"""The powers of ten that are written out; beyond, a power of ten says more than a row of zeros."""
RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


@dataclass(frozen=True)
class Source:
    """Where one part of a figure comes from, and how well that is known."""

    part: Words
    citation: str
    standing: str

    @property
    def says(self) -> str:
        """The part, its citation and its standing."""
        known = wording.standing_word(self.standing)
        return f"{self.part}: {self.citation}; {known}" if self.citation else f"{self.part}: {known}"


@dataclass(frozen=True)
class Result:
    """One result, its amount written out with its unit."""

    words: Words
    amount: str


def amount(value: Quantity, unit: str = "", *, digits: int = DIGITS, signed: bool = False) -> str:
    """A number to some significant digits with its unit's symbol, and its sign where that is what matters."""
    return with_unit(significant(float(value), digits, signed=signed), unit)


def with_unit(number: str, unit: str) -> str:
    """A number with its unit's symbol; degrees stand close."""
    return f"{number}{unit}" if unit in ("", "°") else f"{number}\N{NO-BREAK SPACE}{unit}"


def significant(value: float, digits: int = DIGITS, *, signed: bool = False) -> str:
    """A number to some significant digits, without zeros that say nothing."""
    rounded = Decimal(f"{value:.{digits}g}")
    sign = "\N{MINUS SIGN}" if rounded < 0 else "+" if signed and rounded else ""
    if not rounded or rounded.adjusted() in PLAIN:
        return f"{sign}{abs(rounded):f}"
    power = math.floor(math.log10(abs(rounded)))
    return f"{sign}{abs(rounded).scaleb(-power).normalize():f} × 10{str(power).translate(RAISED)}"


def between(low: str, high: str) -> str:
    """Two ends of a range."""
    return _("%(low)s to %(high)s") % {"low": low, "high": high}
