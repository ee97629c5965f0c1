"""The published library as data: criteria sets, procedures and cautions, checked before anything is stored.

A document arrives as parsed JSON and leaves as frozen rows, or is refused with the place that is wrong, such as
``criteria[2].standing.remedial``. What a criterion says about a reading is decided in ``criteria`` and
``conformity``; which set is in force is decided by the physicist who adopts it.
"""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from typing import Any

from qa_tracker.core.criteria import Band, Criterion
from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_check import check_formulas
from qa_tracker.core.library_reader import one_of, refuse_repeated
from qa_tracker.core.library_shapes import CAUTIONS, CRITERIA_SET, CRITERION, LEVELS, PROCEDURE
from qa_tracker.core.library_specs import (
    CautionSpec,
    CriteriaSetSpec,
    CriterionSpec,
    MeasurandSpec,
    ProcedureSpec,
)


def criteria_set(document: Any) -> CriteriaSetSpec:
    """Read one edition of a published set of criteria.

    Parameters
    ----------
    document
        Parsed JSON of one file of ``fixtures/criteria``.

    Returns
    -------
    CriteriaSetSpec
        Frozen, in the document's order.

    Raises
    ------
    Invalid
        ``library.*`` or ``criterion.*``, with the place as ``field``; also where a level of a criterion has no
        standing, or a standing has no level, since no number is published without one.
    """
    read: CriteriaSetSpec = CRITERIA_SET(document, "")
    refuse_repeated([criterion.id for criterion in read.criteria], "criteria", "id")
    for index, criterion in enumerate(read.criteria):
        _check_levels(criterion, f"criteria[{index}]")
    return read


def criterion(document: Any) -> CriterionSpec:
    """Read one criterion of a set.

    Raises
    ------
    Invalid
        ``library.*`` or ``criterion.*``, with the place as ``field``.
    """
    read: CriterionSpec = CRITERION(document, "criterion")
    return read


def procedure(document: Any) -> ProcedureSpec:
    """Read one procedure.

    Parameters
    ----------
    document
        Parsed JSON of one file of ``fixtures/procedures``.

    Raises
    ------
    Invalid
        ``library.*`` with the place as ``field``; also for a measurand whose parts do not fit its kind, and
        ``formula.*`` for a derived one whose formula can't be worked out, with the column in it.
    """
    read: ProcedureSpec = PROCEDURE(document, "")
    codes = [measurand.code for measurand in read.measurands]
    refuse_repeated(codes, "measurands", "code")
    for index, measurand in enumerate(read.measurands):
        _check_measurand(measurand, codes, f"measurands[{index}]")
    check_formulas(read)
    return read


def cautions(document: Any) -> tuple[CautionSpec, ...]:
    """Read the cautions, each code once.

    Raises
    ------
    Invalid
        ``library.*`` with the place as ``field``.
    """
    read: tuple[CautionSpec, ...] = CAUTIONS(document, "cautions")
    refuse_repeated([caution.code for caution in read], "cautions", "code")
    return read


def check_references(
    sets: Sequence[CriteriaSetSpec], procedures: Sequence[ProcedureSpec], known: Sequence[CautionSpec]
) -> None:
    """Refuse a library whose parts name what is not there, or say two things about one measurand.

    Raises
    ------
    Invalid
        ``library.unknown_caution``, ``library.unknown_criterion``, ``library.unit_differs``,
        ``library.medium_differs`` or ``library.measurand_differs``.
    """
    caution_codes = {caution.code for caution in known}
    parts: tuple[CriteriaSetSpec | ProcedureSpec, ...] = (*sets, *procedures)
    for part in parts:
        for index, code in enumerate(part.cautions):
            if code not in caution_codes:
                raise Invalid("library.unknown_caution", field=f"cautions[{index}]", caution=code)
    criteria = [criterion for one in sets for criterion in one.criteria]
    seen: dict[str, MeasurandSpec] = {}
    for one in procedures:
        for measurand in one.measurands:
            place = f"{one.procedure}.{measurand.code}"
            check_criteria(measurand, criteria, place)
            _check_same(measurand, seen.setdefault(measurand.code, measurand), place)


def asked_of(
    measurand: MeasurandSpec, *, device_kind: str, array_kind: str | None, yearly: bool = False
) -> bool:
    """Whether a measurand is asked of a device: by its kind, by its array, and yearly items only once a year."""
    if measurand.kinds is not None and device_kind not in measurand.kinds:
        return False
    return array_kind not in measurand.not_for_array_kinds and (yearly or not measurand.yearly)


def unread(
    spec: ProcedureSpec,
    read: Collection[str],
    *,
    device_kind: str,
    array_kind: str | None = None,
    yearly: bool = False,
) -> tuple[str, ...]:
    """Name what a check still lacks: each unread required measurand, and each group of which nothing was read.

    Of the measurands that share a ``one_of`` name one answer is enough.

    Parameters
    ----------
    spec
        The procedure.
    read
        Codes of the measurands that have a reading.
    device_kind, array_kind
        The device's kind and, for a probe, its array's kind.
    yearly
        Whether the yearly items are due with this check.

    Returns
    -------
    tuple of str
        Measurand codes and group names in the procedure's order; empty when complete.
    """
    asked = [
        one
        for one in spec.measurands
        if asked_of(one, device_kind=device_kind, array_kind=array_kind, yearly=yearly)
    ]
    answered = {one.one_of for one in asked if one.one_of and one.code in read}
    lacking = [_lack(one, read, answered) for one in asked]
    return tuple(dict.fromkeys(name for name in lacking if name))


