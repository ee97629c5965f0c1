"""How the program is, for machines: no sign-in, no cache."""

from __future__ import annotations

from django.contrib.auth.decorators import login_not_required
from django.http import HttpRequest, JsonResponse
from django.utils.timezone import now

from qa_tracker.services import wording
from qa_tracker.services.health import Health, health


@login_not_required
def show(request: HttpRequest) -> JsonResponse:
    """200 while healthy or starting, 503 with the reasons otherwise."""
    known = health(at=now())
    return JsonResponse(_as_json(known), status=503 if known.status == "unhealthy" else 200)


def _as_json(known: Health) -> dict[str, object]:
    return {
        "status": known.status,
        "reasons": list(known.reasons),
        "says": wording.health_sentence(known),
        "last_sweep": known.last_sweep.isoformat() if known.last_sweep else None,
        "mail_waiting_since": known.mail_waiting_since.isoformat() if known.mail_waiting_since else None,
    }
