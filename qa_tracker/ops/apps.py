"""The app that holds the commands and system checks."""

from __future__ import annotations

from django.apps import AppConfig


class OpsConfig(AppConfig):
    name = "qa_tracker.ops"
    label = "leadline_ops"
