"""One reading beside its reference and limits: its code from the kernel, and the figures a sentence shows."""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from functools import cached_property

import numpy as np

from qa_tracker.core.allowances import Allowance, allowance
from qa_tracker.core.criteria import Criterion, Level, Limit
from qa_tracker.core.decimals import plain, round_half_even, scaled_at, subtract
from qa_tracker.core.open_baseline import AgainstBound, code_against_bound
from qa_tracker.core.verdict_kernel import CONFORMING, Columns, Rule, column, finest_places, verdict_codes

SIGN = {"<": -1, "=": 0, ">": 1}
MIRRORED = {"<": ">", "=": "=", ">": "<"}
TENTH = Decimal("0.1")
ALL = 100
"""Percent of an allowance."""


@dataclass(frozen=True)
class Comparison:
    """A finite reading that can be judged by a criterion without bands or grades.

    Parameters
    ----------
    value, qualifier
        The reading and ``"="``, ``">"`` or ``"<"``.
    reference, reference_qualifier
        Nominal, baseline or other reading; None with basis none. A qualified baseline is shown at its bound.
    uncertainty
        Expanded uncertainty U (k = 2) of the departure, >= 0, or None.
    never_below_zero
        Whether the quantity can't be below zero, which a bounded baseline then isn't either.
    """

    criterion: Criterion
    value: Decimal
    qualifier: str
    reference: Decimal | None
    reference_qualifier: str
    uncertainty: Decimal | None
    never_below_zero: bool = False

    def code(self, rule: Rule, criterion: Criterion | None = None) -> int:
        """Judge by the kernel, by this criterion or a part of it; a bounded baseline by all that it can stand for."""
        if self.reference is not None and self.reference_qualifier != "=":
            side, sign = SIGN[self.reference_qualifier], SIGN[self.qualifier]
            asked = AgainstBound(
                self.value, sign, self.reference, side, self.uncertainty, self.never_below_zero
            )
            return code_against_bound(criterion or self.criterion, asked, rule)
        places = finest_places(self.criterion, self.value, self.reference, self.uncertainty)
        columns = Columns(
            values=column(scaled_at(self.value, places)),
            references=column(scaled_at(self.reference or Decimal(0), places)),
            places=places,
            qualifiers=np.array([SIGN[self.qualifier]], np.int8),
            uncertainties=None if self.uncertainty is None else column(scaled_at(self.uncertainty, places)),
        )
        return int(verdict_codes(criterion or self.criterion, columns, rule)[0])

    def limit(self, level: Level) -> Limit:
        """Return the limit of a level that the criterion has."""
        return dict(self.criterion.levels())[level]

    def allowance(self, level: Level) -> Allowance:
        """Return what the level allows at this reference."""
        return allowance(self.limit(level), self.reference)

    @property
    def is_change(self) -> bool:
        """Whether a change from a nominal or baseline is judged, not the value itself."""
        return self.criterion.basis in ("nominal", "baseline")

    @cached_property
    def difference(self) -> Decimal:
        """Value - reference, exactly; the value itself with basis none or ratio."""
        if not self.is_change or self.reference is None:
            return self.value
        return subtract(self.value, self.reference)

    @property
    def change_qualifier(self) -> str:
        """Which way the difference may be more or less: by the reading's bound, or where it is exact the baseline's."""
        return MIRRORED[self.reference_qualifier] if self.qualifier == "=" else self.qualifier

    @cached_property
    def departure(self) -> tuple[Decimal, str]:
        """What is compared with the allowance, and the way it may be more or less.

        It grows as things get worse, but for the value judged by a lower limit, which is left as it is.
        Where a half-line holds no change at all, as "more than 150" against 152 either way, it is "0 or more".
        """
        direction, difference = self.criterion.direction, self.difference
        qualifier = self.change_qualifier
        if direction == "below" and self.is_change:
            return difference.copy_negate() if difference else difference.copy_abs(), MIRRORED[qualifier]
        if direction != "either" or qualifier == "=":
            return difference.copy_abs() if direction == "either" else difference, qualifier
        outwards = difference >= 0 if qualifier == ">" else difference <= 0
        return difference.copy_abs() if outwards else Decimal(0), ">"

    def is_gain_beyond(self, level: Level) -> bool:
        """Tell whether a change for the better is certainly larger than what the level allows for the worse."""
        departure, qualifier = self.departure
        if not self.is_change or self.criterion.direction == "either" or qualifier == ">":
            return False
        gain, allowed = departure.copy_negate(), self.allowance(level).size
        return gain > allowed or (qualifier == "<" and gain == allowed)

    def used(self, level: Level) -> Decimal | None:
        """Return the share of the level's allowance in percent, one decimal, half-even.

        100 * departure / allowance, and nothing below zero: a gain uses none. For a lower limit, limit /
        value: 100 at the limit and more below it. None where the divisor is not above zero.
        """
        share = self._share(level)
        return None if share is None else max(round_half_even(share, TENTH), Decimal("0.0"))

    def beside_all(self, level: Level) -> str:
        """Tell which side of 100 % a share lies that rounds to it: ``over``, ``under``, or nothing to say."""
        share = self._share(level)
        if share is None or share == ALL or round_half_even(share, TENTH) != ALL:
            return ""
        return "over" if share > ALL else "under"

    def _share(self, level: Level) -> Fraction | None:
        share, of = self.departure[0], self.allowance(level).size
        if self.criterion.direction == "below" and not self.is_change:
            share, of = of, share
        return None if of <= 0 else 100 * Fraction(share) / Fraction(of)

    def probability(self, level: Level) -> float | None:
        """Return the probability that the true value is within the level; None without U.

        For exact readings only: a half-line has no estimate to put a distribution on. With U = 0 it is 1 where the
        plain comparison clears the level, else 0, so that a limit that itself fails gives 0.
        """
        if self.uncertainty is None or (self.qualifier, self.reference_qualifier) != ("=", "="):
            return None
        if not self.uncertainty:
            return float(self.code("simple", self.criterion.alone(level)) == CONFORMING)
        allowed, estimate = float(self.allowance(level).size), float(self.difference)
        low, high = -math.inf, math.inf
        if self.criterion.direction != "below":
            high = allowed
        if self.criterion.direction == "either":
            low = -allowed
        if self.criterion.direction == "below":
            low = -allowed if self.is_change else allowed
        return probability_within(low, high, estimate, float(self.uncertainty) / 2)


