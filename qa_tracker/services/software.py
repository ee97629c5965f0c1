"""Software events of a scanner: the version is recorded, and baselines measured on it come under review."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from django.db.models import Q

from qa_tracker.records import ledger
from qa_tracker.records.models import Baseline, Device, ScannerFacts, Submission
from qa_tracker.services.guards import required


def record(
    act: ledger.Act,
    facts: ScannerFacts,
    version: str,
    options: str,
    since_on: dt.date,
    standing: Sequence[Baseline],
) -> list[Baseline]:
    """The rows of a software event, for commands and for history; returns the baselines put under review.

    Parameters
    ----------
    standing
        The baselines in force that were measured on the scanner. Those taken with this version already stay as
        they are, unless the options changed with it.
    """
    version = required(version, "device.software_missing", "software_version")
    old = {"version": facts.software_version, "options": facts.software_options}
    new = {"version": version, "options": options}
    concerned = [
        row
        for row in standing
        if new != old and (row.console_software != version or options != old["options"])
    ]
    act.change(facts, software_version=version, software_options=options, software_since_on=since_on)
    marked = [row for row in concerned if not row.under_review]
    for row in marked:
        act.change(row, under_review=True)
    act.about(facts.device, device=facts.device, site=facts.device.site)
    told = [_told(row) for row in marked]
    act.tell({**new, "since": since_on.isoformat(), **({"under_review": told} if told else {})}, old)
    return marked


def _told(row: Baseline) -> dict[str, object]:
    return {
        "device": row.device.serial,
        "measurand": row.measurand.code,
        "aperture": row.aperture.name if row.aperture else None,
        "condition": row.condition.name if row.condition else None,
        "epoch": row.epoch,
    }


def standing_on(scanner: Device) -> list[Baseline]:
    """The baselines in force of a scanner, of the probes placed on it, and those that were measured on it."""
    names = ("device", "measurand", "aperture", "condition")
    found = Baseline.objects.filter(ended_at=None).select_related(*names).order_by("device_id", "id")
    here = Q(device=scanner) | Q(device__scanner=scanner)
    elsewhere = list(found.filter(console_model=scanner.model).exclude(here).exclude(from_readings=""))
    uids = {uid for row in elsewhere for uid in row.from_readings.split(",")}
    on_it = {str(uid) for uid in _submissions_on(scanner, uids)}
    return [*found.filter(here), *(row for row in elsewhere if on_it & set(row.from_readings.split(",")))]


def _submissions_on(scanner: Device, uids: set[str]) -> Sequence[object]:
    rows = Submission.objects.filter(uid__in=uids, console=scanner)
    return list(rows.values_list("uid", flat=True)) if uids else []
