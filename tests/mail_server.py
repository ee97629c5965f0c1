"""A real SMTP server on loopback for tests: it keeps what it accepts, and can refuse or hold the data."""

from __future__ import annotations

import asyncio
import email
import email.policy
import socket
from collections.abc import Iterator
from contextlib import contextmanager
from email.message import EmailMessage

from aiosmtpd.controller import Controller


class MailServer:
    """``answer`` is the reply to the data, ``to_addressee`` to the address; ``seen`` counts data whatever the reply.

    While ``holding`` the data is taken and never answered; while ``dropping`` the connection ends after it.
    """

    def __init__(self, port: int) -> None:
        self.port = port
        self.accepted: list[EmailMessage] = []
        self.addressees: list[str] = []
        self.answer = "250 2.0.0 kept as 7F3A"
        self.to_addressee = "250 2.1.5 known"
        self.holding = self.dropping = False
        self.held = self.seen = 0

    async def handle_RCPT(self, _server, _session, envelope, address, _options):
        self.addressees.append(address)
        if self.to_addressee.startswith("250"):
            envelope.rcpt_tos.append(address)
        return self.to_addressee

    async def handle_DATA(self, server, _session, envelope):
        self.seen += 1
        if self.dropping:
            server.transport.abort()
            return self.answer
        if self.holding:
            self.held += 1
            while self.holding:
                await asyncio.sleep(0.02)
            return "451 4.3.0 let go"
        if self.answer.startswith("250"):
            self.accepted.append(email.message_from_bytes(envelope.content, policy=email.policy.default))
        return self.answer

    @property
    def message_ids(self) -> set[str]:
        return {str(letter["Message-ID"]) for letter in self.accepted}


def free_port() -> int:
    """A port nobody listens on now."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return probe.getsockname()[1]


@contextmanager
def serving() -> Iterator[MailServer]:
    """Serve until the block ends."""
    handler = MailServer(free_port())
    controller = Controller(handler, hostname="127.0.0.1", port=handler.port)
    controller.start()
    try:
        yield handler
    finally:
        handler.holding = False
        controller.stop()
