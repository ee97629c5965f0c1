"""The closed list of things a verdict's sentence can say, and the parameters each needs.

Parameters are plain words and plain decimals (a point, no exponent); the sentence itself is made at the edge, in
the reader's language. A comparison carries these, where they apply:

=================== ====================================================================================
value, unit         the reading as judged; unit code, empty where none was given
value_qualifier     ``=``, ``>`` or ``<``
basis, direction    words of the criterion; ``strict`` is ``yes`` or ``no``
reference           nominal, baseline or other reading; ``reference_qualifier`` as above
difference          value - reference, signed; ``size`` without sign; ``side`` less, more or equal
departure           what is compared with the allowance, growing as things get worse (basis none and ratio:
                    the value); ``departure_qualifier`` tells which way it may be larger or smaller
ratio               value as percentage of the reference, one decimal (basis ratio)
level               the level whose allowance is given: the deciding one, or the first when conforming
allowance           its size; ``governed_by`` absolute or percent
absolute, percent   the parts of the limit as published; ``percent_of`` and ``percent_value`` turn the percentage
                    into the unit; ``governs`` larger, smaller or either, where there are both
used                share of the first level's allowance in percent, one decimal; ``used_beside`` over or under,
                    where it is rounded to 100 and is not
banded_by, quantity the banding quantity, its value, and ``band_start`` and ``band_below`` (empty: open)
rule, uncertainty   decision rule other than simple; expanded uncertainty U (k = 2)
uncertainty_reading what U was combined of, beside ``uncertainty_reference`` times ``uncertainty_weight`` (U and weight
                    of what the reading is compared with); ``uncertainty_whose``: stated for it (``own``), or for the
                    reading (``measurand``)
acceptance          allowance - U; ``probability`` of conformity with ``level``, four decimals
setups, factor      of a limit of own spread: count, exact factor, ``spread`` (``spread_floored`` yes where the
                    resolution's took its place), ``coverage`` and ``confidence`` in percent
no_share            ``yes`` where the reference is zero, so that only what is absolute was compared
least_reference     of a ratio: below this, ten steps of the other reading's resolution, it is not assessable
no_guard            ``yes`` where a guard band is the rule and no uncertainty is stated
arithmetic          of a derived quantity: its formula with the numbers put in
=================== ====================================================================================
"""

from __future__ import annotations

from enum import StrEnum


class SentenceCode(StrEnum):
    """What a verdict's sentence says."""

    WITHIN = "within"
    WITHIN_OPEN = "within_open"
    BETTER_THAN_EXPECTED = "better_than_expected"
    HIDDEN_LOSS = "hidden_loss"
    OPEN_BASELINE = "open_baseline"
    BEYOND = "beyond"
    GUARD_BAND = "guard_band"
    NOT_SEEN = "not_seen"
    STRADDLES = "straddles"
    TOO_CLOSE = "too_close"
    GRADED = "graded"
    NO_READING = "no_reading"
    NOT_FINITE = "not_finite"
    WRONG_UNIT = "wrong_unit"
    NO_NOMINAL = "no_nominal"
    NO_BASELINE = "no_baseline"
    BASELINE_NOT_SEEN = "baseline_not_seen"
    NO_REFERENCE = "no_reference"
    ZERO_REFERENCE = "zero_reference"
    SMALL_REFERENCE = "small_reference"
    BELOW_ZERO = "below_zero"
    NO_BAND_QUANTITY = "no_band_quantity"
    OUTSIDE_BANDS = "outside_bands"
    NOT_SEEN_UNDECIDED = "not_seen_undecided"
    UNKNOWN_GRADE = "unknown_grade"
    KIND_NOT_JUDGED = "kind_not_judged"
    NO_UNCERTAINTY = "no_uncertainty"
    TOO_FEW_SETUPS = "too_few_setups"
    EXPIRED_BASELINE = "expired_baseline"
    OTHER_OBJECT = "other_object"
    OBJECT_NOT_NAMED = "object_not_named"
    ARRAY_KIND = "array_kind"
    OTHER_MEDIUM = "other_medium"
    OTHER_METHOD = "other_method"
    OTHER_CLASS = "other_class"
    NO_INPUT = "no_input"
    OPEN_INPUT = "open_input"
    LAYOUT_COMPENSATED = "layout_compensated"


