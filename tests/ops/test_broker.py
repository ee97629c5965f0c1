"""The embedded broker: on a socket only, in a path short enough, with its file read back after a restart."""

from __future__ import annotations

import stat
import time
from collections.abc import Iterator
from pathlib import Path

import psutil
import pytest
import redis

from qa_tracker.ops.broker import LONGEST_ADDRESS_BYTES, broker_answers, broker_child, socket_address
from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.supervisor import Supervisor


@pytest.fixture
def supervisor(tmp_path: Path) -> Iterator[Supervisor]:
    with Interruptions() as interruptions, Supervisor(tmp_path, interruptions) as supervisor:
        yield supervisor


@pytest.fixture
def address(tmp_path: Path, supervisor: Supervisor) -> Iterator[Path]:
    """The socket of a running broker."""
    with socket_address(tmp_path) as address:
        supervisor.start(broker_child(tmp_path, address))
        supervisor.wait_ready("broker", limit_s=10)
        yield address
        supervisor.stop()


def test_broker_keeps_a_value_when_a_client_sets_it(address: Path) -> None:
    with redis.Redis(unix_socket_path=str(address)) as client:
        client.set("word", "leadline")

        assert client.get("word") == b"leadline"


def test_broker_has_its_values_again_when_it_was_killed(address: Path, supervisor: Supervisor) -> None:
    with redis.Redis(unix_socket_path=str(address)) as client:
        client.lpush("line", "waiting")
        # The file is written at each change and forced to disk each second; a kill loses neither.
        psutil.Process(supervisor.children["broker"].process.handle.pid).kill()
        time.sleep(0.1)
        supervisor.wait_ready("broker", limit_s=10)

        assert client.lrange("line", 0, -1) == [b"waiting"]


def test_broker_opens_no_network_port_when_it_runs(address: Path, supervisor: Supervisor) -> None:
    running = psutil.Process(supervisor.children["broker"].process.handle.pid)

    assert running.net_connections("inet") == []
    assert stat.S_IMODE(address.stat().st_mode) == 0o700


def test_broker_does_not_answer_when_none_runs(tmp_path: Path) -> None:
    assert not broker_answers(tmp_path / "broker.sock")


def test_socket_lies_in_the_data_folder_when_its_path_is_short() -> None:
    with socket_address(Path("/srv/leadline")) as address:
        assert address == Path("/srv/leadline/broker/broker.sock")


def test_socket_lies_in_a_private_folder_when_the_path_is_too_long(tmp_path: Path) -> None:
    deep = tmp_path / ("d" * LONGEST_ADDRESS_BYTES)
    with socket_address(deep) as address:
        assert len(str(address)) <= LONGEST_ADDRESS_BYTES
        assert stat.S_IMODE(address.parent.stat().st_mode) == 0o700

    assert not address.parent.exists()


def test_broker_answers_when_the_data_folder_has_a_long_path(tmp_path: Path, supervisor: Supervisor) -> None:
    deep = tmp_path / ("d" * LONGEST_ADDRESS_BYTES)
    with socket_address(deep) as address:
        supervisor.start(broker_child(deep, address))
        supervisor.wait_ready("broker", limit_s=10)

        assert broker_answers(address)
        supervisor.stop()
