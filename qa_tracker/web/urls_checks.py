"""Addresses of what is due, entering, signing and reading checks."""

from __future__ import annotations

from django.urls import path

from qa_tracker.web.views import (
    attempts,
    checks,
    compliance,
    due,
    due_days,
    entry,
    holds,
    notices,
    signing,
    year_ahead,
)

urlpatterns = [
    path("", due.show, name="due"),
    path("year-ahead/", year_ahead.show, name="year-ahead"),
    path("notices/", notices.show, name="notices"),
    path("checks/", checks.index, name="checks"),
    path("checks/compliance/", compliance.show, name="compliance"),
    path("checks/compliance/list/", compliance.behind, name="compliance-list"),
    path("checks/compliance.csv", compliance.download, name="compliance-csv"),
    path("checks/<uuid:uid>/", checks.show, name="check"),
    path("checks/<uuid:uid>/enter/", entry.enter, name="check-enter"),
    path("checks/<uuid:uid>/draft/", entry.draft, name="check-draft"),
    path("checks/<uuid:uid>/sign/", signing.sign, name="check-sign"),
    path("checks/<uuid:uid>/countersign/", checks.countersign, name="check-countersign"),
    path("checks/<uuid:uid>/send-back/", checks.send_back, name="check-send-back"),
    path("checks/<uuid:uid>/not-tested/", attempts.not_tested, name="check-not-tested"),
    path("checks/<uuid:uid>/excuse/", attempts.excuse, name="check-excuse"),
    path("checks/<uuid:uid>/move/", due_days.move, name="check-move"),
    path("checks/<uuid:uid>/acknowledge/", holds.acknowledge, name="check-acknowledge"),
    path("checks/<uuid:uid>/snooze/", holds.snooze, name="check-snooze"),
    path("checks/<uuid:uid>/holds/<uuid:hold>/end/", holds.end, name="hold-end"),
    path("devices/<uuid:uid>/check/<slug:procedure_code>/", attempts.open_unplanned, name="unplanned-check"),
]
