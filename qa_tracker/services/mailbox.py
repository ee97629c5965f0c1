"""The demonstration's mailbox: letters the mail catcher kept as files, read and never sent on."""

from __future__ import annotations

import datetime as dt
import email
import re
from dataclasses import dataclass
from email.message import EmailMessage
from email.policy import default
from pathlib import Path

from django.conf import settings

from qa_tracker.core.errors import NotFound

NAME = re.compile(r"[A-Za-z0-9][A-Za-z0-9._-]{0,200}\.eml")
MOST = 200


@dataclass(frozen=True)
class Mail:
    """One letter, as text only."""

    name: str
    to: str
    subject: str
    sent: str
    body: str
    kept_at: dt.datetime


def folder() -> Path:
    """Where the catcher keeps what it catches."""
    return Path(settings.DATA_DIR) / "mailbox"


def letters() -> list[Mail]:
    """The newest letters first, at most 200."""
    found = [path for path in folder().glob("*.eml") if NAME.fullmatch(path.name)]
    newest = sorted(found, key=lambda path: (path.stat().st_mtime, path.name), reverse=True)
    return [_read(path) for path in newest[:MOST]]


def letter(name: str) -> Mail:
    """One letter by its file's name, which leads nowhere else (``mail.unknown``)."""
    path = folder() / name
    if not NAME.fullmatch(name) or not path.is_file():
        raise NotFound("mail.unknown")
    return _read(path)


def _read(path: Path) -> Mail:
    message = email.message_from_bytes(path.read_bytes(), policy=default)
    part = message.get_body(("plain",)) if isinstance(message, EmailMessage) else None
    return Mail(
        path.name,
        str(message.get("To", "")),
        str(message.get("Subject", "")),
        str(message.get("Date", "")),
        str(part.get_content()) if part is not None else "",
        dt.datetime.fromtimestamp(path.stat().st_mtime, dt.UTC),
    )
