"""Our own source files and what stands in them, read once for all rules."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from pathlib import Path

ROOT = Path(__file__).parents[2]
PROGRAM = ROOT / "qa_tracker"
Function = ast.FunctionDef | ast.AsyncFunctionDef


def python_files(*folders: str) -> list[Path]:
    """Files of ours in these folders, migrations left out."""
    found = [path for folder in folders for path in (ROOT / folder).rglob("*.py")]
    return sorted(path for path in found if "migrations" not in path.parts)


def templates() -> list[Path]:
    return sorted((PROGRAM / "web" / "templates").rglob("*.html"))


def shown(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()


@cache
def tree(path: Path) -> ast.Module:
    return ast.parse(path.read_text(encoding="utf-8"))


@dataclass(frozen=True)
class Measured:
    """A function and the lines of its body, its docstring left out."""

    where: str
    path: Path
    node: Function
    lines: int


def functions_in(path: Path) -> Iterator[Function]:
    for node in ast.walk(tree(path)):
        if isinstance(node, Function):
            yield node


def body_lines(node: Function) -> int:
    body = node.body[1:] if ast.get_docstring(node) is not None else node.body
    return body[-1].end_lineno - body[0].lineno + 1 if body else 0


def measured(*folders: str) -> list[Measured]:
    return [
        Measured(f"{shown(path)}:{node.lineno} {node.name}", path, node, body_lines(node))
        for path in python_files(*folders)
        for node in functions_in(path)
    ]


def names_called(node: ast.AST) -> set[str]:
    """Dotted names of everything called inside."""
    return {ast.unparse(call.func) for call in ast.walk(node) if isinstance(call, ast.Call)}
