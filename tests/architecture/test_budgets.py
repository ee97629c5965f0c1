"""Lengths of files and functions: a body counts without its docstring; migrations are exempt."""

from __future__ import annotations

import statistics

import pytest
from sources import measured, python_files, shown

PROGRAM = measured("qa_tracker", "config")
CORE = [each for each in PROGRAM if "/core/" in each.where]
REST = [each for each in PROGRAM if "/core/" not in each.where]
TESTS = [each for each in measured("tests") if each.node.name.startswith("test_")]


def test_functions_are_found_in_every_kind():
    assert min(len(CORE), len(REST), len(TESTS)) > 50


def test_no_file_is_longer_than_400_lines():
    files = python_files("qa_tracker", "config", "tests")
    assert [shown(path) for path in files if len(path.read_text("utf-8").splitlines()) > 400] == []


def test_no_function_of_core_is_longer_than_50_lines():
    assert [each.where for each in CORE if each.lines > 50] == []


def test_no_function_is_longer_than_80_lines():
    assert [each.where for each in [*REST, *TESTS] if each.lines > 80] == []


def test_few_functions_are_longer_than_50_lines():
    long = [each.where for each in REST if each.lines > 50]
    assert len(long) <= 0.02 * len(REST), long


@pytest.mark.parametrize(("kind", "most"), [(CORE, 9), (REST, 9), (TESTS, 12)], ids=["core", "rest", "tests"])
def test_median_function_is_short(kind, most):
    assert statistics.median(each.lines for each in kind) <= most
