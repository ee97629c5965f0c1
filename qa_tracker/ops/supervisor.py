"""A tree of children that starts, stays up and ends as one."""

from __future__ import annotations

import fcntl
import logging
import os
import time
from contextlib import suppress
from pathlib import Path
from types import TracebackType
from typing import IO, Self

from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.processes import POLL_S, Child, Process

STOP_ORDER = ("web", "beat", "worker", "catcher", "broker")
FIRST_PAUSE_S = 0.2
LONGEST_PAUSE_S = 5.0
STEADY_AFTER_S = 10.0
ENDS_BEFORE_GIVING_UP = 3

logger = logging.getLogger(__name__)


class Refused(Exception):
    """The tree can't be started or was not able to; the text is a sentence for the person at the keyboard."""


class Tended:
    """A process with what is needed to start it again: how often in a row it ended, and when it may restart."""

    def __init__(self, process: Process) -> None:
        self.process = process
        self.ends = 0
        self.resume_at = 0.0

    def tend(self) -> None:
        """Notice an end, or start again once the pause is over."""
        now = time.monotonic()
        if self.process.handle is None:
            if now >= self.resume_at:
                self.process.start()
        elif not self.process.is_running:
            self.note_end(now)

    def note_end(self, now: float) -> None:
        """Plan the restart: soon for a child that was steady, later each time for one that keeps ending."""
        if now - self.process.started_at > STEADY_AFTER_S:
            self.ends = 0
        pause = min(FIRST_PAUSE_S * 2**self.ends, LONGEST_PAUSE_S)
        self.ends += 1
        self.resume_at = now + pause
        code = self.process.bury()
        logger.warning("%s ended (%s); it starts again in %.1f s", self.process.child.name, code, pause)


class Supervisor:
    """Children on one data folder, for as long as the ``with`` block lasts.

    Only one supervisor may work on a folder; a second is refused. When the block is left, by whatever way, the
    children are stopped in ``STOP_ORDER`` (names not in it first). A supervisor that is killed outright takes
    its children along, on Linux by the kernel's word (see ``config.parent``).
    """

    def __init__(self, data_dir: Path, interruptions: Interruptions) -> None:
        self.data_dir = data_dir
        self.interruptions = interruptions
        self.children: dict[str, Tended] = {}
        self.lock: IO[str] | None = None

    def __enter__(self) -> Self:
        self.logs = self.data_dir / "logs"
        self.logs.mkdir(parents=True, exist_ok=True, mode=0o700)
        self.lock = take_lock(self.data_dir)
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        with suppress(KeyboardInterrupt), self.interruptions.held():
            self.stop()
        if self.lock is not None:
            self.lock.close()

    def start(self, child: Child) -> None:
        """Start a child and keep it up from now on."""
        with self.interruptions.held():
            tended = Tended(Process(child, self.logs))
            self.children[child.name] = tended
            tended.process.start()

    def tend(self) -> None:
        """Start again what has ended."""
        with self.interruptions.held():
            for tended in self.children.values():
                tended.tend()

    def watch(self) -> None:
        """Keep the children up until a signal interrupts."""
        while True:
            self.tend()
            time.sleep(2 * POLL_S)

    def wait_ready(self, *names: str, limit_s: float = 60.0) -> None:
        """Keep the children up until the named ones answer.

        Raises
        ------
        Refused
            With the last log lines, when one keeps ending or does not answer in time.
        """
        waiting = list(names)
        limit = time.monotonic() + limit_s
        while waiting:
            self.tend()
            self.give_up_on_failing(waiting)
            waiting = [name for name in waiting if not self.is_ready(name)]
            if waiting and time.monotonic() > limit:
                raise self.failure(waiting[0], f"did not answer within {limit_s:.0f} seconds")
            time.sleep(POLL_S)

    def is_ready(self, name: str) -> bool:
        """Whether the child runs and answers."""
        process = self.children[name].process
        return process.is_running and process.child.ready()

    def give_up_on_failing(self, names: list[str]) -> None:
        """A child that keeps ending before it ever answered will not do better."""
        for name in names:
            if self.children[name].ends >= ENDS_BEFORE_GIVING_UP:
                raise self.failure(name, "ended as soon as it was started, several times")

    def failure(self, name: str, what: str) -> Refused:
        """The sentence for a child that could not be brought up, with its own last words."""
        process = self.children[name].process
        lines = "\n".join(process.last_lines()) or "(it wrote nothing)"
        return Refused(
            f"The part “{name}” {what}, so everything was stopped. Its last lines, from {process.log}:\n{lines}"
        )

    def stop(self) -> None:
        """Stop every child, the broker last."""
        ranks = {name: rank for rank, name in enumerate(STOP_ORDER)}
        for name in sorted(self.children, key=lambda name: ranks.get(name, -1)):
            self.children[name].process.stop()
        self.children.clear()


def take_lock(data_dir: Path) -> IO[str]:
    """Take the folder for this process; the kernel gives it back when the process ends, however it ends."""
    lock = (data_dir / "supervisor.lock").open("a+", encoding="ascii")
    try:
        fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except BlockingIOError:
        lock.seek(0)
        holder = lock.read().strip() or "unknown"
        lock.close()
        raise Refused(
            f"Leadline is already running on {data_dir} (process {holder}). "
            "Stop it first, or choose another folder with the variable DATA_DIR."
        ) from None
    lock.truncate(0)
    lock.write(str(os.getpid()))
    lock.flush()
    return lock
