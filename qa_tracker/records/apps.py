"""The storage app: its label, and so every table's prefix, is ``leadline``."""

from __future__ import annotations

from django.apps import AppConfig
from django.db.models.signals import post_migrate, pre_migrate


class RecordsConfig(AppConfig):
    name = "qa_tracker.records"
    label = "leadline"

    def ready(self) -> None:
        from qa_tracker.records import guards  # noqa: PLC0415  models can't be imported before the apps are ready

        pre_migrate.connect(guards.before_migrate, sender=self)
        # SQLite rebuilds a table to alter it and silently drops its triggers: put them back after every migrate.
        post_migrate.connect(guards.after_migrate, sender=self)
