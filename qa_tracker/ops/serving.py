"""The web server as a child, on a socket that its supervisor holds.

The supervisor listens before anything starts: a busy port is refused at once, a port 0 becomes a known number,
and a browser that comes while the web server starts, or starts again, waits instead of being turned away.
"""

from __future__ import annotations

import errno
import http.client
import socket
import sys
from collections.abc import Mapping
from dataclasses import dataclass

from config.env import BASE_DIR
from qa_tracker.ops.processes import Child
from qa_tracker.ops.supervisor import Refused

ANSWER_LIMIT_S = 2.0
BACKLOG = 256
EVERYWHERE = {"0.0.0.0": "127.0.0.1", "::": "::1"}


@dataclass(frozen=True)
class Bind:
    """A host and port as given on the command line."""

    host: str
    port: int

    @property
    def reachable_host(self) -> str:
        """A host under which this computer reaches the socket."""
        return EVERYWHERE.get(self.host, self.host)

    def __str__(self) -> str:
        host = self.reachable_host
        return f"[{host}]:{self.port}" if ":" in host else f"{host}:{self.port}"


def read_bind(text: str) -> Bind:
    """Read ``HOST:PORT``; an IPv6 host stands in brackets."""
    host, colon, port = text.rpartition(":")
    if not (colon and host and port.isascii() and port.isdigit() and int(port) < 65536):
        raise Refused(f"“{text}” is not an address to serve on: write HOST:PORT, for example 127.0.0.1:8000.")
    return Bind(host.removeprefix("[").removesuffix("]"), int(port))


def listen(bind: Bind) -> socket.socket:
    """Listen on the address, or say in a sentence why that can't be."""
    family = socket.AF_INET6 if ":" in bind.host else socket.AF_INET
    try:
        return socket.create_server((bind.host, bind.port), family=family, backlog=BACKLOG)
    except (OSError, UnicodeError) as error:
        raise Refused(f"{reason(bind, error)} Nothing was started.") from error


def reason(bind: Bind, error: OSError | UnicodeError) -> str:
    """Why an address can't be used, and what to do."""
    another = f"choose another, for example --bind 127.0.0.1:{other_port(bind.port)}."
    if getattr(error, "errno", None) == errno.EADDRINUSE:
        return (
            f"Port {bind.port} on {bind.host} is in use by another program: stop that program, or {another}"
        )
    cause = str(getattr(error, "strerror", None) or error).partition(" (")[0]
    return f"The address {bind.host}, port {bind.port}, can't be used here ({cause}): {another}"


def other_port(port: int) -> int:
    """A port to suggest instead."""
    return port + 1 if 1023 < port < 65535 else 8001


def listened(listener: socket.socket) -> Bind:
    """Where a socket listens, with the number that a port 0 became."""
    host, port = listener.getsockname()[:2]
    return Bind(host, port)


def web_answers(bind: Bind, host_header: str) -> bool:
    """Whether ``GET /health`` is answered: also by 503, since what is unwell may be mended only once pages are there."""
    connection = http.client.HTTPConnection(bind.reachable_host, bind.port, timeout=ANSWER_LIMIT_S)
    try:
        connection.request("GET", "/health", headers={"Host": host_header})
        return connection.getresponse().status in (http.client.OK, http.client.SERVICE_UNAVAILABLE)
    except (OSError, http.client.HTTPException):
        return False
    finally:
        connection.close()


def web_child(listener: socket.socket, host_header: str, env: Mapping[str, str]) -> Child:
    """The web server as a child; its options are in ``config/gunicorn.py``."""
    bind = listened(listener)
    handle = listener.fileno()
    options = ("--config", "python:config.gunicorn", "--bind", f"fd://{handle}")
    return Child(
        name="web",
        argv=(sys.executable, "-m", "gunicorn", *options),
        env=env,
        cwd=BASE_DIR,
        ready=lambda: web_answers(bind, host_header),
        stop_limit_s=8.0,
        pass_fds=(handle,),
    )
