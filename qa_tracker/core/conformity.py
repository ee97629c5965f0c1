"""The verdict on one reading: which sentence is true of it, and how bad it is.

Judging many at once is ``verdict_kernel``; this finds what one reading is to be compared with and asks the same
kernel about it. A reading that lacks what its criterion needs is *not assessable*, never conforming.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import Decimal

from qa_tracker.core.allowances import needs_a_size, without_shares
from qa_tracker.core.comparison import Comparison
from qa_tracker.core.criteria import Criterion
from qa_tracker.core.decimals import parse, plain
from qa_tracker.core.errors import Invalid
from qa_tracker.core.explanation import explain
from qa_tracker.core.judgement import VERDICT_OF_CODE, Judgement, Verdict, not_assessable, severity, worst
from qa_tracker.core.own_spread import OwnSpread, at_spread, lacking_setups
from qa_tracker.core.sentence_codes import SentenceCode as Say
from qa_tracker.core.verdict_kernel import NOT_ASSESSABLE, RULES, Rule

__all__ = ["Judgement", "Verdict", "judge", "severity", "worst"]

NUMBER_KINDS = ("number", "count", "derived", "image")
WORD_KINDS = ("grade", "yes_no")
KINDS = (*NUMBER_KINDS, *WORD_KINDS, "text")
QUALIFIERS = ("=", ">", "<", "not_seen")


@dataclass(frozen=True)
class _Question:
    """The arguments of ``judge``, numbers as decimals."""

    kind: str
    qualifier: str
    value: Decimal | None
    references: dict[str, Decimal | None]
    baseline_qualifier: str
    quantity: Decimal | None
    uncertainty: Decimal | None
    rule: Rule
    unit: str | None
    criterion_unit: str | None
    spread: OwnSpread | None
    never_below_zero: bool
    least_reference: Decimal | None


def judge(
    criterion: Criterion,
    *,
    value: Decimal | str | None,
    kind: str,
    qualifier: str = "=",
    nominal: Decimal | str | None = None,
    baseline: Decimal | str | None = None,
    baseline_qualifier: str = "=",
    reference: Decimal | str | None = None,
    quantity: Decimal | str | None = None,
    uncertainty: Decimal | str | None = None,
    rule: Rule = "simple",
    unit: str | None = None,
    criterion_unit: str | None = None,
    spread: OwnSpread | None = None,
    never_below_zero: bool = False,
    least_reference: Decimal | str | None = None,
) -> Judgement:
    """Judge one reading.

    A qualified reading is a half-line: "more than 160" is every value above 160. A verdict is given only where
    the whole half-line agrees; a level that its best case is already beyond is proven; otherwise it is
    indeterminate at the worst level in doubt. "Not seen" is worse than any value where one direction is worse:
    the suspension level if there is one, else the remedial; with either direction nothing can be said.

    A qualified baseline is every value on its side of the bound: a verdict is given only where it is the same for all
    of them, else it is indeterminate at the worst level in doubt and the sentence says what could hide.

    Parameters
    ----------
    criterion
        By which it is judged.
    value
        The number, or the grade, ``yes`` or ``no``. None: not read (but "not seen" needs none).
    kind
        Of the measurand, one of ``KINDS``.
    qualifier, baseline_qualifier
        One of ``QUALIFIERS``.
    nominal, baseline, reference
        The reference its basis needs (``reference``: the other reading of a ratio); others are ignored.
    quantity
        Banding quantity, where the criterion has bands.
    uncertainty
        Expanded uncertainty U (k = 2) of the departure, >= 0, in the reading's unit.
    rule
        ``simple``, ``guarded`` or ``zones``. Without U the last two clear nothing: a reading beyond a level
        by plain comparison is given it, any other is not assessable.
    unit, criterion_unit
        Compared where the criterion has one; nothing is converted. "Not seen" has no unit to compare.
    spread
        Of the set-ups the baseline is the mean of, for a limit of the device's own spread.
    never_below_zero
        Of the quantity: a reading or reference below zero then has a stray sign, and is not assessable.
    least_reference
        Of a ratio, in the reading's unit: to a smaller other reading it is not assessable.

    Returns
    -------
    Judgement
        Not assessable, with its own code, for a reading, reference, unit or band that is missing or wrong and
        for NaN or infinity.

    Raises
    ------
    Invalid
        ``reading.kind``, ``reading.qualifier``, ``rule.unknown``, ``uncertainty.negative``, and the
        ``number.*`` codes for text that is no number.

    Examples
    --------
    >>> from qa_tracker.core.criteria import Limit
    >>> loss = Criterion("baseline", "below", True, Limit(Decimal("6")), Limit(Decimal("10")))
    >>> found = judge(loss, value="145.4", kind="number", baseline="152.0")
    >>> found.verdict, found.departure, found.used
    ('remedial', Decimal('6.6'), Decimal('110.0'))
    """
    _check_words(kind, (qualifier, baseline_qualifier), rule)
    if criterion.grades or kind not in NUMBER_KINDS:
        return _judge_grade(criterion, value, kind)
    question = _Question(
        kind=kind,
        qualifier=qualifier,
        value=_decimal(value, "value"),
        references={
            "nominal": _decimal(nominal, "nominal"),
            "baseline": _decimal(baseline, "baseline"),
            "ratio": _decimal(reference, "reference"),
        },
        baseline_qualifier=baseline_qualifier,
        quantity=_decimal(quantity, "quantity"),
        uncertainty=_decimal(uncertainty, "uncertainty"),
        rule=rule,
        unit=unit,
        criterion_unit=criterion_unit,
        spread=spread,
        never_below_zero=never_below_zero,
        least_reference=_decimal(least_reference, "least_reference") if criterion.basis == "ratio" else None,
    )
    return _judge_number(criterion, question)


def _check_words(kind: str, qualifiers: tuple[str, str], rule: str) -> None:
    if kind not in KINDS:
        raise Invalid("reading.kind", field="kind", kind=kind, known=", ".join(KINDS))
    for qualifier in qualifiers:
        if qualifier not in QUALIFIERS:
            raise Invalid(
                "reading.qualifier", field="qualifier", qualifier=qualifier, known=", ".join(QUALIFIERS)
            )
    if rule not in RULES:
        raise Invalid("rule.unknown", field="rule", rule=rule, known=", ".join(RULES))


def _decimal(number: Decimal | str | None, name: str) -> Decimal | None:
    """Read a number; what is not finite stays so, to be not assessable."""
    if number is None or isinstance(number, Decimal):
        return number
    try:
        return parse(number, field=name).decimal
    except Invalid as refusal:
        if refusal.code == "number.not_finite":
            return Decimal("NaN")
        raise


def _judge_grade(criterion: Criterion, value: Decimal | str | None, kind: str) -> Judgement:
    """Look a grade, a yes or a no up in the criterion."""
    if not criterion.grades or kind not in WORD_KINDS:
        return not_assessable(Say.KIND_NOT_JUDGED, kind=kind)
    if value is None:
        return not_assessable(Say.NO_READING)
    verdicts = dict(criterion.grades)
    grade = str(value)
    if grade not in verdicts:
        return not_assessable(Say.UNKNOWN_GRADE, grade=grade, known=", ".join(verdicts))
    verdict, level = next(pair for pair in VERDICT_OF_CODE if pair[0] == verdicts[grade])
    return Judgement(verdict, level, Say.GRADED, {"grade": grade, "verdict": verdict})


def _judge_number(criterion: Criterion, question: _Question) -> Judgement:
    """Find what is missing, or compare."""
    flat = _at_band(criterion, question)
    if isinstance(flat, Judgement):
        return flat
    if question.qualifier == "not_seen":
        return _not_seen(flat)
    compared = _comparison(flat, question)
    if isinstance(compared, Judgement):
        return compared
    shown: dict[str, str] = {}
    if flat.of_own_spread:
        lacking = lacking_setups(question.spread)
        if question.spread is None or lacking:
            return not_assessable(Say.TOO_FEW_SETUPS, **(lacking or {}))
        settled, shown = at_spread(flat, question.spread)
        compared = replace(compared, criterion=settled)
    judgement = _explained(compared, question)
    return replace(judgement, parameters=judgement.parameters | shown | _context(criterion, question))


def _explained(compared: Comparison, question: _Question) -> Judgement:
    """Compare; where no share of the reference can be taken, by the absolute parts, which clear nothing."""
    reference = compared.reference
    if (small := _too_small(reference, question)) is not None:
        return small
    bounded = compared.reference_qualifier != "="
    if reference is None or bounded or not _has_no_size(compared.criterion, reference):
        return explain(compared, question.rule)
    left = without_shares(compared.criterion)
    judgement = explain(replace(compared, criterion=left), question.rule) if left.levels() else None
    if judgement is None or severity(judgement) <= NOT_ASSESSABLE:
        told = {"basis": left.basis, "reference": plain(reference)}
        return not_assessable(Say.ZERO_REFERENCE, **told)
    return replace(judgement, parameters=judgement.parameters | {"no_share": "yes"})


def _too_small(reference: Decimal | None, question: _Question) -> Judgement | None:
    """Refuse a ratio to a reading above zero that is too small to take a share of."""
    least = question.least_reference
    if reference is None or least is None or not 0 < reference < least:
        return None
    return not_assessable(Say.SMALL_REFERENCE, reference=plain(reference))


def _at_band(criterion: Criterion, question: _Question) -> Criterion | Judgement:
    """Check that there is a reading in the right unit, and pick the band that holds."""
    if question.qualifier != "not_seen":
        if question.value is None:
            return not_assessable(Say.NO_READING)
        if question.criterion_unit not in (None, question.unit):
            units = {"unit": question.unit or "", "criterion_unit": question.criterion_unit or ""}
            return not_assessable(Say.WRONG_UNIT, **units)
    if not criterion.bands:
        return criterion
    quantity = question.quantity
    if quantity is None or not quantity.is_finite():
        return not_assessable(Say.NO_BAND_QUANTITY, banded_by=criterion.banded_by)
    flat = criterion.at(quantity)
    if flat is None:
        return not_assessable(Say.OUTSIDE_BANDS, banded_by=criterion.banded_by, quantity=plain(quantity))
    return flat


def _not_seen(criterion: Criterion) -> Judgement:
    """Worse than any value, so no reference is needed."""
    if criterion.direction == "either":
        return not_assessable(Say.NOT_SEEN_UNDECIDED)
    level = criterion.levels()[-1][0]
    parameters: dict[str, str] = {"direction": criterion.direction, "level": level}
    return Judgement(level, level, Say.NOT_SEEN, parameters, lower_name=criterion.levels()[0][0])


_MISSING = {"nominal": Say.NO_NOMINAL, "baseline": Say.NO_BASELINE, "ratio": Say.NO_REFERENCE}


def _comparison(criterion: Criterion, question: _Question) -> Comparison | Judgement:
    """Put the reading beside the reference its basis needs, or say which is missing."""
    basis = criterion.basis
    qualifier = question.baseline_qualifier if basis == "baseline" else "="
    if qualifier == "not_seen":
        return not_assessable(Say.BASELINE_NOT_SEEN)
    reference = question.references.get(basis)
    if basis != "none" and reference is None:
        return not_assessable(_MISSING[basis])
    numbers = {"value": question.value, "reference": reference, "uncertainty": question.uncertainty}
    for name, number in numbers.items():
        if number is not None and not number.is_finite():
            return not_assessable(Say.NOT_FINITE, what=name)
    if question.uncertainty is not None and question.uncertainty < 0:
        raise Invalid("uncertainty.negative", field="uncertainty", uncertainty=plain(question.uncertainty))
    value = question.value if question.value is not None else Decimal(0)
    compared = Comparison(
        criterion,
        value,
        question.qualifier,
        reference,
        qualifier,
        question.uncertainty,
        question.never_below_zero,
    )
    return _below_zero(compared, question.unit) or compared


def _below_zero(compared: Comparison, unit: str | None) -> Judgement | None:
    """Refuse to judge what is below zero and never can be; less than zero is below it too."""
    if not compared.never_below_zero:
        return None
    parts = (
        ("value", compared.value, compared.qualifier),
        (compared.criterion.basis, compared.reference, compared.reference_qualifier),
    )
    for what, number, qualifier in parts:
        if number is not None and (number < 0 or (qualifier == "<" and not number)):
            name = "reference" if what == "ratio" else what
            return not_assessable(Say.BELOW_ZERO, what=name, amount=plain(number), unit=unit or "")
    return None


def _has_no_size(criterion: Criterion, reference: Decimal) -> bool:
    if not needs_a_size(criterion):
        return False
    return reference <= 0 if criterion.basis == "ratio" else reference == 0


def _context(criterion: Criterion, question: _Question) -> dict[str, str]:
    """Write what the reading was judged under: unit, rule, band."""
    written = {"unit": question.unit or question.criterion_unit or ""}
    if question.rule != "simple":
        written["rule"] = question.rule
    if question.least_reference is not None:
        written["least_reference"] = plain(question.least_reference)
    band = next(
        (band for band in criterion.bands if question.quantity is not None and band.holds(question.quantity)),
        None,
    )
    if band is not None and question.quantity is not None:
        written |= {
            "banded_by": criterion.banded_by,
            "quantity": plain(question.quantity),
            "band_start": "" if band.start is None else plain(band.start),
            "band_below": "" if band.below is None else plain(band.below),
        }
    return written
