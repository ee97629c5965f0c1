"""Requirements: every line pinned to one version, with who needs it, and nothing imported that isn't there."""

from __future__ import annotations

import ast
import importlib.metadata
import re
import sys

import pytest
from sources import ROOT, python_files, tree

LINE = re.compile(r"(?P<name>[A-Za-z0-9._-]+)(\[[a-z0-9,-]+\])?==(?P<version>[^\s;]+)  # (?P<who>\S.*)")
RUNTIME, TESTS = ROOT / "requirements.txt", ROOT / "tests" / "requirements.txt"
LINES = [
    (path.relative_to(ROOT).as_posix(), line)
    for path in (RUNTIME, TESTS)
    for line in path.read_text().splitlines()
]
OURS = {"qa_tracker", "config", "tests"} | {path.stem for path in python_files("tests")}


def plain(name):
    return re.sub(r"[-_.]+", "-", name).lower()


def pinned(path):
    return {
        plain(LINE.fullmatch(line)["name"]): LINE.fullmatch(line)["version"]
        for line in path.read_text().splitlines()
    }


def imported(*files):
    found = set()
    for path in files:
        for node in ast.walk(tree(path)):
            if isinstance(node, ast.Import):
                found |= {alias.name.partition(".")[0] for alias in node.names}
            elif isinstance(node, ast.ImportFrom) and node.module:
                found.add(node.module.partition(".")[0])
    return found - OURS - set(sys.stdlib_module_names)


def without_a_line(modules, *lists):
    known = {name for path in lists for name in pinned(path)}
    makers = importlib.metadata.packages_distributions()
    return {module for module in modules if not known & {plain(name) for name in makers.get(module, [])}}


@pytest.mark.parametrize(
    ("path", "line"), LINES, ids=[f"{path} {line.split('=')[0]}" for path, line in LINES]
)
def test_line_is_pinned_and_says_who_needs_it(path, line):
    found = LINE.fullmatch(line)
    assert found
    assert importlib.metadata.version(found["name"]) == found["version"]


def test_no_name_stands_in_both_lists():
    assert pinned(RUNTIME).keys() & pinned(TESTS).keys() == set()


def test_every_import_of_the_program_is_required():
    modules = imported(*python_files("qa_tracker", "config"), ROOT / "manage.py")
    assert "django" in modules
    assert without_a_line(modules, RUNTIME) == set()


def test_every_import_of_the_tests_is_required():
    modules = imported(*python_files("tests"))
    assert "pytest" in modules
    assert without_a_line(modules, RUNTIME, TESTS) == set()


def test_every_need_of_a_pinned_package_is_pinned():
    known = pinned(RUNTIME).keys() | pinned(TESTS).keys()
    named_by = re.compile(r"[A-Za-z0-9._-]+")
    needs = {
        plain(named_by.match(need).group())
        for name in known
        for need in importlib.metadata.requires(name) or []
        if ";" not in need
    }
    assert needs - known == set()
