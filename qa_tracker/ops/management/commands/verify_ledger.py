"""Verify the whole ledger against itself, the rows it covers and its checkpoints."""

from __future__ import annotations

import sys
from dataclasses import asdict
from typing import Any

from django.core.management.base import BaseCommand, CommandParser

from qa_tracker.ops.facts import add_json, print_facts
from qa_tracker.services import upkeep


class Command(BaseCommand):
    """Rehash every leaf, compare every row with its leaf, check every checkpoint."""

    help = "Verify every leaf, every record it covers and every checkpoint. Exit status 1 if any differs."

    def add_arguments(self, parser: CommandParser) -> None:
        add_json(parser)

    def handle(self, *args: Any, **options: Any) -> None:
        found = upkeep.verify_ledger()
        lines = [
            f"leaf {'-' if each.seq is None else each.seq}: {each.what} {each.where}".rstrip()
            for each in found.problems
        ]
        lines.append(
            f"{found.size} leaves, root {found.root}, {found.checkpoints} checkpoint(s): "
            + (f"{len(found.problems)} problem(s)." if found.problems else "everything agrees.")
        )
        facts = asdict(found) | {"agrees": not found.problems}
        print_facts(self.stdout, facts, lines, as_json=options["json"])
        if found.problems:
            sys.exit(1)
