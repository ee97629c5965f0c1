"""Addresses of the pages."""

from __future__ import annotations

from django.urls import include, path

from qa_tracker.web.views import health, sign_in

urlpatterns = [
    path("sign-in/", sign_in.SignIn.as_view(), name="sign-in"),
    path("sign-out/", sign_in.SignOut.as_view(), name="sign-out"),
    path("health", health.show, name="health"),
    path("criteria/procedures/", include("qa_tracker.web.urls_procedures")),
    path("", include("qa_tracker.web.urls_checks")),
    path("", include("qa_tracker.web.urls_register")),
    path("", include("qa_tracker.web.urls_baselines")),
]
