"""The app that holds the pages."""

from __future__ import annotations

from django.apps import AppConfig


class WebConfig(AppConfig):
    name = "qa_tracker.web"
    label = "leadline_web"
