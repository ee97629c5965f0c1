"""One supervised child: how it is started, how it is known to answer, and how all of it is ended."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Mapping
from contextlib import suppress
from dataclasses import dataclass, field
from pathlib import Path

from config import parent

LOG_LIMIT_BYTES = 5_000_000
POLL_S = 0.05


def at_once() -> bool:
    """A child without a better sign is ready when it is started."""
    return True


def nothing() -> None:
    """Nothing to do before a child starts."""


@dataclass(frozen=True)
class Child:
    """What to run.

    ``env`` is the whole environment; ``ready`` must answer within about a second; ``before`` runs before every
    start, while nothing of the child runs; ``pass_fds`` stay open in the child.
    """

    name: str
    argv: tuple[str, ...]
    env: Mapping[str, str] = field(default_factory=lambda: dict(os.environ))
    cwd: Path | None = None
    ready: Callable[[], bool] = at_once
    before: Callable[[], None] = nothing
    stop_limit_s: float = 10.0
    pass_fds: tuple[int, ...] = ()


class Process:
    """The running side of a child: at any time one process group of its own, or none."""

    def __init__(self, child: Child, logs: Path) -> None:
        self.child = child
        self.log = logs / f"{child.name}.log"
        self.log_from = 0
        self.started_at = 0.0
        self.handle: subprocess.Popen[bytes] | None = None

    def start(self) -> None:
        """Start the child in a session of its own, tied to this process, writing to its log file."""
        self.child.before()
        turn_over(self.log)
        launcher = (sys.executable, "-I", "-S", parent.__file__, str(os.getpid()))
        with self.log.open("ab") as log:
            self.log_from = log.tell()
            self.handle = subprocess.Popen(
                (*launcher, *self.child.argv),
                stdin=subprocess.DEVNULL,
                stdout=log,
                stderr=subprocess.STDOUT,
                env=dict(self.child.env),
                cwd=self.child.cwd,
                pass_fds=self.child.pass_fds,
                start_new_session=True,
            )
        self.started_at = time.monotonic()

    @property
    def is_running(self) -> bool:
        """Whether the child lives; its number stays reserved until ``bury``, so that its group can be ended."""
        if self.handle is None:
            return False
        return os.waitid(os.P_PID, self.handle.pid, os.WEXITED | os.WNOHANG | os.WNOWAIT) is None

    def bury(self) -> int:
        """End what is left of the group, wait for the child, and return its exit code (minus a signal)."""
        if self.handle is None:
            return 0
        with suppress(ProcessLookupError, PermissionError):
            os.killpg(self.handle.pid, signal.SIGKILL)
        code = self.handle.wait()
        self.handle = None
        return code

    def stop(self) -> None:
        """Ask the child to end, and end its whole group when it has not done so within its limit."""
        if self.handle is None:
            return
        if self.is_running:
            self.handle.send_signal(signal.SIGTERM)
        limit = time.monotonic() + self.child.stop_limit_s
        while self.is_running and time.monotonic() < limit:
            time.sleep(POLL_S)
        self.bury()

    def last_lines(self, count: int = 15) -> list[str]:
        """The last lines written since the child was last started."""
        with self.log.open("rb") as log:
            log.seek(self.log_from)
            text = log.read().decode("utf-8", "replace")
        return text.splitlines()[-count:]


def turn_over(log: Path) -> None:
    """Keep one older log file beside a new one, so that logs don't grow without end."""
    if log.exists() and log.stat().st_size > LOG_LIMIT_BYTES:
        log.replace(log.with_suffix(".log.1"))
