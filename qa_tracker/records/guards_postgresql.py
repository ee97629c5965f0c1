"""The guards as PostgreSQL triggers over three functions."""

from __future__ import annotations

from typing import Any

Key = tuple[list[str], str]

REFUSE = """
CREATE OR REPLACE FUNCTION leadline_refuse() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION 'leadline: % on % refused: records are never deleted or overwritten', TG_OP, TG_TABLE_NAME;
END $$
"""
GUARD_ROW = """
CREATE OR REPLACE FUNCTION leadline_guard_row() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF TG_OP = 'UPDATE' THEN
    IF NEW.leaf_id IS NOT DISTINCT FROM OLD.leaf_id OR NEW.id <> OLD.id OR NEW.uid <> OLD.uid THEN
      RAISE EXCEPTION 'leadline: % needs a new leaf that is not yet written', TG_TABLE_NAME;
    END IF;
  END IF;
  IF EXISTS (SELECT 1 FROM leadline_leaf WHERE uid = NEW.leaf_id) THEN
    RAISE EXCEPTION 'leadline: %: the leaf is already written; a row can''t join it', TG_TABLE_NAME;
  END IF;
  RETURN NEW;
END $$
"""
GUARD_LEDGER = """
CREATE OR REPLACE FUNCTION leadline_guard_ledger() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF TG_TABLE_NAME = 'leadline_leaf' THEN
    IF NEW.seq <> (SELECT COALESCE(MAX(seq) + 1, 0) FROM leadline_leaf) THEN
      RAISE EXCEPTION 'leadline: leaves are numbered without gaps';
    END IF;
  ELSIF TG_OP = 'INSERT' THEN
    IF EXISTS (SELECT 1 FROM leadline_ledgerhead) THEN
      RAISE EXCEPTION 'leadline: the ledger has one head';
    END IF;
  ELSIF NEW.id <> OLD.id OR NEW.size <= OLD.size THEN
    RAISE EXCEPTION 'leadline: the head of the ledger only grows';
  END IF;
  RETURN NEW;
END $$
"""
PREPARE = (REFUSE, GUARD_ROW, GUARD_LEDGER)
FUNCTIONS = ("leadline_refuse", "leadline_guard_row", "leadline_guard_ledger")


def drop(name: str) -> str:
    """SQL that removes a trigger if it is there; the table is in the trigger's name."""
    table = name.removeprefix("guard_").rpartition("_")[0]
    return f'DROP TRIGGER IF EXISTS "{name}" ON "{table}"'


def _trigger(table: str, suffix: str, moment: str, function: str, scope: str = "ROW") -> dict[str, str]:
    name = f"guard_{table}_{suffix}"
    sql = (
        f'CREATE TRIGGER "{name}" BEFORE {moment} ON "{table}" FOR EACH {scope} EXECUTE FUNCTION {function}()'
    )
    return {name: sql}


def _no_removal(table: str) -> dict[str, str]:
    return _trigger(table, "delete", "DELETE", "leadline_refuse") | _trigger(
        table, "truncate", "TRUNCATE", "leadline_refuse", "STATEMENT"
    )


def row_guards(table: str, _keys: list[Key], *, fact: bool) -> dict[str, str]:
    """Guards of one audited table. An upsert meets the update guard; PostgreSQL has no REPLACE."""
    made = _no_removal(table)
    if fact:
        return (
            made
            | _trigger(table, "update", "UPDATE", "leadline_refuse")
            | _trigger(table, "insert", "INSERT", "leadline_guard_row")
        )
    return made | _trigger(table, "write", "INSERT OR UPDATE", "leadline_guard_row")


def ledger_guards(table: str, _keys: list[Key]) -> dict[str, str]:
    """Guards of the leaf and checkpoint tables: insert-only, and leaves without a gap."""
    made = _no_removal(table) | _trigger(table, "update", "UPDATE", "leadline_refuse")
    if table == "leadline_leaf":
        made |= _trigger(table, "gap", "INSERT", "leadline_guard_ledger")
    return made


def head_guards(table: str) -> dict[str, str]:
    """The head is one row that only grows."""
    return _no_removal(table) | _trigger(table, "write", "INSERT OR UPDATE", "leadline_guard_ledger")


def installed(cursor: Any) -> dict[str, str]:
    """Enabled triggers now in the database, by name, as table, kind and function body."""
    cursor.execute(
        "SELECT t.tgname, t.tgrelid::regclass::text, p.proname, p.prosrc, t.tgtype "
        "FROM pg_trigger t JOIN pg_proc p ON p.oid = t.tgfoid "
        "WHERE NOT t.tgisinternal AND t.tgenabled IN ('O', 'A') AND t.tgqual IS NULL AND t.tgattr::text = ''"
    )
    bodies = {name: body.split("$$")[1] for name, body in zip(FUNCTIONS, PREPARE, strict=True)}
    return {
        name: _trigger_text(name, table.strip('"'), function, kind)
        for name, table, function, source, kind in cursor.fetchall()
        if bodies.get(function) == source
    }


def _trigger_text(name: str, table: str, function: str, kind: int) -> str:
    """A found trigger in the words of :func:`_trigger` (bits of ``tgtype``: row 1, before 2, insert 4, ...)."""
    scope = "ROW" if kind & 1 else "STATEMENT"
    time = "BEFORE" if kind & 2 else "AFTER"
    moments = [
        word for bit, word in ((4, "INSERT"), (8, "DELETE"), (16, "UPDATE"), (32, "TRUNCATE")) if kind & bit
    ]
    sql = f'CREATE TRIGGER "{name}" {time} {" OR ".join(moments)} ON "{table}" '
    return sql + f"FOR EACH {scope} EXECUTE FUNCTION {function}()"


def unenforced(cursor: Any) -> list[str]:
    """Tables whose foreign keys were switched off, without which a row needs no leaf."""
    cursor.execute(
        "SELECT DISTINCT 'foreign keys of ' || c.relname FROM pg_trigger t JOIN pg_class c ON c.oid = t.tgrelid "
        "WHERE t.tgisinternal AND t.tgenabled NOT IN ('O', 'A') AND starts_with(c.relname, 'leadline_')"
    )
    return [name for (name,) in cursor.fetchall()]


def same(found: str | None, wanted: str) -> bool:
    """Whether a stored trigger is the one wanted."""
    return found == wanted
