"""The guards as SQLite triggers."""

from __future__ import annotations

from typing import Any

PREPARE: tuple[str, ...] = ()
Key = tuple[list[str], str]


def drop(name: str) -> str:
    """SQL that removes a trigger if it is there."""
    return f'DROP TRIGGER IF EXISTS "{name}"'


def _trigger(name: str, moment: str, table: str, condition: str, message: str) -> str:
    when = f" WHEN {condition}" if condition else ""
    return (
        f'CREATE TRIGGER "{name}" BEFORE {moment} ON "{table}" FOR EACH ROW{when} '
        f"BEGIN SELECT RAISE(ABORT, 'leadline: {message}'); END"
    )


def _clash(table: str, key: Key, *, but_self: bool) -> str:
    """Another row with this key: what REPLACE would silently delete."""
    terms, condition = key
    same = " AND ".join(f"{term.format(row='t.')} = {term.format(row='NEW.')}" for term in terms)
    extra = f" AND {condition.format(row='t.')} AND {condition.format(row='NEW.')}" if condition else ""
    other = " AND t.rowid <> OLD.rowid" if but_self else ""
    return f'EXISTS (SELECT 1 FROM "{table}" AS t WHERE {same}{extra}{other})'


def _keys(table: str, keys: list[Key]) -> dict[str, str]:
    made = {}
    for number, key in enumerate(keys):
        message = f"{table} holds a row with this key; rows are never replaced"
        for moment, but_self in (("INSERT", False), ("UPDATE", True)):
            name = f"guard_{table}_{moment.lower()}_key{number}"
            made[name] = _trigger(name, moment, table, _clash(table, key, but_self=but_self), message)
    return made


def row_guards(table: str, keys: list[Key], *, fact: bool) -> dict[str, str]:
    """Guards of one audited table."""
    written = 'EXISTS (SELECT 1 FROM "leadline_leaf" WHERE uid = NEW.leaf_id)'
    joins = f"{table}: the leaf is already written; a row cannot join it"
    made = _keys(table, keys)
    made[f"guard_{table}_delete"] = _trigger(
        f"guard_{table}_delete", "DELETE", table, "", f"{table}: records are never deleted"
    )
    made[f"guard_{table}_insert"] = _trigger(f"guard_{table}_insert", "INSERT", table, written, joins)
    name = f"guard_{table}_update"
    if fact:
        made[name] = _trigger(name, "UPDATE", table, "", f"{table}: what was recorded is never changed")
    else:
        moved = "NEW.leaf_id IS OLD.leaf_id OR NEW.id IS NOT OLD.id OR NEW.uid IS NOT OLD.uid"
        message = f"{table}: a change needs a new leaf that is not yet written"
        made[name] = _trigger(name, "UPDATE", table, f"{moved} OR {written}", message)
    return made


def ledger_guards(table: str, keys: list[Key]) -> dict[str, str]:
    """Guards of the leaf and checkpoint tables: insert-only, and leaves without a gap."""
    made = _keys(table, keys)
    for moment in ("UPDATE", "DELETE"):
        name = f"guard_{table}_{moment.lower()}"
        made[name] = _trigger(name, moment, table, "", f"{table}: the ledger only grows")
    if table == "leadline_leaf":
        gap = 'NEW.seq IS NOT (SELECT COALESCE(MAX(seq) + 1, 0) FROM "leadline_leaf")'
        name = f"guard_{table}_gap"
        made[name] = _trigger(name, "INSERT", table, gap, "leaves are numbered without gaps")
    return made


def head_guards(table: str) -> dict[str, str]:
    """The head is one row that only grows."""
    made = {}
    for moment, condition in (
        ("DELETE", ""),
        ("INSERT", f'EXISTS (SELECT 1 FROM "{table}")'),
        ("UPDATE", "NEW.id IS NOT OLD.id OR NEW.size <= OLD.size"),
    ):
        name = f"guard_{table}_{moment.lower()}"
        made[name] = _trigger(name, moment, table, condition, "the head of the ledger only grows")
    return made


def installed(cursor: Any) -> dict[str, str]:
    """Triggers now in the database, by name, as SQL."""
    cursor.execute("SELECT name, sql FROM sqlite_master WHERE type = 'trigger'")
    return dict(cursor.fetchall())


def unenforced(cursor: Any) -> list[str]:
    """Rules of this connection that are off, without which a row needs no leaf or REPLACE fires no guard."""
    off = []
    for rule in ("foreign_keys", "recursive_triggers"):
        cursor.execute(f"PRAGMA {rule}")
        if cursor.fetchone()[0] != 1:
            off.append(f"PRAGMA {rule}")
    return off


def same(found: str | None, wanted: str) -> bool:
    """Whether a stored trigger is the one wanted."""
    return found == wanted
