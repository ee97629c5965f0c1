"""Dossiers: content frozen in one transaction, then drawn and sealed outside any, then issued.

The SHA-256 of the finished file goes into the ledger: that is what refuses every changed byte.
"""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid
from dataclasses import dataclass

from qa_tracker.core.errors import Conflict, DomainError, NotFound
from qa_tracker.core.workflow import DOSSIER, target
from qa_tracker.documents.device_dossier import device_dossier_pdf
from qa_tracker.documents.frozen import content_bytes, from_bytes
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import Device, Dossier, Person
from qa_tracker.records.queries import dossiers as rows
from qa_tracker.records.queries.dossiers import DossierRow
from qa_tracker.seals.finding import SealFinding, verify_pdf
from qa_tracker.seals.pades import sign_pdf
from qa_tracker.services import checkpoints, files, finding
from qa_tracker.services.dossier_content import device_content
from qa_tracker.services.guards import check_may
from qa_tracker.services.keys import seal_key

LEASE = dt.timedelta(minutes=10)
SEAL_NAME = "Leadline"


def request(*, device: uuid.UUID, actor: Person, at: dt.datetime) -> Dossier:
    """Freeze what is known of a device now. Writes Dossier; leaf ``dossier.frozen``.

    A checkpoint of the ledger is made first and named in the content. Refused: role, out of sight.
    """
    row = finding.device(actor, device, at)
    check_may(actor, "dossier.issue", row.site_id or actor.duties_site_id, at)
    return _freeze(row, actor, at)


def request_at_console(*, device: uuid.UUID, at: dt.datetime) -> Dossier:
    """As :func:`request`, for whoever holds the machine itself: the leaf names no person.

    Refused: no such device (``device.unknown``).
    """
    row = Device.objects.filter(uid=device).select_related("site").first()
    if row is None:
        raise NotFound("device.unknown")
    return _freeze(row, None, at)


def _freeze(row: Device, actor: Person | None, at: dt.datetime) -> Dossier:
    checkpoint = checkpoints.make(at=at)
    uid = uuid7()
    content = content_bytes(
        device_content(
            row.uid, dossier_uid=uid, checkpoint=checkpoint, demo_key=seal_key(at=at).is_demo, at=at
        )
    )
    digest = files.keep(content)
    with ledger.command("dossier.frozen", actor=actor, at=at) as act:
        dossier = act.insert(
            Dossier(
                uid=uid,
                device=row,
                state="frozen",
                requested_by=actor,
                requested_at=at,
                content_sha256=digest,
                ledger_size=checkpoint.size,
                ledger_root=checkpoint.root.hex(),
            )
        )
        act.about(dossier, device=row, site=row.site)
        act.tell({"content_sha256": digest, "ledger_size": checkpoint.size}, files=[digest])
    return dossier


def render(*, dossier_id: int, at: dt.datetime) -> bool:
    """Draw, seal and issue a frozen dossier; return whether it is issued. Leaves ``dossier.rendering``,
    then ``dossier.issued`` or ``dossier.failed``. Safe to call twice: only one takes it."""
    dossier = Dossier.objects.select_related("device__site").get(pk=dossier_id)
    try:
        _move(dossier, "render", at, {})
    except Conflict:
        return False
    try:
        sealed, pages = _sealed(dossier, at)
    except (DomainError, OSError, ValueError) as error:
        reason = error.code if isinstance(error, DomainError) else str(error)
        _move(dossier, "fail", at, {"failure": reason[:300]})
        return False
    digest = files.keep(sealed)
    _move(dossier, "issue", at, {"file_sha256": digest, "pages": pages, "issued_at": at, "failure": ""})
    return True


def _sealed(dossier: Dossier, at: dt.datetime) -> tuple[bytes, int]:
    content = from_bytes(files.read(dossier.content_sha256))
    pdf = device_dossier_pdf(content)
    pages = pdf.count(b"/Type /Page\n") or pdf.count(b"/Type /Page ")
    sealed = sign_pdf(pdf, seal_key(at=at), moment=at, reason=content.labels["seal_reason"], name=SEAL_NAME)
    return sealed, pages


def _move(dossier: Dossier, verb: str, at: dt.datetime, columns: dict[str, object]) -> None:
    state = target(DOSSIER, dossier.state, verb)
    with ledger.command(f"dossier.{state}", actor=None, at=at) as act:
        act.change(dossier, state=state, **columns)
        act.about(dossier, device=dossier.device, site=dossier.device.site)
        said = {"state": state, "file_sha256": dossier.file_sha256, "failure": dossier.failure}
        act.tell(said, files=[dossier.file_sha256] if dossier.file_sha256 else [])


def release_stuck(*, at: dt.datetime) -> int:
    """Give back dossiers whose drawing stopped without a word; return how many. Leaf ``dossier.frozen``."""
    released = 0
    for dossier in Dossier.objects.filter(state="rendering").select_related("device__site"):
        began = ledger.moment_of(dossier.leaf_id)
        if began is not None and at - began > LEASE:
            _move(dossier, "release", at, {})
            released += 1
    return released


def file_bytes(*, dossier: uuid.UUID, actor: Person, at: dt.datetime) -> bytes:
    """The sealed file of an issued dossier. Reads only. Refused: role, out of sight, not issued."""
    row = finding.dossier(actor, dossier, at)
    check_may(actor, "dossier.read", row.device.site_id or actor.duties_site_id, at)
    if row.state != "issued":
        raise Conflict("dossier.not_issued", state=row.state)
    return files.read(row.file_sha256)


@dataclass(frozen=True)
class DossierFinding:
    """What verifying a file found: its seal item by item, and whether its hash is in the ledger."""

    sha256: str
    seal: SealFinding
    in_ledger: DossierRow | None

    @property
    def holds(self) -> bool:
        """Whether every item holds."""
        return self.seal.bottom_line and self.in_ledger is not None

    @property
    def items(self) -> tuple[tuple[str, bool, str], ...]:
        """Name, whether it holds, and the refusal's code, one for each thing looked at."""
        looked = [(item.name, item.holds, item.code) for item in self.seal.items]
        return (*looked, ("file_in_ledger", self.in_ledger is not None, "dossier.hash_unknown"))


def verify(data: bytes, *, at: dt.datetime) -> DossierFinding:
    """Verify a dossier's file: seal, coverage, certificate, and the ledger's word on its hash. Reads only."""
    digest = hashlib.sha256(data).hexdigest()
    seal = verify_pdf(data, [seal_key(at=at).certificate_der], moment=at)
    return DossierFinding(digest, seal, rows.by_file_sha256(digest))
