"""What a device's dossier says: read from the records once, put in words, and frozen."""

from __future__ import annotations

import datetime as dt
import uuid

from django.utils.translation import gettext as _

from qa_tracker.core.roles import ROLES
from qa_tracker.documents import content as frozen
from qa_tracker.documents.labels import ENGLISH
from qa_tracker.records.queries import baselines as baseline_rows
from qa_tracker.records.queries import checks, devices, faults, library, people, plans, sites, submissions
from qa_tracker.records.queries.baselines import BaselineRow
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.devices import REGISTER, DeviceRow
from qa_tracker.records.queries.faults import FaultRow
from qa_tracker.records.queries.ledger import CheckpointRow, leaf_range_of
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.records.queries.submissions import SubmissionRow
from qa_tracker.services import cautions, wording
from qa_tracker.services.dossier_checks import Writer, check_told, signature_told
from qa_tracker.services.keys import ledger_key

LAST_CHECKS = 36
DOSSIER_CAUTIONS = ("conforming-not-safe", "memory-limits", "return-to-use")


def device_content(
    device_uid: uuid.UUID,
    *,
    dossier_uid: uuid.UUID,
    checkpoint: CheckpointRow,
    demo_key: bool,
    at: dt.datetime,
) -> frozen.DeviceDossier:
    """Everything the dossier of one device says at a moment, in the words and times of its site."""
    device = devices.find_device(EVERYTHING, device_uid)
    if device is None:
        raise LookupError(f"no device {device_uid}")
    site = sites.site_by_id(device.site_id) if device.site_id else None
    writer = Writer(site.time_zone if site else "UTC")
    done = checks.checks_of_device(device.id, most=LAST_CHECKS)
    made = submissions.submissions_of([row.id for row in done])
    written = tuple(
        check_told(writer, row, made.get(row.id, [])) for row in reversed(done) if _tells(row, made)
    )
    signed = [signature_told(writer, each) for each in submissions.signatures_of(device.uid)]
    found = [(row, _fault(writer, row, signed)) for row in faults.faults_of_device(device.id)]
    told_plans, told_baselines = _plans(writer, device, at), _baselines(writer, device)
    return frozen.DeviceDossier(
        uid=str(dossier_uid),
        title=_("Audit dossier of one device"),
        group=site.name if site else device.pool_name,
        site=f"{site.code} {site.name}" if site else device.pool_name,
        device=device.label,
        state=wording.device_state_word(device.state),
        frozen_at=writer.moment(at),
        as_of=writer.moment(at),
        period=_period(writer, done, at),
        ledger=_ledger(device, checkpoint),
        labels={key: _(text) for key, text in ENGLISH.items()},
        demo_key=demo_key,
        identity=(*_identity(device), *_accepted(signed)),
        placements=_placements(writer, device),
        apertures=_apertures(device),
        software=_software(device, writer),
        plans=told_plans,
        checks=written,
        faults=tuple(fault for _row, fault in found),
        baselines=told_baselines,
        cautions=_cautions(writer),
        people=_people(
            {row.opened_by for row, _fault in found}
            | {action.who for _row, fault in found for action in fault.actions}
            | {each.name for check in written for each in check.signatures}
            | {check.performer for check in written}
            | {each.name for each in signed}
            | {plan.who for plan in told_plans}
            | {baseline.set_by for baseline in told_baselines}
        ),
    )


def _ledger(device: DeviceRow, checkpoint: CheckpointRow) -> frozen.LedgerState:
    first, last = leaf_range_of(device.uid)
    return frozen.LedgerState(
        origin=ledger_key().name,
        size=str(checkpoint.size),
        root=checkpoint.root.hex(),
        first_leaf="" if first is None else str(first),
        last_leaf="" if last is None else str(last),
    )


def _placements(writer: Writer, device: DeviceRow) -> tuple[frozen.Placement, ...]:
    return tuple(
        frozen.Placement(each.place, writer.day(each.started_at), writer.day(each.ended_at), each.reason)
        for each in devices.placements_of(device.id)
    )


def _apertures(device: DeviceRow) -> tuple[frozen.Aperture, ...]:
    return tuple(
        frozen.Aperture(each.name, _("%(n)s elements") % {"n": each.elements} if each.elements else "")
        for each in devices.apertures_of(device.id)
    )


def _tells(row: CheckRow, made: dict[int, list[SubmissionRow]]) -> bool:
    """Whether a check belongs in the history: done, missed or excused, not one still awaited."""
    return bool(made.get(row.id) or row.satisfied_by) or row.state in ("missed", "excused", "void")


def _period(writer: Writer, done: list[CheckRow], at: dt.datetime) -> str:
    days = sorted(writer.day(row.submitted_at) for row in done if row.submitted_at)
    return f"{days[0]} – {writer.day(at)}" if days else writer.day(at)


def _identity(device: DeviceRow) -> tuple[frozen.Row, ...]:
    facts = [
        (_("Kind"), wording.kind_word(device.kind)),
        (_("Maker"), device.maker),
        (_("Model"), device.model),
        (_("Serial number"), device.serial),
        (_("Internal number"), device.inventory_number),
        (_("Array"), wording.array_word(device.array_kind) if device.array_kind else ""),
        (_("Contact"), wording.contact_word(device.contact_class) if device.contact_class else ""),
        (_("Applied part"), device.applied_part),
        (_("Protection class"), device.protection_class),
        (_("Scanner"), device.scanner_label),
        *((wording.register_word(name), device.register.get(name, "")) for name in REGISTER),
    ]
    return tuple(frozen.Row(label, value) for label, value in facts if value)


