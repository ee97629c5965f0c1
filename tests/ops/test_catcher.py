"""The demo's mail catcher as a process of its own, with mail sent by SMTP."""

from __future__ import annotations

import email
import email.policy
import os
import smtplib
import socket
from collections.abc import Iterator
from email.message import EmailMessage
from pathlib import Path

import pytest

from qa_tracker.ops.catcher import catcher_child, keep
from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.supervisor import Supervisor


@pytest.fixture
def catcher(tmp_path: Path) -> Iterator[tuple[str, int]]:
    """A running catcher's address."""
    with (
        socket.create_server(("127.0.0.1", 0)) as listener,
        Interruptions() as interruptions,
        Supervisor(tmp_path, interruptions) as supervisor,
    ):
        supervisor.start(catcher_child(listener, tmp_path, dict(os.environ)))
        supervisor.wait_ready("catcher", limit_s=20)
        yield listener.getsockname()


def digest(subject: str) -> EmailMessage:
    message = EmailMessage()
    message["Subject"] = subject
    message["From"], message["To"] = "leadline@leadline.invalid", "maren.oduya@example.invalid"
    message["Message-ID"] = "<one@leadline.invalid>"
    message.set_content("Two checks are due: Fjellet 9, Wren-H.")
    return message


def test_catcher_keeps_a_message_as_a_file_when_it_is_sent(catcher: tuple[str, int], tmp_path: Path) -> None:
    with smtplib.SMTP(*catcher, timeout=5) as server:
        server.send_message(digest("Due in Aldermoor: Dragić’s list"))
    (kept,) = (tmp_path / "mailbox").iterdir()
    read = email.message_from_bytes(kept.read_bytes(), policy=email.policy.default)

    assert kept.suffix == ".eml"
    assert read["Subject"] == "Due in Aldermoor: Dragić’s list"
    assert read["Message-ID"] == "<one@leadline.invalid>"
    assert "Wren-H" in read.get_content()


def test_catcher_keeps_every_message_when_several_are_sent(catcher: tuple[str, int], tmp_path: Path) -> None:
    with smtplib.SMTP(*catcher, timeout=5) as server:
        for number in range(5):
            server.send_message(digest(f"Digest {number}"))

    kept = sorted((tmp_path / "mailbox").glob("*.eml"))
    assert [email.message_from_bytes(file.read_bytes())["Subject"] for file in kept] == [
        f"Digest {number}" for number in range(5)
    ]


def test_catcher_answers_an_error_when_the_message_can_not_be_kept(
    catcher: tuple[str, int], tmp_path: Path
) -> None:
    (tmp_path / "mailbox").rmdir()

    with smtplib.SMTP(*catcher, timeout=5) as server, pytest.raises(smtplib.SMTPDataError):
        server.send_message(digest("Lost?"))


def test_keep_leaves_no_unfinished_file_when_it_returns(tmp_path: Path) -> None:
    kept = keep(b"Subject: one\r\n\r\n", tmp_path)

    assert list(tmp_path.iterdir()) == [kept]
    assert kept.read_bytes() == b"Subject: one\r\n\r\n"
