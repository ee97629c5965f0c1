"""A Celery worker on the embedded broker: the round trip, and what becomes of a task whose worker was killed."""

from __future__ import annotations

import os
import sys
import time
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path

import psutil
import pytest

from config.celery import app
from config.env import BASE_DIR
from qa_tracker.ops.broker import broker_child, celery_url, socket_address
from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.processes import Child
from qa_tracker.ops.supervisor import Supervisor
from qa_tracker.tasks.workers import give_back_held_tasks, worker_answers

pytestmark = pytest.mark.journey

TASKS = """
import os, pathlib, time
from config.celery import app
app.conf.imports = ()

@app.task(name="trial.note")
def note(folder, text):
    pathlib.Path(folder, "note").write_text(f"{text} {os.getpid()}")

@app.task(name="trial.hold")
def hold(folder):
    begun = pathlib.Path(folder, "begun")
    with begun.open("a") as file:
        file.write("x")
    if begun.stat().st_size == 1:
        time.sleep(600)
"""
NODE = "leadline@trial"


@dataclass
class Runtime:
    """A broker and what is needed to run workers on it."""

    supervisor: Supervisor
    url: str
    folder: Path

    def start_worker(self, visibility_timeout_s: int = 300) -> None:
        env = {
            **os.environ,
            "PYTHONPATH": f"{BASE_DIR}:{self.folder}",
            "REDIS_URL": self.url,
            "LEADLINE_VISIBILITY_TIMEOUT": str(visibility_timeout_s),
            "REMAP_SIGTERM": "SIGQUIT",
            "CELERY_SKIP_CHECKS": "1",
        }
        argv = (sys.executable, "-m", "celery", "-A", "trial_tasks", "worker", "-n", NODE, "-c", "1")
        options = ("--without-mingle", "--without-gossip", "--without-heartbeat")
        ready = lambda: worker_answers(self.url, NODE)  # noqa: E731
        self.supervisor.start(Child("worker", (*argv, *options), env=env, ready=ready))
        self.supervisor.wait_ready("worker", limit_s=30)

    def worker_process(self) -> psutil.Process:
        return psutil.Process(self.supervisor.children["worker"].process.handle.pid)

    def send(self, name: str, *args: str) -> None:
        with app.connection_for_write(url=self.url) as connection:
            app.send_task(name, args=(str(self.folder), *args), connection=connection)

    def begun(self) -> int:
        return len(self.text("begun"))

    def text(self, name: str) -> str:
        file = self.folder / name
        return file.read_text() if file.exists() else ""


@pytest.fixture
def runtime(tmp_path: Path) -> Iterator[Runtime]:
    (tmp_path / "trial_tasks.py").write_text(TASKS)
    with (
        socket_address(tmp_path) as address,
        Interruptions() as interruptions,
        Supervisor(tmp_path, interruptions) as supervisor,
    ):
        supervisor.start(broker_child(tmp_path, address))
        supervisor.wait_ready("broker", limit_s=10)
        yield Runtime(supervisor, celery_url(address), tmp_path)


def eventually(condition: Callable[[], object], limit_s: float = 10) -> bool:
    limit = time.monotonic() + limit_s
    while not condition() and time.monotonic() < limit:
        time.sleep(0.05)
    return bool(condition())


def kill_while_holding(runtime: Runtime, visibility_timeout_s: int) -> None:
    """Kill the worker outright in the middle of a task."""
    runtime.start_worker(visibility_timeout_s)
    runtime.send("trial.hold")
    assert eventually(lambda: runtime.begun() == 1)
    runtime.worker_process().kill()
    runtime.supervisor.children.pop("worker").process.bury()


def test_worker_runs_a_task_in_a_process_of_its_own_when_it_is_sent(runtime: Runtime) -> None:
    runtime.start_worker()
    runtime.send("trial.note", "done by")

    assert eventually(lambda: runtime.text("note").startswith("done by "))
    worker = int(runtime.text("note").split()[-1])
    assert worker in {process.pid for process in runtime.worker_process().children()}


def test_pool_process_ends_when_its_worker_is_killed(runtime: Runtime) -> None:
    runtime.start_worker()
    worker = runtime.worker_process()
    pool = worker.children()
    worker.kill()

    assert pool
    assert psutil.wait_procs(pool, timeout=3)[1] == []


def test_held_task_runs_again_when_it_is_given_back_at_the_next_start(runtime: Runtime) -> None:
    kill_while_holding(runtime, visibility_timeout_s=300)

    assert give_back_held_tasks(runtime.url) == 1
    runtime.start_worker()
    assert eventually(lambda: runtime.begun() == 2)


def test_held_task_runs_again_when_the_visibility_timeout_is_over(runtime: Runtime) -> None:
    kill_while_holding(runtime, visibility_timeout_s=2)
    runtime.start_worker(visibility_timeout_s=2)

    assert eventually(lambda: runtime.begun() == 2, limit_s=15)


def test_held_task_is_back_in_line_when_the_worker_is_stopped(runtime: Runtime) -> None:
    runtime.start_worker()
    runtime.send("trial.hold")
    assert eventually(lambda: runtime.begun() == 1)
    runtime.supervisor.children.pop("worker").process.stop()
    runtime.start_worker()

    assert eventually(lambda: runtime.begun() == 2)


def test_worker_does_not_answer_when_no_broker_runs(tmp_path: Path) -> None:
    assert not worker_answers(celery_url(tmp_path / "none.sock"), NODE)
