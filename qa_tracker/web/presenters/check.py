"""A check as it was done: submissions with readings and signatures, and what waits for a countersignature."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, replace

from qa_tracker.core.library_specs import ProcedureSpec
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.records.queries.submissions import NotTestedRow, SubmissionRow
from qa_tracker.services import wording
from qa_tracker.web.presenters.judged import ShownReading, recorded, where_words

ONE_IN = 5


@dataclass(frozen=True)
class ShownSubmission:
    """A submission with its readings in words."""

    row: SubmissionRow
    edition: EditionRow
    readings: tuple[ShownReading, ...]
    partial_reason: str
    decided_by: str = ""


def shown_submission(row: SubmissionRow, edition: EditionRow) -> ShownSubmission:
    """Every item of a submission: read, or with the reason it was not."""
    reasons = {(one.measurand, one.aperture, one.condition): one for one in row.not_tested}
    several = len({reading.aperture_id for reading in row.readings if reading.aperture_id}) > 1
    readings = []
    for reading in row.readings:
        untested = None
        if reading.id is None:
            untested = reasons.pop((reading.measurand, reading.aperture, reading.condition), None)
        shown = recorded(reading, edition.spec, name_aperture=several)
        readings.append(_with_reason(shown, untested) if untested else shown)
    readings += [_untested(one, edition.spec) for one in reasons.values()]
    reason = wording.reason_word(row.partial_reason) if row.partial_reason else ""
    return ShownSubmission(row, edition, tuple(readings), reason, _decided_by(row, tuple(readings)))


def _decided_by(row: SubmissionRow, readings: tuple[ShownReading, ...]) -> str:
    """Which reading made the verdict of the whole; of a conforming one every reading did."""
    if row.verdict in ("", "conforming"):
        return ""
    made = (row.verdict, row.verdict_level)
    found = (each for each in readings if each.shown and (each.shown.verdict, each.shown.level) == made)
    return next((", ".join(filter(None, (each.name, each.where))) for each in found), "")


def _with_reason(shown: ShownReading, untested: NotTestedRow) -> ShownReading:
    return replace(shown, not_tested=wording.reason_word(untested.reason), remark=untested.remark)


def _untested(row: NotTestedRow, spec: ProcedureSpec) -> ShownReading:
    """An item without a limit that could not be tested: it has no verdict row of its own."""
    name = next((each.name for each in spec.measurands if each.code == row.measurand), row.measurand)
    where = where_words(row.aperture, row.condition, 1)
    return ShownReading("", name, where, "", wording.reason_word(row.reason), row.remark, "", None)


def to_countersign(
    rows: Iterable[CheckRow], edition_of: Callable[[CheckRow], EditionRow | None]
) -> list[CheckRow]:
    """The submitted checks that ask for a second signature, by the signing weight of their procedure.

    ``countersigned``: all. ``sampled``: what does not conform, and one in five, chosen by the check's address
    so that nobody can choose it. Anything else: none, though any submitted check may be countersigned.
    """
    return [row for row in rows if (edition := edition_of(row)) and _asks(row, edition.spec.signing)]


def _asks(row: CheckRow, signing: str) -> bool:
    if signing == "countersigned":
        return True
    return signing == "sampled" and (row.verdict not in ("", "conforming") or row.uid.int % ONE_IN == 0)
