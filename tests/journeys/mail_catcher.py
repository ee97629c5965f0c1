"""A mail server that keeps every letter before it answers: who is killed in between has sent and does not know it."""

from __future__ import annotations

import asyncio
import email
import email.policy
from collections import Counter

EVERY_SLOW = 20


class MailCatcher:
    """``taken`` counts the letters by Message-ID.

    Each twentieth is answered after a time in which the broker gives its message to another worker.
    """

    def __init__(self, port: int) -> None:
        self.port = port
        self.reply_after_s, self.slowest_s = 0.04, 1.3
        self.taken: Counter[str] = Counter()

    async def handle_DATA(self, _server, _session, envelope):
        letter = email.message_from_bytes(envelope.content, policy=email.policy.default)
        self.taken[str(letter["Message-ID"])] += 1
        slow = self.taken.total() % EVERY_SLOW == 0
        await asyncio.sleep(self.slowest_s if slow else self.reply_after_s)
        return "250 2.0.0 kept"
