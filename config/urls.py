"""Addresses: pages at the root, the API under /api/v1."""

from __future__ import annotations

from django.urls import include, path

from qa_tracker.api.routes import api

urlpatterns = [
    path("api/v1/", api.urls),
    path("", include("qa_tracker.web.urls")),
]
handler403 = "qa_tracker.web.errors.forbidden"
handler404 = "qa_tracker.web.errors.not_found"
handler500 = "qa_tracker.web.errors.server_error"
