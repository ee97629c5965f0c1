"""``manage.py load_demo``: fill an empty database with the invented demonstration."""

from __future__ import annotations

import json
import time
from dataclasses import asdict
from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.ops.people_table import people_table
from qa_tracker.services import demo
from qa_tracker.services.wording_refusals import refusal


class Command(BaseCommand):
    """Load the demo and say what there is and who can sign in."""

    help = "Load an invented hospital group with two years of checks into an empty database."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--scanners", type=int, metavar="N", help="a larger fleet: so many scanners")
        parser.add_argument("--probes", type=int, metavar="N", help="a larger fleet: so many probes")
        parser.add_argument("--years", type=int, metavar="N", default=2, help="years of checks (2)")
        parser.add_argument(
            "--seed", type=int, metavar="N", default=demo.SEED, help="the same seed draws the same readings"
        )
        parser.add_argument("--json", action="store_true", help="say what was loaded as one line of JSON")

    def handle(self, *args: Any, **options: Any) -> None:
        began = time.perf_counter()
        if not options["json"]:
            self.stderr.write("Loading the demo ...")
        try:
            size = demo.Size(options["scanners"], options["probes"], options["years"])
            loaded = demo.load(at=now(), seed=options["seed"], size=size)
        except DomainError as error:
            raise CommandError(refusal(error)) from error
        told = asdict(loaded) | {"seconds": round(time.perf_counter() - began, 1)}
        self.say(told, options["json"], with_people=options["verbosity"] > 0)

    def say(self, loaded: dict[str, Any], as_json: bool, *, with_people: bool) -> None:
        """What was loaded, for a program or for a person."""
        if as_json:
            self.stdout.write(json.dumps(loaded))
            return
        told = "{scanners} scanners, {probes} probes, {checks} checks and {readings} readings in {seconds} s."
        self.stdout.write(told.format(**loaded))
        if with_people:
            self.stdout.write(people_table(demo.people()))
