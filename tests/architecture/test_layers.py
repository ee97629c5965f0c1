"""The folders are layers: the contracts of pyproject.toml hold, and the lint of each folder too."""

from __future__ import annotations

import ast
import subprocess
import sys

import pytest
from importlinter.cli import lint_imports
from sources import PROGRAM, ROOT, functions_in, python_files, shown, tree

LAYERS = {"core", "records", "documents", "exchange", "seals", "services", "tasks", "web", "api", "ops"}
TOP = {
    "README.md",
    "DEVELOPERS.md",
    "manage.py",
    "requirements.txt",
    "qa_tracker",
    "config",
    "tests",
    "fixtures",
}
TOP |= {"pyproject.toml"}
ANNOTATED = ast.FunctionDef | ast.AsyncFunctionDef | ast.AnnAssign
OURS = python_files("qa_tracker", "config", "tests")


def test_contracts_of_the_layers_hold(capsys):
    outcome = lint_imports(config_filename=str(ROOT / "pyproject.toml"), no_logo=True, cache_dir=None)
    assert outcome == 0, capsys.readouterr().out


def test_lint_of_every_folder_is_clean():
    ruff = subprocess.run(
        [sys.executable, "-m", "ruff", "check", "-q", "."], cwd=ROOT, capture_output=True, text=True
    )
    assert ruff.returncode == 0, ruff.stdout


def test_folders_of_the_program_are_the_layers():
    folders = {path.relative_to(PROGRAM).parts[0] for path in PROGRAM.glob("*/**/*.py")}
    assert folders <= LAYERS


def test_top_level_holds_nothing_else():
    top = {path.name for path in ROOT.iterdir() if not path.name.startswith((".", "__pycache__"))}
    assert top <= TOP


@pytest.mark.parametrize("word", ["utils", "common", "helpers", "misc"])
def test_no_file_is_a_drawer_for_the_rest(word):
    assert [shown(path) for path in OURS if word in (path.stem, *path.parent.parts)] == []


def test_no_function_imports_but_ready():
    inside = [
        f"{shown(path)}:{node.lineno}"
        for path in OURS
        for function in functions_in(path)
        if (path.name, function.name) != ("apps.py", "ready")
        for node in ast.walk(function)
        if isinstance(node, ast.Import | ast.ImportFrom)
    ]
    assert inside == []


def test_every_file_with_annotations_postpones_them():
    wanted = "from __future__ import annotations"
    annotated = [path for path in OURS if any(isinstance(node, ANNOTATED) for node in ast.walk(tree(path)))]
    assert annotated
    assert [shown(path) for path in annotated if wanted not in path.read_text("utf-8")] == []


LEDGER_TABLES = {"Leaf", "LedgerHead", "Checkpoint"}


def test_ledger_tables_are_named_in_records_alone():
    named = [
        f"{shown(path)}:{node.lineno}"
        for path in python_files("qa_tracker", "config")
        if "records" not in path.parts
        for node in ast.walk(tree(path))
        if names_ledger_table(node)
    ]
    assert named == []


def names_ledger_table(node):
    """Imported, reached through a module, or asked for by name."""
    if isinstance(node, ast.ImportFrom) and (node.module or "").startswith("qa_tracker.records.models"):
        return bool(LEDGER_TABLES & {alias.name for alias in node.names})
    if isinstance(node, ast.Call) and ast.unparse(node.func).endswith("get_model"):
        return any(table.lower() in ast.unparse(node).lower() for table in LEDGER_TABLES)
    return isinstance(node, ast.Attribute) and ast.unparse(node).endswith(("ledger.Leaf", "models.Leaf"))
