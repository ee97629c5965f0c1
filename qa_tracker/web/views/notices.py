"""What a person was told in the program."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now

from qa_tracker.records.queries import notices, sites
from qa_tracker.services import guards, owed
from qa_tracker.web.presenters.notices import told_of_other


def show(request: HttpRequest) -> HttpResponse:
    """The notices of the person, newest first; looking at them marks them as seen."""
    at = now()
    held = sites.list_sites(guards.scope(request.user, at))
    zones = {site.code: site.time_zone for site in held}
    unseen = notices.unseen_count(request.user.pk)
    rows = [
        {
            "notice": row,
            "zone": zones.get(row.site_code, "UTC"),
            "new": place < unseen,
            "other": "" if row.check_uid else told_of_other(row),
        }
        for place, row in enumerate(notices.notices_for(request.user.pk))
    ]
    owed.mark_seen(actor=request.user, at=at)
    may_see_mail = guards.may_somewhere(request.user, "mail.see", at)
    return render(request, "notices.html", {"rows": rows, "may_see_mail": may_see_mail, "sites": held})
