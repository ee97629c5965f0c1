"""Addresses of what is due, entering, signing and reading checks."""

from __future__ import annotations

from django.urls import path

from qa_tracker.web.views import due, notices

urlpatterns = [
    path("", due.show, name="due"),
    path("notices/", notices.show, name="notices"),
]