def probability_within(low: float, high: float, estimate: float, standard_uncertainty: float) -> float:
    """Return the probability that a quantity lies in low..high, its knowledge being normal.

    p = Phi((high - y) / u) - Phi((low - y) / u), JCGM 106:2012, 7.2 to 7.4.

    Parameters
    ----------
    low, high
        Tolerance limits, in the unit of the estimate; infinite for none.
    estimate
        The measured value y.
    standard_uncertainty
        u = U / 2, >= 0; at zero the answer is 1 inside and on the limits, which belong to it, else 0.

    Examples
    --------
    >>> round(probability_within(-math.inf, -5.4, -5.47, 0.05), 6)
    0.919243
    """
    if standard_uncertainty == 0:
        return float(low <= estimate <= high)
    scale = standard_uncertainty * math.sqrt(2)
    return (math.erf((high - estimate) / scale) - math.erf((low - estimate) / scale)) / 2


def comparison_parameters(compared: Comparison, level: Level, first: Level) -> dict[str, str]:
    """Write out a comparison for its sentence (see ``sentence_codes``).

    Parameters
    ----------
    level
        The level whose allowance is shown.
    first
        The lowest level there is, whose allowance ``used`` is a share of.
    """
    departure, departure_qualifier = compared.departure
    written = {
        "value": plain(compared.value),
        "value_qualifier": compared.qualifier,
        "basis": compared.criterion.basis,
        "direction": compared.criterion.direction,
        "strict": "yes" if compared.criterion.strict else "no",
        "departure": plain(departure),
        "departure_qualifier": departure_qualifier,
        "level": level,
    }
    if (used := compared.used(first)) is not None:
        written["used"] = plain(used)
    if side := compared.beside_all(first):
        written["used_beside"] = side
    return written | _reference_parameters(compared) | _allowance_parameters(compared, level)


def _reference_parameters(compared: Comparison) -> dict[str, str]:
    if compared.reference is None:
        return {}
    written = {
        "reference": plain(compared.reference),
        "reference_qualifier": compared.reference_qualifier,
    }
    if compared.criterion.basis == "ratio":
        ratio = 100 * Fraction(compared.value) / Fraction(compared.reference)
        return written | {"ratio": plain(round_half_even(ratio, TENTH))}
    difference = compared.difference
    return written | {
        "difference": plain(difference),
        "size": plain(difference.copy_abs()),
        "side": "equal" if not difference else "more" if difference > 0 else "less",
    }


def _allowance_parameters(compared: Comparison, level: Level) -> dict[str, str]:
    limit, allowed = compared.limit(level), compared.allowance(level)
    by_share = allowed.governed_by == "percent"
    written = {"allowance": plain(allowed.size, strip=by_share), "governed_by": allowed.governed_by}
    if limit.absolute is not None:
        written["absolute"] = plain(limit.absolute)
    if limit.percent is not None and compared.reference is not None and allowed.percent_value is not None:
        written |= {
            "percent": plain(limit.percent),
            "percent_of": plain(compared.reference.copy_abs()),
            "percent_value": plain(allowed.percent_value, strip=True),
        }
    return written | ({"governs": limit.governs} if "percent" in written and "absolute" in written else {})
