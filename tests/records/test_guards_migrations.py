"""A later migration that rebuilds every table: SQLite drops the triggers of a table it rebuilds."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest
from attacks import MODELS, cells_of, clash, insert, refusal, update
from django.apps import apps
from django.core.management import call_command
from django.db import connection
from row_maker import make

from qa_tracker.records import guards, migrations
from qa_tracker.records.models.base import Noun

TABLES = [model.__name__ for model in apps.get_app_config("leadline").get_models()]
LATER = f"""
from django.db import migrations, models


class Migration(migrations.Migration):
    dependencies = [("leadline", "{{last}}")]
    operations = [
        migrations.AddField(name, "added_later", models.CharField(max_length=9, default="", db_default=""))
        for name in {TABLES}
    ]
"""


@pytest.fixture
def later_migration(tmp_path, settings, monkeypatch):
    """The real migrations and one more, as a package of its own."""
    folder = tmp_path / "later_migrations"
    shutil.copytree(Path(migrations.__file__).parent, folder, ignore=shutil.ignore_patterns("__pycache__"))
    last = max(path.stem for path in folder.glob("0*.py"))
    (folder / "9999_later.py").write_text(LATER.format(last=last), encoding="utf-8")
    monkeypatch.syspath_prepend(tmp_path)
    settings.MIGRATION_MODULES = {"leadline": "later_migrations"}


def test_guards_stand_when_a_later_migration_has_rebuilt_every_table(committed_db, later_migration):
    rows = [make(model) for model in MODELS.values()]
    call_command("migrate", verbosity=0)
    guards.assert_installed(connection)
    for row in rows:
        table, cells = row._meta.db_table, cells_of(row)
        assert cells["added_later"] == ""
        assert "leadline" in refusal(f'DELETE FROM "{table}"')
        assert "leadline" in update(table, row.pk, {"added_later": "x"})
        assert "already written" in insert(
            table, clash(cells, type(row), None) | {"leaf_id": cells["leaf_id"]}
        )


def test_commands_work_on_when_a_later_migration_has_rebuilt_every_table(committed_db, later_migration):
    call_command("migrate", verbosity=0)
    for model in MODELS.values():
        row = make(model)
        assert model.objects.filter(pk=row.pk, **({"version": 1} if isinstance(row, Noun) else {})).exists()


def test_guards_stand_when_migrate_is_repeated(committed_db):
    call_command("migrate", verbosity=0)
    guards.assert_installed(connection)
