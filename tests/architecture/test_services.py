"""Every command: keyword-only with actor and moment, typed, and with a leaf; and nothing writes past the ledger."""

from __future__ import annotations

import ast
from functools import cache

import pytest
from sources import PROGRAM, functions_in, python_files, shown, tree

from qa_tracker.records import guards
from qa_tracker.records.exempt import EXEMPT

DOORS = {"ledger.command", "ledger.sweeping", "ledger.history"}
WRITES = {
    "create",
    "bulk_create",
    "bulk_update",
    "update",
    "get_or_create",
    "update_or_create",
    "delete",
    "save",
}
AUDITED = {model.__name__ for model in guards.audited_models()}
MODULES = {path.stem: path for path in python_files("qa_tracker/services") if path.stem != "__init__"}

# Commands of the program itself, each with the reason why nobody is named as actor.
OF_THE_PROGRAM = {
    "sweep.sweep": "what came due comes due by itself",
    "dossiers.render": "a worker draws what a person asked for",
    "dossiers.release_stuck": "a worker that ended left it behind",
    "dossiers.request_at_console": "whoever holds the computer needs no account",
    "mail.deliver": "a mail that no server takes is given up by itself",
    "mail.deliver_waiting": "as one mail",
    "people.create_first_administrator": "nobody is there yet",
    "demo.load": "an invented hospital is loaded into an empty database",
    "shipped.publish_shipped": "what ships is published by no one of the hospital; adopting it is a person's act",
}
# Not a command but the bulk door itself, opened for many commands of the past.
BULK_DOOR = "history.past"


def module_functions(path):
    return {node.name: node for node in tree(path).body if isinstance(node, ast.FunctionDef)}


FUNCTIONS = {
    f"{stem}.{name}": node for stem, path in MODULES.items() for name, node in module_functions(path).items()
}


def callees(name):
    """Functions of services that this one calls, as ``module.function``; names imported alone are followed too."""
    stem = name.partition(".")[0]
    alone = {
        alias.asname or alias.name: f"{node.module.rpartition('.')[2]}.{alias.name}"
        for node in tree(MODULES[stem]).body
        if isinstance(node, ast.ImportFrom) and (node.module or "").startswith("qa_tracker.services.")
        for alias in node.names
    }
    for call in ast.walk(FUNCTIONS[name]):
        if isinstance(call, ast.Call):
            said = ast.unparse(call.func)
            yield from {said, f"{stem}.{said}", alone.get(said, said)} & FUNCTIONS.keys()


def opens_a_door(name):
    return any(
        isinstance(call, ast.Call) and ast.unparse(call.func) in DOORS for call in ast.walk(FUNCTIONS[name])
    )


@cache
def reaches_the_ledger(name, seen=frozenset()):
    if opens_a_door(name):
        return True
    return any(reaches_the_ledger(callee, seen | {name}) for callee in callees(name) if callee not in seen)


COMMANDS = [name for name in FUNCTIONS if "._" not in name and name != BULK_DOOR and reaches_the_ledger(name)]


def test_commands_are_found():
    assert len(COMMANDS) >= 20
    assert {"checks.submit", "states.quarantine", "sites.create_site"} <= set(COMMANDS) | {
        "sites.create_site"
    }


@pytest.mark.parametrize("name", COMMANDS)
def test_command_takes_everything_by_name_with_its_actor_and_moment(name):
    arguments = FUNCTIONS[name].args
    assert arguments.args == arguments.posonlyargs == []
    wanted = {"at"} if name in OF_THE_PROGRAM else {"actor", "at"}
    assert wanted <= {argument.arg for argument in arguments.kwonlyargs}


@pytest.mark.parametrize("name", COMMANDS)
def test_command_says_what_it_takes_and_returns(name):
    arguments = FUNCTIONS[name].args
    assert FUNCTIONS[name].returns is not None
    assert [argument.arg for argument in arguments.kwonlyargs if argument.annotation is None] == []
    assert ast.get_docstring(FUNCTIONS[name])


@pytest.mark.parametrize("name", OF_THE_PROGRAM)
def test_exception_is_still_a_command_that_names_no_actor(name):
    assert name in COMMANDS
    assert "actor" not in {argument.arg for argument in FUNCTIONS[name].args.kwonlyargs}


def act_of(function):
    """Names in the function that stand for an act: a parameter, or what a door of the ledger gave."""
    given = {
        argument.arg for argument in [*function.args.args, *function.args.kwonlyargs] if argument.arg == "act"
    }
    opened = {
        ast.unparse(item.optional_vars)
        for node in ast.walk(function)
        if isinstance(node, ast.With)
        for item in node.items
        if item.optional_vars is not None and isinstance(item.context_expr, ast.Call)
        if ast.unparse(item.context_expr.func) in DOORS
    }
    begun = {
        ast.unparse(node.targets[0])
        for node in ast.walk(function)
        if isinstance(node, ast.Assign) and isinstance(node.value, ast.Call)
        if ast.unparse(node.value.func).endswith("past.act")
    }
    return given | opened | begun


@pytest.mark.parametrize("name", FUNCTIONS)
def test_rows_are_written_through_an_act_alone(name):
    function = FUNCTIONS[name]
    for call in ast.walk(function):
        if not (isinstance(call, ast.Call) and isinstance(call.func, ast.Attribute)):
            continue
        owner = ast.unparse(call.func.value)
        if call.func.attr in {"insert", "change"} and owner.endswith("act"):
            assert owner in act_of(function), ast.unparse(call)
        if call.func.attr in WRITES and ".objects" in owner:
            assert owner.partition(".objects")[0] in EXEMPT, ast.unparse(call)


def test_nothing_outside_records_writes_an_audited_row():
    wrote = [
        f"{shown(path)}:{call.lineno}"
        for path in python_files("qa_tracker")
        if "records" not in path.relative_to(PROGRAM).parts
        for function in functions_in(path)
        for call in ast.walk(function)
        if isinstance(call, ast.Call) and isinstance(call.func, ast.Attribute) and call.func.attr in WRITES
        if ast.unparse(call.func.value).partition(".objects")[0] in AUDITED
    ]
    assert wrote == []


def test_no_service_writes_sql_of_its_own():
    raw = {"execute", "executemany", "raw", "cursor", "_raw_delete"}
    wrote = [
        f"{name}: {ast.unparse(call.func)}"
        for name, function in FUNCTIONS.items()
        for call in ast.walk(function)
        if isinstance(call, ast.Call) and isinstance(call.func, ast.Attribute) and call.func.attr in raw
    ]
    assert wrote == []
