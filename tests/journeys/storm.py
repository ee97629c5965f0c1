"""The storm: real beats, workers, web and broker of the program, killed with SIGKILL at moments drawn from a seed.

Everything waits for a bounded time only, and every process belongs to one supervisor, which starts again what was
killed as it does in the program itself.
"""

from __future__ import annotations

import logging
import os
import random
import signal
import sys
import time
from collections import Counter
from collections.abc import Callable, Iterator
from contextlib import contextmanager, suppress
from dataclasses import dataclass
from functools import partial
from pathlib import Path

import redis
from aiosmtpd.controller import Controller

from config.celery import app
from config.env import BASE_DIR
from qa_tracker.ops.broker import broker_child, celery_url, socket_address
from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.parts import beat_child
from qa_tracker.ops.processes import Child
from qa_tracker.ops.serving import Bind, listen, listened, web_answers, web_child
from qa_tracker.ops.supervisor import Supervisor
from qa_tracker.tasks.beat import DELIVER_DIGEST, SWEEP
from qa_tracker.tasks.hints import BROKER_ERRORS
from tests.journeys.mail_catcher import MailCatcher
from tests.mail_server import free_port

LEASE_S = 5
PERIOD_S = 15
"""Seconds between two sweeps of one beat, 60 in the program: all that is measured is measured in it.

No shorter: a worker looks for a lost broker after 2, 4, 6 ... seconds whatever the period.
"""
ECHOES = 3
HOST = "127.0.0.1"
TARGETS = ("worker", "beat", "worker", "broker", "worker", "worker", "web", "worker", "worker", "worker")
"""What the kills are for, in equal shares of a tenth; they come in drawn order."""


@dataclass(frozen=True)
class Weather:
    """How hard it blows; ``application`` names what the workers load."""

    seed: int
    due: int = 1500
    stale: int = 2000
    kills: int = 20
    wipes: int = 3
    beats: int = 3
    workers: int = 8
    seconds: float = 16
    application: str = "config.celery"


