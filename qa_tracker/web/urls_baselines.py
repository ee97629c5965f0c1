"""Addresses of the pages on which baselines are set, kept and replaced."""

from __future__ import annotations

from django.urls import path

from qa_tracker.web.views import baseline_reviews, baseline_setups, baselines

urlpatterns = [
    path("devices/<uuid:uid>/baselines/", baselines.by_value, name="baseline-set"),
    path("devices/<uuid:uid>/baselines/from-check/", baselines.from_check, name="baseline-from-check"),
    path("devices/<uuid:uid>/baselines/set-ups/", baseline_setups.from_set_ups, name="baseline-set-ups"),
    path("devices/<uuid:uid>/baselines/review/", baseline_reviews.review, name="baseline-review"),
]
