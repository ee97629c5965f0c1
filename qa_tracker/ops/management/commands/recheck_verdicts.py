"""Re-derive every stored verdict from its stored parts."""

from __future__ import annotations

import sys
from dataclasses import asdict
from typing import Any

from django.core.management.base import BaseCommand, CommandParser

from qa_tracker.ops.facts import add_json, print_facts
from qa_tracker.services import rechecking


class Command(BaseCommand):
    """Judge every reading again by the criterion, baseline and reference its verdict names."""

    help = "Re-derive every stored verdict from its stored parts. Exit status 1, naming them, if any differs."

    def add_arguments(self, parser: CommandParser) -> None:
        add_json(parser)

    def handle(self, *args: Any, **options: Any) -> None:
        found = rechecking.recheck_verdicts()
        lines = [f"{each.what}: {each.where}" for each in found.problems]
        lines.append(f"{found.verdicts} verdict(s) derived again, {len(found.problems)} differ.")
        facts = asdict(found) | {"agrees": not found.problems}
        print_facts(self.stdout, facts, lines, as_json=options["json"])
        if found.problems:
            sys.exit(1)
