"""How commands print facts: sentences for people, or one JSON document with --json."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from typing import Any

from django.core.management.base import CommandParser, OutputWrapper


def add_json(parser: CommandParser) -> None:
    """Add the option every command that prints facts has."""
    parser.add_argument("--json", action="store_true", help="print the facts as one JSON line")


def print_facts(out: OutputWrapper, facts: Mapping[str, Any], lines: Sequence[str], *, as_json: bool) -> None:
    """Print the facts as JSON, or the lines."""
    if as_json:
        out.write(json.dumps(facts, ensure_ascii=False, default=str))
        return
    for line in lines:
        out.write(line)