_COMPARED = frozenset(
    [
        "value",
        "value_qualifier",
        "unit",
        "basis",
        "direction",
        "strict",
        "departure",
        "departure_qualifier",
        "level",
        "allowance",
        "governed_by",
    ]
)
_CHANGED = _COMPARED | {"reference", "reference_qualifier", "difference", "size", "side"}

REQUIRED: dict[SentenceCode, frozenset[str]] = {
    SentenceCode.WITHIN: _COMPARED,
    SentenceCode.WITHIN_OPEN: _COMPARED,
    SentenceCode.BETTER_THAN_EXPECTED: _CHANGED,
    SentenceCode.HIDDEN_LOSS: _CHANGED | {"hidden", "proven"},
    SentenceCode.OPEN_BASELINE: _CHANGED | {"proven"},
    SentenceCode.BELOW_ZERO: frozenset({"what", "amount", "unit"}),
    SentenceCode.BEYOND: _COMPARED,
    SentenceCode.GUARD_BAND: _COMPARED | {"uncertainty", "acceptance"},
    SentenceCode.NOT_SEEN: frozenset({"direction", "level"}),
    SentenceCode.STRADDLES: _COMPARED | {"proven"},
    SentenceCode.TOO_CLOSE: _COMPARED | {"uncertainty", "proven"},
    SentenceCode.GRADED: frozenset({"grade", "verdict"}),
    SentenceCode.NO_READING: frozenset(),
    SentenceCode.NOT_FINITE: frozenset({"what"}),
    SentenceCode.WRONG_UNIT: frozenset({"unit", "criterion_unit"}),
    SentenceCode.NO_NOMINAL: frozenset(),
    SentenceCode.NO_BASELINE: frozenset(),
    SentenceCode.BASELINE_NOT_SEEN: frozenset(),
    SentenceCode.NO_REFERENCE: frozenset(),
    SentenceCode.ZERO_REFERENCE: frozenset({"basis", "reference", "unit"}),
    SentenceCode.SMALL_REFERENCE: frozenset({"reference", "least_reference", "unit"}),
    SentenceCode.NO_BAND_QUANTITY: frozenset({"banded_by"}),
    SentenceCode.OUTSIDE_BANDS: frozenset({"banded_by", "quantity"}),
    SentenceCode.NOT_SEEN_UNDECIDED: frozenset(),
    SentenceCode.UNKNOWN_GRADE: frozenset({"grade", "known"}),
    SentenceCode.KIND_NOT_JUDGED: frozenset({"kind"}),
    SentenceCode.NO_UNCERTAINTY: _COMPARED | {"rule"},
    SentenceCode.TOO_FEW_SETUPS: frozenset({"setups", "least"}),
    SentenceCode.EXPIRED_BASELINE: frozenset({"expired_on"}),
    SentenceCode.OTHER_OBJECT: frozenset({"was", "now"}),
    SentenceCode.OBJECT_NOT_NAMED: frozenset({"was", "now"}),
    SentenceCode.ARRAY_KIND: frozenset({"array_kind"}),
    SentenceCode.OTHER_MEDIUM: frozenset({"medium", "wanted"}),
    SentenceCode.OTHER_METHOD: frozenset({"method", "wanted"}),
    SentenceCode.OTHER_CLASS: frozenset({"what", "has", "wanted"}),
    SentenceCode.NO_INPUT: frozenset({"names"}),
    SentenceCode.OPEN_INPUT: frozenset({"names"}),
    SentenceCode.LAYOUT_COMPENSATED: frozenset(),
}
"""Parameters that are always there; a sentence may rely on no other without asking."""