def _accepted(signed: list[frozen.Signature]) -> list[frozen.Row]:
    """Who accepted the device into use, each time."""
    meaning = wording.meaning_word("accepted")
    found = [each for each in signed if each.meaning == meaning]
    return [frozen.Row(_("Accepted into use"), f"{each.at}, {each.name}, {each.role}") for each in found]


def _software(device: DeviceRow, writer: Writer) -> tuple[frozen.SoftwareVersion, ...]:
    return tuple(
        frozen.SoftwareVersion(row.version, row.since_on.isoformat() if row.since_on else "", row.options)
        for row in devices.software_of(device.id)
    )


def _plans(writer: Writer, device: DeviceRow, at: dt.datetime) -> tuple[frozen.Plan, ...]:
    rows = []
    for plan in plans.plans_of(device.id):
        if plan.ended_at is not None:
            continue
        awaited = checks.next_check_of(plan.id)
        rows.append(
            frozen.Plan(
                plan.procedure,
                wording.recurrence_words(plan.rule, plan.basis),
                plan.responsible,
                awaited.due_on.isoformat() if awaited and awaited.due_on else "",
                wording.due_words(awaited, at, writer.zone.key) if awaited else "",
            )
        )
    return tuple(rows)


def _fault(writer: Writer, row: FaultRow, signed: list[frozen.Signature]) -> frozen.Fault:
    closed_at, meaning = writer.moment(row.closed_at), wording.meaning_word("restored to use")
    actions = tuple(
        frozen.Action(
            writer.moment(each.at),
            f"{each.text} ({each.job_number})" if each.job_number else each.text,
            each.name,
        )
        for each in faults.actions_of(row.id)
    )
    return frozen.Fault(
        title=row.seen.split("\n")[0][:120],
        grade=wording.level_word(row.grade),
        opened_at=writer.moment(row.opened_at),
        state=wording.fault_state_word(row.state),
        closed_at=closed_at,
        seen=row.seen,
        downtime=_downtime(row),
        look_back=row.look_back,
        proof=_proof(row),
        actions=actions,
        signatures=tuple(each for each in signed if (each.at, each.meaning) == (closed_at, meaning)),
    )


def _downtime(row: FaultRow) -> str:
    if row.closed_at is None or row.grade != "suspension":
        return ""
    return _("%(days)s days") % {"days": (row.closed_at - row.opened_at).days}


def _proof(row: FaultRow) -> str:
    if row.proving_check_id is None:
        return row.close_remark
    check = checks.check_by_id(row.proving_check_id)
    verdict = wording.verdict_word(check.verdict) if check.verdict else ""
    return _("%(procedure)s of %(day)s: %(verdict)s") % {
        "procedure": check.procedure,
        "day": check.submitted_at.date().isoformat() if check.submitted_at else "",
        "verdict": verdict,
    }


def _baselines(writer: Writer, device: DeviceRow) -> tuple[frozen.Baseline, ...]:
    names = {spec.code: spec.name for edition in library.list_editions() for spec in edition.spec.measurands}
    return tuple(
        frozen.Baseline(
            measurand=", ".join(
                part
                for part in (names.get(row.measurand, row.measurand), row.aperture, row.condition)
                if part
            ),
            value=row.entered
            if row.qualifier == "="
            else f"{wording.qualifier_word(row.qualifier)} {row.entered}",
            unit="" if row.unit in ("", "1") else wording.unit_symbol(row.unit),
            epoch=str(row.epoch),
            from_on=writer.day(row.valid_from),
            reason=row.reason,
            key=", ".join(part for part in (*_key(row), *_rests_on(row)) if part),
            until_on=writer.day(row.ended_at),
            set_by=row.set_by,
        )
        for row in baseline_rows.baselines_of(device.id)
    )


def _key(row: BaselineRow) -> tuple[str, ...]:
    return row.console_model, row.console_software, row.test_object


def _rests_on(row: BaselineRow) -> tuple[str, ...]:
    """What else a reader has to know of a baseline: its set-ups, its last day, and that it waits for a decision."""
    return (
        _("mean of %(count)d set-ups") % {"count": row.count} if row.count else "",
        _("runs out on %(day)s") % {"day": row.expires_on.isoformat()} if row.expires_on else "",
        _("under review") if row.under_review else "",
        _("tied to the object before by a reading of %(value)s") % {"value": row.overlap_entered}
        if row.overlap_entered
        else "",
    )


def _cautions(writer: Writer) -> tuple[str, ...]:
    """The cautions of the document itself and of every procedure in it, each once."""
    codes = [*DOSSIER_CAUTIONS]
    for edition in writer.editions.values():
        codes += [code for code in edition.spec.cautions if code not in codes]
    return cautions.texts(codes)


def _people(named: set[str]) -> tuple[frozen.Person, ...]:
    """Everybody named, with the roles they hold or held."""
    rows = []
    for person in people.list_people(EVERYTHING):
        if person.name in named:
            held = {grant.role for grant in person.grants}
            words = ", ".join(wording.role_word(role) for role in ROLES if role in held)
            rows.append(frozen.Person(person.name, words))
    return tuple(rows)
