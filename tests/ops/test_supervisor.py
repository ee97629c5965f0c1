"""The supervisor with real processes: what dies comes back, and what ends leaves nothing behind."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path

import psutil
import pytest

from config.env import BASE_DIR

TREE = Path(__file__).with_name("tree.py")
Start = Callable[[str], subprocess.Popen[str]]


@pytest.fixture
def start(tmp_path: Path) -> Iterator[Start]:
    """Start a tree on the test's folder and wait for its first word."""
    begun = []
    # Under nohup SIGHUP is ignored, and whatever is started inherits that.
    before = signal.signal(signal.SIGHUP, signal.SIG_DFL)

    def start_one(kind: str) -> subprocess.Popen[str]:
        command = (sys.executable, str(TREE), str(tmp_path), kind)
        env = {**os.environ, "PYTHONPATH": str(BASE_DIR)}
        begun.append(subprocess.Popen(command, stdout=subprocess.PIPE, text=True, env=env))
        return begun[-1]

    yield start_one
    signal.signal(signal.SIGHUP, before)
    for process in begun:
        process.send_signal(signal.SIGTERM)
        process.communicate(timeout=20)


def eventually(condition: Callable[[], bool], limit_s: float = 10) -> bool:
    limit = time.monotonic() + limit_s
    while not condition() and time.monotonic() < limit:
        time.sleep(0.05)
    return condition()


def family(process: subprocess.Popen[str]) -> list[psutil.Process]:
    """Everything below the supervisor, once it said that it is ready."""
    assert process.stdout is not None
    assert process.stdout.readline() == "ready\n"
    return psutil.Process(process.pid).children(recursive=True)


def all_gone(processes: list[psutil.Process], limit_s: float = 5) -> bool:
    return psutil.wait_procs(processes, timeout=limit_s)[1] == []


def of_child(processes: list[psutil.Process], text: str) -> psutil.Process:
    return next(process for process in processes if text in " ".join(process.cmdline()))


def test_supervisor_gives_each_child_its_own_session_when_started(start: Start) -> None:
    below = family(start("steady"))

    assert [os.getsid(process.pid) for process in below] == [process.pid for process in below]
    assert len(below) == 2


def test_supervisor_restarts_a_child_when_it_is_killed(start: Start) -> None:
    supervisor = start("steady")
    below = family(supervisor)
    below[1].kill()

    assert eventually(lambda: not below[1].is_running())
    assert eventually(lambda: len(psutil.Process(supervisor.pid).children()) == 2)
    assert below[0].is_running()


def test_supervisor_waits_longer_each_time_when_a_child_keeps_ending(start: Start, tmp_path: Path) -> None:
    supervisor = start("steady")
    family(supervisor)
    pauses = []
    for _ in range(3):
        worker = psutil.Process(supervisor.pid).children()[-1]
        worker.kill()
        before = time.monotonic()
        assert eventually(lambda: gone_and_replaced(supervisor.pid, worker))  # noqa: B023
        pauses.append(time.monotonic() - before)

    assert pauses == sorted(pauses)
    assert pauses[0] >= 0.2
    assert pauses[2] >= 0.8


def gone_and_replaced(pid: int, killed: psutil.Process) -> bool:
    below = psutil.Process(pid).children()
    return len(below) == 2 and killed not in below


@pytest.mark.parametrize(
    "signal_number", [signal.SIGTERM, signal.SIGINT, signal.SIGHUP], ids=lambda s: s.name
)
def test_supervisor_ends_cleanly_when_told_to(start: Start, signal_number: signal.Signals) -> None:
    supervisor = start("steady")
    below = family(supervisor)
    supervisor.send_signal(signal_number)

    assert supervisor.wait(timeout=10) == 0
    assert all_gone(below, limit_s=0)


def test_supervisor_kills_the_whole_group_when_a_child_does_not_listen(start: Start) -> None:
    supervisor = start("stubborn")
    below = family(supervisor)
    supervisor.terminate()

    assert supervisor.wait(timeout=10) == 0
    assert all_gone(below, limit_s=0)


def test_supervisor_leaves_no_grandchild_when_stopped(start: Start) -> None:
    supervisor = start("family")
    family(supervisor)
    assert eventually(lambda: len(psutil.Process(supervisor.pid).children(recursive=True)) == 3)
    below = psutil.Process(supervisor.pid).children(recursive=True)
    supervisor.terminate()

    assert supervisor.wait(timeout=10) == 0
    assert all_gone(below)


def test_supervisor_sweeps_the_group_when_its_leader_is_killed(start: Start) -> None:
    supervisor = start("family")
    family(supervisor)
    assert eventually(lambda: len(psutil.Process(supervisor.pid).children(recursive=True)) == 3)
    below = psutil.Process(supervisor.pid).children(recursive=True)
    sleeper = of_child(below, "sleep 600")
    of_child(below, "subprocess").kill()

    assert all_gone([sleeper])


def test_supervisor_stops_the_broker_last_when_it_ends(start: Start, tmp_path: Path) -> None:
    supervisor = start("ordered")
    family(supervisor)
    supervisor.terminate()

    assert supervisor.wait(timeout=10) == 0
    assert (tmp_path / "order").read_text().split() == ["web", "beat", "worker", "catcher", "broker"]


def test_supervisor_leaves_no_orphan_when_it_is_killed(start: Start) -> None:
    supervisor = start("stubborn")
    below = family(supervisor)
    supervisor.kill()

    assert supervisor.wait(timeout=5) == -signal.SIGKILL
    assert all_gone(below)


def test_supervisor_refuses_a_folder_when_another_runs_on_it(start: Start, tmp_path: Path) -> None:
    first = start("steady")
    family(first)
    words, _ = (second := start("steady")).communicate(timeout=10)

    assert second.returncode == 1
    assert words.startswith(f"Leadline is already running on {tmp_path} (process {first.pid}).")


def test_supervisor_takes_the_folder_when_the_last_one_was_killed(start: Start) -> None:
    first = start("steady")
    family(first)
    first.kill()
    first.wait(timeout=5)

    assert len(family(start("steady"))) == 2


def test_supervisor_gives_up_with_the_last_lines_when_a_child_keeps_ending(
    start: Start, tmp_path: Path
) -> None:
    supervisor = start("hopeless")
    words, _ = supervisor.communicate(timeout=15)

    assert supervisor.returncode == 1
    assert "“worker” ended as soon as it was started" in words
    assert words.endswith("no such database\n")


def test_supervisor_writes_what_a_child_says_to_its_log_when_it_runs(start: Start, tmp_path: Path) -> None:
    family(start("steady"))

    assert eventually(lambda: (tmp_path / "logs" / "worker.log").read_text() == "here\n")
