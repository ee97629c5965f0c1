"""The look at the start: a guard that is missing, disabled or changed is found and named."""

from __future__ import annotations

from attacks import MODELS, drop_guards
from django.db import connection, transaction

from qa_tracker.records import guards

SITE = "guard_leadline_site"
TOUCHED = {
    "sqlite": {
        "never fires": (
            f'DROP TRIGGER "{SITE}_delete"',
            f'CREATE TRIGGER "{SITE}_delete" BEFORE DELETE ON leadline_site WHEN 0 '
            "BEGIN SELECT RAISE(ABORT, 'leadline: leadline_site: records are never deleted'); END",
        ),
        "does nothing": (
            f'DROP TRIGGER "{SITE}_delete"',
            f'CREATE TRIGGER "{SITE}_delete" BEFORE DELETE ON leadline_site BEGIN SELECT 1; END',
        ),
        "sits on another table": (
            f'DROP TRIGGER "{SITE}_delete"',
            f'CREATE TRIGGER "{SITE}_delete" BEFORE DELETE ON leadline_heartbeat FOR EACH ROW '
            "BEGIN SELECT RAISE(ABORT, 'leadline: leadline_site: records are never deleted'); END",
        ),
    },
    "postgresql": {
        "disabled": (f'ALTER TABLE leadline_site DISABLE TRIGGER "{SITE}_delete"',),
        "all disabled": ("ALTER TABLE leadline_site DISABLE TRIGGER ALL",),
        "for replicas only": (f'ALTER TABLE leadline_site ENABLE REPLICA TRIGGER "{SITE}_delete"',),
        "never fires": (
            f'DROP TRIGGER "{SITE}_delete" ON leadline_site',
            f'CREATE TRIGGER "{SITE}_delete" BEFORE DELETE ON leadline_site FOR EACH ROW WHEN (false) '
            "EXECUTE FUNCTION leadline_refuse()",
        ),
        "for one column only": (
            f'DROP TRIGGER "{SITE}_write" ON leadline_site',
            f'CREATE TRIGGER "{SITE}_write" BEFORE INSERT OR UPDATE OF code ON leadline_site FOR EACH ROW '
            "EXECUTE FUNCTION leadline_guard_row()",
        ),
        "after the change": (
            f'DROP TRIGGER "{SITE}_write" ON leadline_site',
            f'CREATE TRIGGER "{SITE}_write" AFTER INSERT OR UPDATE ON leadline_site FOR EACH ROW '
            "EXECUTE FUNCTION leadline_guard_row()",
        ),
        "another function": (
            f'DROP TRIGGER "{SITE}_delete" ON leadline_site',
            f'CREATE TRIGGER "{SITE}_delete" BEFORE DELETE ON leadline_site FOR EACH ROW '
            "EXECUTE FUNCTION leadline_guard_row()",
        ),
        "emptied function": (
            "CREATE OR REPLACE FUNCTION leadline_refuse() RETURNS trigger LANGUAGE plpgsql AS "
            "$$ BEGIN RETURN OLD; END $$",
        ),
    },
}


def said():
    try:
        guards.assert_installed(connection)
    except guards.GuardsMissing as refusal:
        return str(refusal)
    return ""


def said_after(*statements):
    """What the look says after the statements, which are then undone."""
    with transaction.atomic(), connection.cursor() as cursor:
        for statement in statements:
            cursor.execute(statement)
        found = said()
        transaction.set_rollback(True)
    return found


def test_nothing_is_said_when_all_guards_stand(db):
    assert said() == ""


def test_each_guard_is_named_when_it_alone_was_dropped(db):
    for name in guards.statements(connection):
        with transaction.atomic():
            drop_guards(name)
            assert f"1 guard(s) of the records are missing or changed, the first is {name}" in said()
            transaction.set_rollback(True)


def test_guard_is_found_when_it_was_disabled_or_changed(db, engine):
    for touch, statements in TOUCHED[engine].items():
        assert "guard_leadline_" in said_after(*statements), touch
    assert said() == ""


def test_guards_stand_again_when_they_are_installed_anew(db, engine):
    for touch, statements in TOUCHED[engine].items():
        with transaction.atomic(), connection.cursor() as cursor:
            for statement in statements:
                cursor.execute(statement)
            guards.install(connection)
            assert "guard_" not in said(), touch
            transaction.set_rollback(True)


UNENFORCED = {
    "sqlite": {
        "foreign_keys": ("PRAGMA foreign_keys=OFF", "PRAGMA foreign_keys=ON"),
        "recursive_triggers": ("PRAGMA recursive_triggers=OFF", "PRAGMA recursive_triggers=ON"),
    },
    "postgresql": {
        "foreign keys of leadline_site": (
            "ALTER TABLE leadline_site DISABLE TRIGGER ALL",
            "ALTER TABLE leadline_site ENABLE TRIGGER ALL",
        ),
    },
}


def test_rule_is_named_when_the_database_does_not_enforce_it(committed_db, engine):
    for rule, (off, on) in UNENFORCED[engine].items():
        with connection.cursor() as cursor:
            cursor.execute(off)
            guards.install(connection)
            assert f"the first is {'PRAGMA ' * (engine == 'sqlite')}{rule}" in said()
            cursor.execute(on)
            assert said() == ""


def test_every_audited_table_has_a_guard_for_each_way_in(db):
    made = guards.statements(connection)
    for table in MODELS:
        ways = {name.removeprefix(f"guard_{table}_") for name in made if name.startswith(f"guard_{table}_")}
        assert "delete" in ways, table
        assert ways & {"write", "update"}, table
        assert ways & {"write", "insert"}, table
