"""``manage.py standalone``: the whole program with one command: pages, worker, timetable and broker."""

from __future__ import annotations

import json
import sys
from concurrent.futures import ThreadPoolExecutor
from contextlib import ExitStack
from typing import Any

from django.conf import settings
from django.core.management import call_command
from django.core.management.base import BaseCommand, CommandError, CommandParser, OutputWrapper
from django.db import Error as DatabaseProblem

from qa_tracker.ops.broker import broker_child, celery_url, socket_address
from qa_tracker.ops.catcher import catcher_child
from qa_tracker.ops.demonstration import demo_people, load_when_empty
from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.parts import beat_child, environment, host_header, listen_for_mail, worker_child
from qa_tracker.ops.people_table import people_table
from qa_tracker.ops.serving import listen, listened, read_bind, web_child
from qa_tracker.ops.static_files import collect_when_stale
from qa_tracker.ops.supervisor import Refused, Supervisor
from qa_tracker.tasks.beat import SWEEP
from qa_tracker.tasks.hints import send_hint


class Command(BaseCommand):
    """Serve until Ctrl-C or SIGTERM; everything that was started ends with it."""

    help = "Run everything on this computer: pages, worker, timetable and, without REDIS_URL, a broker."
    # The pages' own process meets every address and setting as it starts; twice would cost a second.
    requires_system_checks = ()

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument(
            "--demo", action="store_true", help="load the invented demo into an empty database"
        )
        parser.add_argument(
            "--bind", default="127.0.0.1:8000", metavar="HOST:PORT", help="where the pages are served"
        )
        parser.add_argument("--json", action="store_true", help="when ready, print one line of JSON")

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            self.serve(options["bind"], options["demo"], options["json"])
        except Refused as refusal:
            raise CommandError(str(refusal)) from refusal
        except KeyboardInterrupt:
            progress().write("Leadline has stopped.")

    def serve(self, bind: str, demo: bool, as_json: bool) -> None:
        """Start all parts, say where the pages are, and keep everything up."""
        with ExitStack() as stack:
            interruptions = stack.enter_context(Interruptions())
            socket_path = stack.enter_context(socket_address(settings.DATA_DIR))
            supervisor = stack.enter_context(Supervisor(settings.DATA_DIR, interruptions))
            pages = stack.enter_context(listen(read_bind(bind)))
            mail = listen_for_mail(stack, demo)
            broker_url = settings.REDIS_URL or celery_url(socket_path)
            address = f"http://{listened(pages)}"
            env = environment(broker_url, address, mail)
            if not settings.REDIS_URL:
                supervisor.start(broker_child(settings.DATA_DIR, socket_path))
            self.prepare()
            if not settings.REDIS_URL:
                supervisor.wait_ready("broker")
            if mail is not None:
                supervisor.start(catcher_child(mail, settings.DATA_DIR, env))
            supervisor.start(web_child(pages, host_header(), env))
            supervisor.start(worker_child(broker_url, env, own_broker=not settings.REDIS_URL))
            supervisor.start(beat_child(env))
            self.come_up(supervisor, demo)
            send_hint(SWEEP)
            self.announce(address, demo_people() if demo else [], as_json)
            supervisor.watch()

    def come_up(self, supervisor: Supervisor, demo: bool) -> None:
        """Wait for the parts, and load the demo meanwhile; what they would write waits for its transaction."""
        with ThreadPoolExecutor(max_workers=1) as beside:
            waiting = beside.submit(supervisor.wait_ready, *supervisor.children)
            if demo:
                load_when_empty(progress())
            waiting.result()

    def prepare(self) -> None:
        """Bring the database and the static files to this version."""
        progress().write("Preparing the database and the pages ...")
        try:
            call_command("migrate", verbosity=0, interactive=False)
        except DatabaseProblem as error:
            raise Refused(
                f"The database could not be brought to this version ({error}). Check DATABASE_URL, and that its "
                "server or folder can be reached and written to."
            ) from error
        collect_when_stale(settings.DATA_DIR / "static.sha256")

    def announce(self, address: str, people: list[dict[str, str]], as_json: bool) -> None:
        """Say where the pages are and, in the demo, who can sign in."""
        if as_json:
            self.stdout.write(json.dumps({"address": address, "people": people}, ensure_ascii=False))
        else:
            self.stdout.write(f"Leadline is ready at {address} (stop it with Ctrl-C)")
            self.stdout.write(people_table(people))
        self.stdout.flush()


def progress() -> OutputWrapper:
    """Where progress is told: beside the standard output, which carries the result alone."""
    return OutputWrapper(sys.stderr)
