"""What a device's dossier says of its checks: readings with their lines and sentences, and signatures."""

from __future__ import annotations

import datetime as dt
import zoneinfo
from decimal import Decimal

from django.utils.translation import gettext as _

from qa_tracker.core import decimals
from qa_tracker.core.judged_line import judged_line
from qa_tracker.documents import content as frozen
from qa_tracker.records.queries import library
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.library import CriterionRow, EditionRow
from qa_tracker.records.queries.submissions import (
    ReadingRow,
    SignatureRow,
    SubmissionRow,
    VerdictRow,
)
from qa_tracker.services import wording


class Writer:
    """Puts moments and days in the site's own time; made for one dossier."""

    def __init__(self, zone: str) -> None:
        self.zone = zoneinfo.ZoneInfo(zone)
        self.editions: dict[int, EditionRow] = {}

    def moment(self, at: dt.datetime | None) -> str:
        """A moment with the site's offset, to the second."""
        return at.astimezone(self.zone).isoformat(timespec="seconds") if at else ""

    def day(self, at: dt.datetime | None) -> str:
        """The site's day of a moment."""
        return at.astimezone(self.zone).date().isoformat() if at else ""

    def edition(self, edition_id: int) -> EditionRow:
        """An edition, read once."""
        if edition_id not in self.editions:
            self.editions[edition_id] = library.edition_by_id(edition_id)
        return self.editions[edition_id]


def check_told(writer: Writer, row: CheckRow, made: list[SubmissionRow]) -> frozen.Check:
    """One check: its latest submission, with the signatures of all of them."""
    due_on = row.due_on.isoformat() if row.due_on else ""
    if not made:
        sentence = _satisfied(writer, row) if row.satisfied_by else wording.excuse_words(row.excuse)
        state = wording.check_state_word(row.state)
        return frozen.Check(row.procedure, "", state, due_on, verdict=row.verdict, sentence=sentence)
    latest = made[-1]
    edition = writer.edition(latest.edition_id)
    names = {spec.code: spec.name for spec in edition.spec.measurands}
    return frozen.Check(
        procedure=row.procedure,
        edition=str(edition.number),
        state=wording.check_state_word(row.state),
        due_on=due_on,
        measured_at=writer.moment(latest.measured_at),
        recorded_at=writer.moment(latest.recorded_at),
        performer=latest.performed_by,
        place=row.site_code,
        verdict=latest.verdict,
        sentence=_deciding_sentence(latest, names),
        facts=_facts(latest),
        readings=tuple(_reading(reading, names) for reading in latest.readings),
        untested=tuple(
            frozen.Untested(names.get(each.measurand, each.measurand), wording.reason_word(each.reason))
            for each in latest.not_tested
        ),
        signatures=tuple(signature_told(writer, each) for one in made for each in one.signatures),
        leaf=str(latest.leaf_uid),
    )


def _satisfied(writer: Writer, row: CheckRow) -> str:
    """Which check stands for one that has no submission of its own."""
    return _("Satisfied on %(day)s by “%(procedure)s”, which read all that this check asks for.") % {
        "day": writer.day(row.submitted_at),
        "procedure": row.satisfied_by_procedure,
    }


def _deciding_sentence(latest: SubmissionRow, names: dict[str, str]) -> str:
    """Which reading made the check's verdict."""
    for reading in latest.readings:
        verdict = reading.verdict
        if verdict and (verdict.verdict, verdict.level) == (latest.verdict, latest.verdict_level):
            name = names.get(reading.measurand, reading.measurand)
            return (
                ""
                if verdict.verdict == "conforming"
                else _("The verdict is that of: %(name)s.") % {"name": name}
            )
    return ""


def _facts(latest: SubmissionRow) -> tuple[frozen.Row, ...]:
    facts = [
        (_("Test object"), latest.test_object),
        (_("Instrument"), latest.instrument),
        (_("Console"), " ".join(part for part in (latest.console, latest.console_software) if part)),
        (_("Port"), latest.port),
        (_("Cleaned before"), latest.cleaned_before),
        (_("Cleaned after"), latest.cleaned_after),
        (_("Accepted outside the window"), latest.reason),
        (_("Remark"), latest.remark),
    ]
    return tuple(frozen.Row(label, value) for label, value in facts if value)


def _reading(reading: ReadingRow, names: dict[str, str]) -> frozen.Reading:
    verdict = reading.verdict
    sentence, criterion, line = "", None, frozen.Line()
    if verdict is not None:
        sentence = " ".join([_sentence(verdict), *map(_further_sentence, verdict.further)])
    if verdict is not None and verdict.criterion is not None:
        criterion = _criterion(verdict.criterion, verdict.level)
        line = _line(reading)
    unit = "" if reading.unit in ("", "1") else wording.unit_symbol(reading.unit)
    return frozen.Reading(
        label=names.get(reading.measurand, reading.measurand),
        value=reading.entered,
        verdict=verdict.verdict if verdict else "",
        sentence=sentence,
        unit=unit,
        qualifier=reading.qualifier,
        condition=reading.condition,
        aperture=reading.aperture,
        origin="",
        line=line,
        criterion=criterion,
        further=tuple(
            _criterion(each.criterion, each.level)
            for each in (verdict.further if verdict else ())
            if each.criterion is not None
        ),
    )


def _criterion(row: CriterionRow, level: str) -> frozen.Criterion:
    """A limit with its source, and the standing of the level that was reached."""
    spec = row.spec
    standing = spec.standing.suspension if level == "suspension" else spec.standing.remedial
    return frozen.Criterion(
        row.code,
        f"{row.set_code} {row.set_edition}",
        wording.criterion_words(spec),
        spec.source,
        wording.standing_word(standing or spec.standing.suspension or spec.standing.remedial),
    )


def _sentence(verdict: VerdictRow) -> str:
    return wording.verdict_sentence(verdict.code, verdict.parameters, verdict.verdict, verdict.level)


def _further_sentence(verdict: VerdictRow) -> str:
    """What another limit of the same measurand said."""
    name = verdict.criterion.code if verdict.criterion else ""
    return _("By %(limit)s: %(sentence)s") % {"limit": name, "sentence": _sentence(verdict)}


def _line(reading: ReadingRow) -> frozen.Line:
    verdict = reading.verdict
    if verdict is None or verdict.criterion is None:
        return frozen.Line()
    judged = judged_line(verdict.criterion.spec.criterion, verdict.parameters)
    if judged is None:
        return frozen.Line()
    return frozen.Line(
        origin=_plain(judged.origin),
        value=_plain(judged.value),
        remedial=_plain(judged.remedial),
        suspension=_plain(judged.suspension),
        direction=judged.direction,
        strict=judged.strict,
        qualifier=judged.qualifier,
        ranks=judged.ranks,
    )


def _plain(value: Decimal | None) -> str:
    return "" if value is None else decimals.plain(value)


def signature_told(writer: Writer, row: SignatureRow) -> frozen.Signature:
    """Who signed, as what, when and what for."""
    return frozen.Signature(
        row.name,
        wording.role_word(row.role),
        writer.moment(row.at),
        wording.meaning_word(row.meaning),
        row.remark,
    )