class Storm:
    """The parts of the program on a test's database, and what is done to them."""

    def __init__(self, weather: Weather, folder: Path, database_url: str, catcher: MailCatcher) -> None:
        self.weather, self.folder, self.catcher = weather, folder, catcher
        self.chance = random.Random(weather.seed)
        self.database_url = database_url
        self.kills: Counter[str] = Counter()
        self.wipes = 0
        self.mails: Callable[[], list[int]] = list

    @contextmanager
    def blowing(self) -> Iterator[None]:
        """All parts started; whatever way the block is left, every one of them is ended by its number."""
        with (
            socket_address(self.folder) as self.address,
            listen(Bind(HOST, 0)) as self.pages,
            Interruptions() as interruptions,
            Supervisor(self.folder, interruptions) as self.supervisor,
        ):
            try:
                self._start()
                yield
            finally:
                self._end()

    def environment(self) -> dict[str, str]:
        """What every part is told."""
        return {
            **os.environ,
            "PYTHONPATH": str(BASE_DIR),
            "DJANGO_SETTINGS_MODULE": "config.settings",
            "DATABASE_URL": self.database_url,
            "DATA_DIR": str(self.folder),
            "REDIS_URL": celery_url(self.address),
            "EMAIL_HOST": HOST,
            "EMAIL_PORT": str(self.catcher.port),
            "LEADLINE_MAIL_LEASE_S": str(LEASE_S),
            "LEADLINE_VISIBILITY_TIMEOUT": "1",
            "LEADLINE_SWEEP_PERIOD_S": str(PERIOD_S),
            "CELERY_SKIP_CHECKS": "1",
        }

    def _start(self) -> None:
        env = self.environment()
        self.supervisor.start(broker_child(self.folder, self.address))
        self.supervisor.wait_ready("broker", limit_s=20)
        self.send_stale()
        self.supervisor.start(web_child(self.pages, HOST, env))
        for number in range(self.weather.workers):
            self.supervisor.start(self._worker(number, env))
        for number in range(self.weather.beats):
            plain = beat_child(env)
            self.supervisor.start(Child(f"beat-{number}", plain.argv, env, plain.cwd))

    def _worker(self, number: int, env: dict[str, str]) -> Child:
        pool = ("--hostname", f"storm-{number}@here", "--concurrency", "1")
        options = ("--without-mingle", "--without-gossip", "--without-heartbeat", "--loglevel", "WARNING")
        argv = (sys.executable, "-m", "celery", "-A", self.weather.application, "worker", *pool, *options)
        return Child(f"worker-{number}", argv, env, BASE_DIR)

    def send_stale(self) -> None:
        """Sweeps that piled up while nothing worked; half of them are past their time, as a beat's own would be."""
        with (
            app.connection_for_write(url=celery_url(self.address)) as connection,
            app.amqp.Producer(connection) as to,
        ):
            for number in range(self.weather.stale):
                expires = 0.5 if number % 2 else None
                app.send_task(SWEEP, producer=to, expires=expires, ignore_result=True)

    def tend_until(self, true: Callable[[], bool], what: str, limit_s: float) -> None:
        """Keep all parts up until something is true, or say what did not come."""
        until = time.monotonic() + limit_s
        while not true():
            if time.monotonic() > until:
                raise AssertionError(f"waited {limit_s:.0f} s for: {what}\n{self.last_words()}")
            self.supervisor.tend()
            time.sleep(0.05)

    def wait_up(self) -> None:
        """Wait until every worker takes messages and the web server answers."""
        self.tend_until(lambda: self._taking() >= self.weather.workers, "the workers", 60)
        self.tend_until(self.web_answers, "the web server", 20)

    def _taking(self) -> int:
        """How many workers wait for messages or hold one, as the broker sees them."""
        with suppress(redis.RedisError), self.broker() as client:
            return sum(each["cmd"] == "brpop" for each in client.client_list())
        return 0

    def web_answers(self) -> bool:
        """Whether the web server says how the program is."""
        return web_answers(listened(self.pages), HOST)

    def broker(self) -> redis.Redis:
        """A line to the broker."""
        return redis.Redis(unix_socket_path=str(self.address), socket_timeout=2)

    def blow(self) -> None:
        """Kill and wipe at the moments drawn; all parts are tended between."""
        span = self.weather.seconds
        blows = [(after_s, partial(self._kill, kind)) for after_s, kind in self._kills()]
        blows += [
            ((number + 0.7) * span / self.weather.wipes, self._wipe) for number in range(self.weather.wipes)
        ]
        blows += [((number + 0.9) * span / ECHOES, self._echo) for number in range(ECHOES)]
        began = time.monotonic()
        for after_s, blow in sorted(blows, key=lambda each: each[0]):
            while time.monotonic() - began < after_s:
                self.supervisor.tend()
                time.sleep(0.02)
            blow()
        self.tend_until(lambda: time.monotonic() - began >= span, "the end of the storm", span + 5)

    def _kills(self) -> list[tuple[float, str]]:
        """A moment and a kind of part for each kill: one in each slice of the storm, kinds in drawn order."""
        count = self.weather.kills
        kinds = [TARGETS[number % len(TARGETS)] for number in range(count)]
        self.chance.shuffle(kinds)
        slice_s = self.weather.seconds / count
        return [((number + self.chance.random()) * slice_s, kind) for number, kind in enumerate(kinds)]

    def _kill(self, kind: str) -> None:
        """SIGKILL for one part of a kind; for a worker it may hit the process of its pool."""
        names = sorted(name for name in self.supervisor.children if name.startswith(kind))
        handles = [self.supervisor.children[name].process.handle for name in names]
        alive = [handle for handle in handles if handle is not None]
        if not alive:
            return
        handle = self.chance.choice(alive)
        pool = _children_of(handle.pid) if kind == "worker" else []
        with suppress(ProcessLookupError):
            os.kill(self.chance.choice([handle.pid, *pool]), signal.SIGKILL)
            self.kills[kind] += 1

    def _wipe(self) -> None:
        """Everything the broker keeps is gone."""
        with suppress(redis.RedisError), self.broker() as client:
            client.flushall()
            self.wipes += 1

    def _echo(self) -> None:
        """Messages of every mail there is, sent or not, come back as those of a broker do that gives out twice."""
        with (
            suppress(*BROKER_ERRORS),
            app.connection_for_write(url=celery_url(self.address)) as connection,
            app.amqp.Producer(connection) as to,
        ):
            for digest_id in self.mails():
                app.send_task(DELIVER_DIGEST, args=(digest_id,), producer=to, retry=False, ignore_result=True)

    def _end(self) -> None:
        for tended in self.supervisor.children.values():
            tended.process.bury()
        self.supervisor.children.clear()

    def last_words(self) -> str:
        """The end of every log."""
        told = []
        for log in sorted((self.folder / "logs").glob("*.log")):
            lines = log.read_text(encoding="utf-8", errors="replace").splitlines()[-12:]
            told.append("\n".join([f"--- {log.name}", *lines]))
        return "\n".join(told)


def _children_of(pid: int) -> list[int]:
    """Processes that one started itself; none where the kernel does not say."""
    try:
        return [int(each) for each in Path(f"/proc/{pid}/task/{pid}/children").read_text().split()]
    except OSError:
        return []


@contextmanager
def catching() -> Iterator[MailCatcher]:
    """A mail server that keeps what it took before it answers."""
    catcher = MailCatcher(free_port())
    controller = Controller(catcher, hostname=HOST, port=catcher.port)
    logging.getLogger("mail.log").setLevel(logging.WARNING)
    controller.start()
    try:
        yield catcher
    finally:
        controller.stop()