def covers(
    one: ProcedureSpec, other: ProcedureSpec, *, device_kind: str, array_kind: str | None = None
) -> bool:
    """Whether a check by one procedure satisfies the other at a device: it asks all that the other requires.

    A procedure covers itself. One that is not meant for the kind of device covers nothing there.
    """
    if device_kind not in one.applies_to.kinds or device_kind not in other.applies_to.kinds:
        return False
    asked = {
        measurand.code
        for measurand in one.measurands
        if asked_of(measurand, device_kind=device_kind, array_kind=array_kind)
    }
    return not unread(other, asked, device_kind=device_kind, array_kind=array_kind)


SAME_READING = ("kind", "unit", "per", "by_condition")
"""In what two editions have to agree about a measurand for a reading by one to count for the other."""


def satisfied(
    spec: ProcedureSpec,
    by: ProcedureSpec,
    times_read: Mapping[str, int],
    *,
    device_kind: str,
    array_kind: str | None = None,
) -> bool:
    """Whether what was read in a check by one procedure is all that another requires of the device.

    Parameters
    ----------
    spec
        The procedure that is asked about.
    by
        The procedure of the check that was done.
    times_read
        How often each measurand was read: the fewest repeats at any part of the device, 0 where one part was
        left out.
    device_kind, array_kind
        The device's kind and, for a probe, its array's kind.

    Returns
    -------
    bool
        False where nothing was read that the procedure asks for, even if it requires nothing of this device, and
        where it is not meant for this kind of device.
    """
    if device_kind not in spec.applies_to.kinds:
        return False
    done = {one.code: one for one in by.measurands}
    read = {
        one.code
        for one in spec.measurands
        if times_read.get(one.code, 0) >= max(one.repeats, 1)
        and one.code in done
        and asked_of(one, device_kind=device_kind, array_kind=array_kind)
        and all(getattr(one, name) == getattr(done[one.code], name) for name in SAME_READING)
    }
    return bool(read) and not unread(spec, read, device_kind=device_kind, array_kind=array_kind)


def _lack(measurand: MeasurandSpec, read: Collection[str], answered: Collection[str | None]) -> str | None:
    if measurand.one_of:
        return None if measurand.one_of in answered else measurand.one_of
    return measurand.code if measurand.required and measurand.code not in read else None


def _check_levels(spec: CriterionSpec, place: str) -> None:
    present = _levels_of(spec.criterion)
    for level in LEVELS:
        standing, word = getattr(spec.standing, level), getattr(spec.own_words, level)
        if level in present and standing is None:
            raise Invalid("library.no_standing", field=f"{place}.standing", level=level)
        if level not in present and (standing is not None or word is not None):
            raise Invalid("library.no_such_level", field=f"{place}.standing", level=level)


def _levels_of(criterion: Criterion) -> frozenset[str]:
    """The levels a criterion can give, in any band or by any grade."""
    parts: tuple[Criterion | Band, ...] = (criterion, *criterion.bands)
    limits = {level for level in LEVELS for part in parts if getattr(part, level) is not None}
    return frozenset(limits | ({str(verdict) for _, verdict in criterion.grades} & set(LEVELS)))


def _check_measurand(measurand: MeasurandSpec, codes: Collection[str], place: str) -> None:
    graded, derived = measurand.kind == "grade", measurand.kind == "derived"
    if graded != bool(measurand.grades):
        raise Invalid("library.kind_does_not_fit", field=f"{place}.grades", kind=measurand.kind)
    if derived != bool(measurand.formula):
        raise Invalid("library.kind_does_not_fit", field=f"{place}.formula", kind=measurand.kind)
    answers = {grade.value for grade in measurand.grades} or {"yes", "no"}
    for answer in measurand.suggests_quarantine_on:
        one_of(*sorted(answers))(answer, f"{place}.suggests_quarantine_on")
    if measurand.reference_from is not None and measurand.reference_from not in codes:
        raise Invalid(
            "library.unknown_measurand", field=f"{place}.reference_from", measurand=measurand.reference_from
        )


def check_criteria(measurand: MeasurandSpec, criteria: Sequence[CriterionSpec], place: str) -> None:
    """Refuse a measurand that names a criterion which is not there, or doesn't fit it in one of its editions.

    Raises
    ------
    Invalid
        ``library.unknown_criterion``, ``library.unit_differs`` or ``library.medium_differs``, with the place given.
    """
    for name in measurand.criteria:
        editions = [criterion for criterion in criteria if criterion.id == name]
        if not editions:
            raise Invalid("library.unknown_criterion", field=place, criterion=name)
        for criterion in editions:
            _check_fit(measurand, criterion, place)


def _check_fit(measurand: MeasurandSpec, criterion: CriterionSpec, place: str) -> None:
    if criterion.unit != measurand.unit:
        raise Invalid("library.unit_differs", field=place, criterion=criterion.id, unit=criterion.unit)
    if criterion.medium not in ("any", measurand.medium):
        raise Invalid("library.medium_differs", field=place, criterion=criterion.id, medium=criterion.medium)


def _check_same(measurand: MeasurandSpec, first: MeasurandSpec, place: str) -> None:
    """Refuse one code for two quantities: a series would run through both."""
    for key in ("name", "kind", "unit", "resolution", "per", "by_condition", "medium", "grades"):
        if getattr(measurand, key) != getattr(first, key):
            raise Invalid("library.measurand_differs", field=f"{place}.{key}", measurand=measurand.code)
