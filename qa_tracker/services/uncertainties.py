"""Stating how well a measurand is measured, and by which decision rule it is judged."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from qa_tracker.core import decimals
from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import DomainError, Invalid, NotFound, SeveralInvalid
from qa_tracker.core.stated_uncertainty import KINDS
from qa_tracker.core.uncertainty import from_repeats
from qa_tracker.core.verdict_kernel import RULES
from qa_tracker.records import ledger
from qa_tracker.records.models import Measurand, Person, Site, StatedUncertainty
from qa_tracker.services.guards import check_may, required, scope

NUMERIC = ("number", "count", "derived", "image")


@dataclass(frozen=True)
class Statement:
    """What is stated of a measurand.

    ``kind`` is a word of ``core.stated_uncertainty.KINDS``; ``entered`` and ``coverage_factor`` belong to the
    first two, ``repeats`` (readings as text) to the third. ``rule`` is empty for the default of each limit.
    """

    measurand: str
    kind: str
    entered: str = ""
    coverage_factor: str = ""
    repeats: Sequence[str] = ()
    rule: str = ""
    source: str = ""


def state(*, statement: Statement, site: Site | None, actor: Person, at: dt.datetime) -> StatedUncertainty:
    """State an uncertainty for the group or one site. Writes StatedUncertainty; leaf ``uncertainty.stated``.

    The statement before it, of the same measurand at the same place, ends. Verdicts that stand are not touched.
    Refused: role, a measurand that is no number, and with one refusal a field what can't be read.
    """
    check_may(actor, "criteria.adopt", site.id if site else None, at)
    measurand = Measurand.objects.filter(code=statement.measurand, kind__in=NUMERIC).first()
    if measurand is None:
        raise Invalid("uncertainty.measurand_unknown", field="measurand", measurand=statement.measurand)
    columns = _columns(statement)
    before = StatedUncertainty.objects.filter(measurand=measurand, site=site, ended_at=None).first()
    with ledger.command("uncertainty.stated", actor=actor, at=at, reason=columns["source"]) as act:
        if before is not None:
            act.change(before, ended_at=at)
        row = act.insert(
            StatedUncertainty(measurand=measurand, site=site, stated_by=actor, stated_at=at, **columns)
        )
        act.about(row, site=site)
        told = {name: columns[name] for name in ("kind", "entered", "coverage_factor", "rule", "source")}
        act.tell(
            {
                "measurand": measurand.code,
                "unit": measurand.unit,
                "site": site.code if site else None,
                "repeats": list(statement.repeats),
                **told,
            }
        )
    return row


def end(*, statement: uuid.UUID, reason: str, actor: Person, at: dt.datetime) -> StatedUncertainty:
    """End a statement: later readings are judged without it. Writes StatedUncertainty; leaf ``uncertainty.ended``.

    Refused: role, one that is not in force, no reason.
    """
    row = in_sight(statement, actor, at)
    check_may(actor, "criteria.adopt", row.site_id, at)
    reason = required(reason, "uncertainty.reason_missing", "reason")
    with ledger.command("uncertainty.ended", actor=actor, at=at, reason=reason) as act:
        act.change(row, ended_at=at)
        act.about(row, site=row.site)
        act.tell({"measurand": row.measurand.code, "site": row.site.code if row.site else None})
    return row


def in_sight(uid: uuid.UUID, actor: Person, at: dt.datetime) -> StatedUncertainty:
    """A statement in force, the group's or of a site in the actor's sight."""
    found = (
        StatedUncertainty.objects.filter(uid=uid, ended_at=None).select_related("measurand", "site").first()
    )
    if found is None or (found.site_id is not None and not scope(actor, at).holds(found.site_id)):
        raise NotFound("uncertainty.unknown")
    return found


def _columns(statement: Statement) -> dict[str, str]:
    """Read a statement, or refuse every field that can't be read."""
    errors: list[DomainError] = []
    if statement.kind not in KINDS:
        errors.append(Invalid("uncertainty.kind", field="kind", kind=statement.kind, known=", ".join(KINDS)))
    if statement.rule not in ("", *RULES):
        errors.append(Invalid("uncertainty.rule", field="rule", rule=statement.rule, known=", ".join(RULES)))
    if not statement.source.strip():
        errors.append(Invalid("uncertainty.source_missing", field="source"))
    numbers: dict[str, str] = {}
    try:
        numbers = _numbers(statement)
    except DomainError as error:
        errors.append(error)
    if errors:
        raise SeveralInvalid(tuple(errors))
    words = {"kind": statement.kind, "rule": statement.rule, "source": statement.source.strip()}
    return {"entered": "", "coverage_factor": "", "repeats": "", **numbers, **words}


def _numbers(statement: Statement) -> dict[str, str]:
    if statement.kind == "repeats":
        values = [decimals.parse(text, field="repeats").decimal for text in statement.repeats]
        found = from_repeats(values)
        return {
            "entered": decimals.plain(found.expanded_of_one, strip=True),
            "repeats": canonical([decimals.plain(value) for value in values]).decode(),
        }
    if statement.kind == "standard":
        return {"entered": _positive(statement.entered, "entered")}
    if statement.kind == "expanded":
        factor = _positive(statement.coverage_factor or "2", "coverage_factor")
        return {"entered": _positive(statement.entered, "entered"), "coverage_factor": factor}
    return {}


def _positive(text: str, field: str) -> str:
    """A number above zero as plain text."""
    exact = decimals.parse(text, field=field)
    if exact.decimal <= Decimal(0):
        raise Invalid("uncertainty.not_positive", field=field, entered=exact.entered)
    return decimals.plain(exact.decimal)
