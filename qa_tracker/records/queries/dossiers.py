"""Dossiers: asked for, drawn, sealed."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.records.models import Dossier
from qa_tracker.records.queries.scope import Scope, devices_in


@dataclass(frozen=True)
class DossierRow:
    """One dossier."""

    id: int
    uid: uuid.UUID
    device_id: int
    device_uid: uuid.UUID
    device_label: str
    site_id: int | None
    state: str
    requested_by: str
    requested_at: dt.datetime
    content_sha256: str
    ledger_size: int
    ledger_root: str
    file_sha256: str
    pages: int
    issued_at: dt.datetime | None
    failure: str


def _row(dossier: Dossier) -> DossierRow:
    device = dossier.device
    return DossierRow(
        dossier.id, dossier.uid, device.id, device.uid, f"{device.maker} {device.model} {device.serial}",
        device.site_id, dossier.state, dossier.requested_by.name if dossier.requested_by else "", dossier.requested_at,
        dossier.content_sha256, dossier.ledger_size, dossier.ledger_root, dossier.file_sha256, dossier.pages,
        dossier.issued_at, dossier.failure,
    )  # fmt: skip


def list_dossiers(scope: Scope, most: int = 100, **wanted: object) -> list[DossierRow]:
    """Dossiers of devices in sight, newest first."""
    found = Dossier.objects.filter(devices_in(scope, "device__"), **wanted)
    joined = found.select_related("device", "requested_by").distinct().order_by("-id")
    return [_row(dossier) for dossier in joined[:most]]


def find_dossier(scope: Scope, uid: uuid.UUID) -> DossierRow | None:
    """A dossier in sight by uid."""
    found = list_dossiers(scope, uid=uid)
    return found[0] if found else None


def by_file_sha256(digest: str) -> DossierRow | None:
    """The issued dossier whose finished file has this SHA-256, for verifying."""
    found = Dossier.objects.filter(file_sha256=digest, state="issued").select_related(
        "device", "requested_by"
    )
    dossier = found.first()
    return _row(dossier) if dossier else None


def waiting() -> list[int]:
    """Keys of dossiers that are frozen and not yet drawn."""
    return list(Dossier.objects.filter(state="frozen").order_by("id").values_list("id", flat=True))
