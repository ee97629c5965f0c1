"""Evidence: dossiers, and leaves and checkpoints of the ledger."""

from __future__ import annotations

import uuid
from typing import Any

from django.http import HttpResponse
from ninja import Schema

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.errors import refusals
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import LARGEST_KEY, Cursor, Limit, Moment, page
from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import dossiers as rows
from qa_tracker.records.queries import ledger
from qa_tracker.services import dossiers
from qa_tracker.services.wording import leaf_sentence
from qa_tracker.tasks.beat import RENDER_DOSSIER
from qa_tracker.tasks.hints import send_hint

router = NounRouter(tags=["evidence"])


class DossierOut(Schema):
    """A dossier: frozen, rendering, issued or failed; its content, and the ledger it names."""

    uid: uuid.UUID
    device_uid: uuid.UUID
    device_label: str
    state: str
    requested_by: str
    requested_at: Moment
    content_sha256: str
    ledger_size: int
    ledger_root: str
    file_sha256: str
    pages: int
    issued_at: Moment | None
    failure: str


class LeafOut(Schema):
    """A leaf: its exact bytes as text, their RFC 9162 hash, and what it says as a sentence."""

    seq: int
    uid: uuid.UUID
    kind: str
    at: Moment
    actor_uid: uuid.UUID | None
    device_uid: uuid.UUID | None
    content: str
    leaf_hash: str
    sentence: str


class LeafPage(Schema):
    """One page of leaves."""

    items: list[LeafOut]
    next: int | None


class CheckpointOut(Schema):
    """A signed statement of the ledger's size and root; `note` holds the signature."""

    size: int
    root: str
    at: Moment
    note: str


@router.makes("/devices/{uuid:uid}/dossiers", DossierOut, "requestDossier")
def request_dossier(request: ApiRequest, uid: uuid.UUID) -> rows.DossierRow:
    """Freeze what is known of a device now; the file is drawn and sealed soon after."""
    caller = request.auth
    made = dossiers.request(device=uid, actor=caller.actor, at=caller.at)
    send_hint(RENDER_DOSSIER, made.id)
    return _dossier(caller, made.uid)


@router.reads("/dossiers", list[DossierOut], "listDossiers")
def list_dossiers(request: ApiRequest) -> list[rows.DossierRow]:
    """Dossiers in sight, newest first."""
    request.auth.check_may_somewhere("dossier.read")
    return rows.list_dossiers(request.auth.scope("dossier.read"))


@router.reads("/dossiers/{uuid:uid}", DossierOut, "showDossier")
def show_dossier(request: ApiRequest, uid: uuid.UUID) -> rows.DossierRow:
    """One dossier and its state."""
    request.auth.check_may_somewhere("dossier.read")
    return _dossier(request.auth, uid)


def _dossier(caller: Caller, uid: uuid.UUID) -> rows.DossierRow:
    found = rows.find_dossier(caller.scope("dossier.read"), uid)
    if found is None:
        raise NotFound("dossier.unknown")
    return found


@router.get(
    "/dossiers/{uuid:uid}/file",
    operation_id="downloadDossier",
    openapi_extra={
        "responses": {
            200: {
                "description": "The sealed file.",
                "content": {"application/pdf": {"schema": {"type": "string", "format": "binary"}}},
            },
            **refusals(404, 409)["responses"],
        }
    },
)
def download_dossier(request: ApiRequest, uid: uuid.UUID) -> HttpResponse:
    """The sealed PDF of an issued dossier."""
    caller = request.auth
    data = dossiers.file_bytes(dossier=uid, actor=caller.actor, at=caller.at)
    answer = HttpResponse(data, content_type="application/pdf")
    answer["Content-Disposition"] = f'attachment; filename="dossier-{uid}.pdf"'
    return answer


@router.reads("/ledger/leaves", LeafPage, "listLeaves")
def list_leaves(
    request: ApiRequest,
    device: uuid.UUID | None = None,
    before: Cursor = LARGEST_KEY,
    limit: Limit = 50,
) -> dict[str, Any]:
    """Leaves in sight, newest first."""
    request.auth.check_may_somewhere("ledger.read")
    scope = request.auth.scope("ledger.read")
    found = ledger.list_leaves(scope, before=before, most=limit + 1, device_uid=device)
    shown = page(found, limit, "seq")
    return shown | {"items": [_leaf_out(leaf) for leaf in shown["items"]]}


def _leaf_out(leaf: ledger.LeafRow) -> dict[str, Any]:
    return vars(leaf) | {"leaf_hash": leaf.leaf_hash.hex(), "sentence": leaf_sentence(leaf)}


@router.reads("/ledger/checkpoints", list[CheckpointOut], "listCheckpoints")
def list_checkpoints(request: ApiRequest, limit: Limit = 50) -> list[dict[str, Any]]:
    """Checkpoints, newest first."""
    request.auth.check_may_somewhere("ledger.read")
    return [vars(each) | {"root": each.root.hex()} for each in ledger.list_checkpoints(limit)]
