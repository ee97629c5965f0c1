"""What tests may not do: flush guarded tables, keep databases in memory, run tasks eagerly, be skipped."""

from __future__ import annotations

import ast

from sources import functions_in, names_called, python_files, shown, tree

TESTS = python_files("tests")
BANNED_NAMES = {
    "TransactionTestCase", "LiveServerTestCase", "StaticLiveServerTestCase", "ChannelsLiveServerTestCase",
    "live_server", "transactional_db", "django_db_reset_sequences", "django_db_serialized_rollback",
}  # fmt: skip
BANNED_KEYWORDS = {"transaction", "reset_sequences", "serialized_rollback", "databases", "available_apps"}
BANNED_MARKS = {"skip", "skipif", "xfail"}
EAGER = {"task_always_eager", "CELERY_TASK_ALWAYS_EAGER", "task_eager_propagates"}


def nodes(kind, *folders):
    for path in python_files(*folders) if folders else TESTS:
        for node in ast.walk(tree(path)):
            if isinstance(node, kind):
                yield f"{shown(path)}:{getattr(node, 'lineno', 0)}", node


def test_no_test_uses_a_stock_live_server_or_a_flushed_database():
    asked = [where for where, node in nodes(ast.Name) if node.id in BANNED_NAMES]
    imported = [where for where, node in nodes(ast.alias) if node.name in BANNED_NAMES]
    taken = [where for where, node in nodes(ast.arg) if node.arg in BANNED_NAMES]
    assert asked + imported + taken == []


def test_no_test_asks_the_database_mark_for_more_than_a_transaction():
    marks = [
        where
        for where, call in nodes(ast.Call)
        if ast.unparse(call.func).endswith("mark.django_db")
        and (call.args or BANNED_KEYWORDS & {word.arg for word in call.keywords})
    ]
    assert marks == []


def test_no_test_flushes_or_keeps_its_database_in_memory():
    texts = [
        where
        for where, node in nodes(ast.Constant)
        if isinstance(node.value, str)
        and node.value in {"flush", "sqlflush", ":memory:", "sqlite://:memory:"}
    ]
    assert [where for where in texts if "test_ground_rules" not in where] == []


def test_no_test_is_marked_to_be_skipped_or_to_fail():
    marked = [
        where
        for where, node in nodes(ast.Attribute)
        if node.attr in BANNED_MARKS and ast.unparse(node.value) == "pytest.mark"
    ]
    assert marked == []


def test_what_is_skipped_for_a_missing_program_fails_in_ci():
    skipping = [
        f"{shown(path)} {function.name}"
        for path in TESTS
        for function in functions_in(path)
        if {"pytest.skip", "pytest.importorskip"} & names_called(function)
        and not {"pytest.fail"} & names_called(function)
    ]
    assert skipping == []


def test_no_task_runs_eagerly():
    folders = ("qa_tracker", "config", "tests")
    given = [where for where, node in nodes(ast.keyword, *folders) if node.arg in EAGER]
    set_to = [
        where
        for where, node in nodes(ast.Assign, *folders)
        if any(ast.unparse(target).endswith(tuple(EAGER)) for target in node.targets)
    ]
    called = [where for where, node in nodes(ast.Call, *folders) if ast.unparse(node.func).endswith(".apply")]
    assert [where for where in given + set_to + called if "test_ground_rules" not in where] == []


def test_no_real_part_is_replaced_by_a_mock():
    imported = [
        where
        for where, node in nodes(ast.Import | ast.ImportFrom)
        if "mock" in (getattr(node, "module", "") or "") or any("mock" in alias.name for alias in node.names)
    ]
    assert imported == []


def test_no_test_hides_an_earlier_one_of_its_name():
    for path in TESTS:
        names = [node.name for node in functions_in(path) if node.name.startswith("test_")]
        assert len(names) == len(set(names)), shown(path)


def test_no_two_test_files_have_the_same_name():
    stems = [path.stem for path in TESTS if path.stem != "conftest"]
    assert sorted(stems) == sorted(set(stems))
