"""Dossiers: asked for, watched until issued, handed out, and verified."""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.cache import patch_cache_control
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.http import require_POST

from qa_tracker.core.errors import Invalid, NotFound
from qa_tracker.records.queries import dossiers as rows
from qa_tracker.records.queries.dossiers import DossierRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services import dossiers, guards, wording
from qa_tracker.services.dossiers import DossierFinding
from qa_tracker.tasks import beat
from qa_tracker.tasks.hints import send_hint
from qa_tracker.web import refused, sight

LARGEST_FILE = 50 * 2**20


def _scope(request: HttpRequest, at: dt.datetime) -> Scope:
    guards.check_may_somewhere(request.user, "dossier.read", at)
    return guards.scope(request.user, at, "dossier.read")


def index(request: HttpRequest) -> HttpResponse:
    """The newest dossiers in sight."""
    return render(request, "dossiers.html", {"dossiers": rows.list_dossiers(_scope(request, now()))})


@require_POST
def ask_for(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Freeze the content now; a worker draws and seals it."""
    at = now()
    sight.device_to(request, uid, "dossier.issue", at)
    made = dossiers.request(device=uid, actor=request.user, at=at)
    send_hint(beat.RENDER_DOSSIER, made.id)
    messages.success(request, _("The content is frozen. The dossier is being drawn and sealed."))
    return redirect("dossier", uid=made.uid)


def _dossier(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> DossierRow:
    found = rows.find_dossier(_scope(request, at), uid)
    if found is None:
        raise NotFound("dossier.unknown")
    return found


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One dossier; a page that waits for it asks again by ETag, and is answered with nothing while nothing changed."""
    found = _dossier(request, uid, now())
    waits = found.state in ("frozen", "rendering")
    context = {"dossier": found, "zone": sight.zone_of_site(found.site_id), "waits": waits}
    if not waits:
        return render(request, "dossier.html", context)
    tag = f'"{hashlib.sha256(f"{found.uid}/{found.state}/{request.user.pk}".encode()).hexdigest()[:24]}"'
    if request.headers.get("If-None-Match") == tag:
        return HttpResponse(status=304, headers={"ETag": tag})
    response = render(request, "dossier.html", context)
    response["ETag"] = tag
    patch_cache_control(response, private=True, no_cache=True)
    return response


def file(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The sealed file, always as an attachment."""
    at = now()
    found = _dossier(request, uid, at)
    data = dossiers.file_bytes(dossier=uid, actor=request.user, at=at)
    name = f"dossier-{found.uid}.pdf"
    return HttpResponse(
        data,
        content_type="application/pdf",
        headers={
            "Content-Disposition": f'attachment; filename="{name}"',
            "X-Content-Type-Options": "nosniff",
        },
    )


def verify(request: HttpRequest) -> HttpResponse:
    """Say of a file, item by item, whether it is a dossier as it was issued."""
    at = now()
    _scope(request, at)
    if request.method != "POST":
        return render(request, "dossier_verify.html")
    given = request.FILES.get("file")
    if given is None or given.size > LARGEST_FILE:
        error = Invalid("form.file_missing", field="file")
        return render(request, "dossier_verify.html", {"refused": refused.of(error)}, status=422)
    found = dossiers.verify(given.read(), at=at)
    context = {
        "found": found,
        "items": _items(found),
        "name": given.name,
        "dossier": _in_sight(request, found, at),
    }
    return render(request, "dossier_verify.html", context)


def _items(found: DossierFinding) -> list[tuple[bool, str]]:
    return [(holds, wording.seal_sentence(name, code, holds=holds)) for name, holds, code in found.items]


def _in_sight(request: HttpRequest, found: DossierFinding, at: dt.datetime) -> DossierRow | None:
    """The dossier the ledger knows the file as, if the person may see it."""
    return rows.find_dossier(_scope(request, at), found.in_ledger.uid) if found.in_ledger else None
