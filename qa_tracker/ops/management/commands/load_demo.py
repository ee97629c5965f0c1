"""``manage.py load_demo``: fill an empty database with the invented demonstration."""

from __future__ import annotations

import json
from dataclasses import asdict
from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.services import demo
from qa_tracker.services.wording_refusals import refusal


class Command(BaseCommand):
    """Load the demo and say what there is."""

    help = "Load an invented hospital group with two years of checks into an empty database."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--seed", type=int, default=demo.SEED)
        parser.add_argument("--json", action="store_true")

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            loaded = demo.load(at=now(), seed=options["seed"])
        except DomainError as error:
            raise CommandError(refusal(error)) from error
        self.stdout.write(json.dumps(asdict(loaded)))
