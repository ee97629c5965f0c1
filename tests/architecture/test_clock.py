"""The clock is read at the doors alone: everywhere else the moment is an argument."""

from __future__ import annotations

import ast

from sources import PROGRAM, python_files, shown, tree

DOORS = {"web", "api", "tasks", "ops"}
CLOCKS = ("now", "utcnow", "today", "localtime", "gmtime", "time_ns", "localdate")
EXCEPT = {
    "qa_tracker/records/ids.py": "an identifier carries the moment it was made at; nothing is decided by it"
}


def readings(path):
    for node in ast.walk(tree(path)):
        if not isinstance(node, ast.Call):
            continue
        said = ast.unparse(node.func)
        if said.rpartition(".")[2] in CLOCKS or said == "time.time":
            yield f"{shown(path)}:{node.lineno} {said}"


def test_clock_is_read_at_the_doors_alone():
    inside = [path for path in python_files("qa_tracker") if path.relative_to(PROGRAM).parts[0] not in DOORS]
    assert inside
    assert [said for path in inside if shown(path) not in EXCEPT for said in readings(path)] == []


def test_clock_is_read_at_some_door():
    assert any(
        True
        for path in python_files("qa_tracker/api", "qa_tracker/tasks", "qa_tracker/ops")
        for _ in readings(path)
    )
