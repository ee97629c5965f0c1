"""A mail server for the demo: takes every message and keeps it as a file, so that no mail leaves the computer.

``python -m qa_tracker.ops.catcher FD FOLDER`` serves the listening socket that was handed over.
"""

from __future__ import annotations

import asyncio
import os
import socket
import sys
import time
import uuid
from collections.abc import Mapping
from pathlib import Path

from aiosmtpd.smtp import SMTP, Envelope, Session

from config.env import BASE_DIR
from qa_tracker.ops.processes import Child

GREETING_LIMIT_S = 0.5


def keep(message: bytes, folder: Path) -> Path:
    """Write a message so that a file is there whole or not at all, also after a power cut."""
    name = f"{time.time_ns()}-{uuid.uuid4().hex}"
    unfinished, finished = folder / f"{name}.part", folder / f"{name}.eml"
    with unfinished.open("wb") as file:
        file.write(message)
        file.flush()
        os.fsync(file.fileno())
    unfinished.rename(finished)
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)
    return finished


class Keeper:
    """Answers "250" only once the message is on disk."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder

    async def handle_DATA(self, server: SMTP, session: Session, envelope: Envelope) -> str:
        """Keep one message; the name of the method is the mail library's."""
        kept = await asyncio.to_thread(keep, envelope.original_content or b"", self.folder)
        return f"250 2.0.0 kept as {kept.name}"


async def serve(listener: socket.socket, folder: Path) -> None:
    """Take mail until the process is ended."""
    loop = asyncio.get_running_loop()
    server = await loop.create_server(
        lambda: SMTP(Keeper(folder), hostname="localhost", enable_SMTPUTF8=True, loop=loop), sock=listener
    )
    async with server:
        await server.serve_forever()


def catcher_greets(address: tuple[str, int]) -> bool:
    """Whether the catcher says its mail greeting."""
    try:
        with socket.create_connection(address, timeout=GREETING_LIMIT_S) as connection:
            return connection.recv(3) == b"220"
    except OSError:
        return False


def catcher_child(listener: socket.socket, data_dir: Path, env: Mapping[str, str]) -> Child:
    """The catcher as a child, on a socket that is already listening, so that no mail is refused on a restart."""
    folder = data_dir / "mailbox"
    folder.mkdir(parents=True, exist_ok=True, mode=0o700)
    address = listener.getsockname()[:2]
    return Child(
        name="catcher",
        argv=(sys.executable, "-m", "qa_tracker.ops.catcher", str(listener.fileno()), str(folder)),
        env=env,
        cwd=BASE_DIR,
        ready=lambda: catcher_greets(address),
        stop_limit_s=3.0,
        pass_fds=(listener.fileno(),),
    )


if __name__ == "__main__":
    asyncio.run(serve(socket.socket(fileno=int(sys.argv[1])), Path(sys.argv[2])))
