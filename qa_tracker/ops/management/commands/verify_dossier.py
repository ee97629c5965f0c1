"""Verify a dossier's file: its seal, and its hash against the ledger."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.utils.timezone import now

from qa_tracker.core.errors import Invalid
from qa_tracker.ops.facts import add_json, print_facts
from qa_tracker.services import dossiers, wording


class Command(BaseCommand):
    """Look at a file item by item; exit 0 only when every item holds."""

    help = "Verify the seal of a dossier's file and that the ledger holds its hash. Exit status 1 if not."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("file", metavar="FILE")
        add_json(parser)

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            data = Path(options["file"]).read_bytes()
        except OSError as error:
            raise CommandError(f"{options['file']} can't be read: {error.strerror}.") from error
        found = dossiers.verify(data, at=now())
        items = [
            {"item": name, "holds": holds, "why": "" if holds else wording.refusal(Invalid(code))}
            for name, holds, code in found.items
        ]
        lines = [
            f"{'holds' if each['holds'] else 'REFUSED'}  {each['item']}  {each['why']}" for each in items
        ]
        lines.append("The file is as it was issued." if found.holds else "The file is refused.")
        facts = {"holds": found.holds, "sha256": found.sha256, "items": items}
        print_facts(self.stdout, facts, lines, as_json=options["json"])
        if not found.holds:
            sys.exit(1)
