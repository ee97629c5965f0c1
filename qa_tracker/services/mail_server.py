"""Handing one letter to the mail server, and what the server answered."""

from __future__ import annotations

import contextlib
import smtplib

from django.conf import settings
from django.core.mail import EmailMessage, get_connection
from django.core.mail.backends.smtp import EmailBackend

TAKEN = 250
FORWARDED = 251
PERMANENT = 500


class NotTaken(Exception):
    """The server did not take a letter.

    ``for_good``: it says that trying again is of no use. ``unreachable``: it did not answer at all, so that no other
    letter would fare better now.
    """

    def __init__(self, reply: str, *, for_good: bool = False, unreachable: bool = False) -> None:
        super().__init__(reply)
        self.reply, self.for_good, self.unreachable = reply, for_good, unreachable


def hand_over(message: EmailMessage, to: str) -> str:
    """Hand a letter to the server and return its answer to the data.

    Raises
    ------
    NotTaken
        For good where the address can't be written, or the server refuses the addressee or the letter with 5xx;
        else (no connection, sign-in, sender, 4xx, no answer) trying again may help.
    """
    backend = get_connection()
    try:
        if not isinstance(backend, EmailBackend):
            return f"handed over: {backend.send_messages([message])}"
        return _hand_over(backend, message, to)
    except OSError as error:
        raise NotTaken(_said(error)) from error
    except ValueError as error:
        # A line break or a letter beyond ASCII in the address; the library refuses both before the server can.
        raise NotTaken(f"not sent, the letter can't be written: {error}", for_good=True) from error


def _hand_over(backend: EmailBackend, message: EmailMessage, to: str) -> str:
    data = _with_crlf(message.message().as_bytes())
    try:
        backend.open()
    except OSError as error:  # the mail library's own errors are of this kind too
        raise NotTaken(_said(error), unreachable=True) from error
    try:
        return _transact(backend.connection, data, to)
    finally:
        # The server has answered already: how it takes the goodbye changes nothing.
        with contextlib.suppress(OSError):
            backend.close()


def _transact(server: smtplib.SMTP | None, data: bytes, to: str) -> str:
    """One SMTP transaction, kept by hand because Django's own drops the server's reply."""
    if server is None:
        raise smtplib.SMTPServerDisconnected("no connection to the mail server")
    server.ehlo_or_helo_if_needed()
    code, reply = server.mail(settings.DEFAULT_FROM_EMAIL)
    if code != TAKEN:
        # The sender is refused: true of every letter, and mended by the administrator, so it is tried again.
        raise NotTaken(_answer(code, reply))
    code, reply = server.rcpt(_envelope(to))
    if code not in (TAKEN, FORWARDED):
        raise NotTaken(_answer(code, reply), for_good=code >= PERMANENT)
    try:
        code, reply = server.data(data)
    except smtplib.SMTPDataError as error:
        code, reply = error.smtp_code, error.smtp_error if isinstance(error.smtp_error, bytes) else b""
    if code != TAKEN:
        raise NotTaken(_answer(code, reply), for_good=code >= PERMANENT)
    return _answer(code, reply)


def _envelope(address: str) -> str:
    """The address as the server takes it: a domain beyond ASCII in its IDNA form."""
    local, _at, domain = address.rpartition("@")
    return f"{local}@{domain.encode('idna').decode('ascii')}"


def _said(error: OSError) -> str:
    """What an error of the connection or of the mail library says; the server's own words where there are some."""
    if isinstance(error, smtplib.SMTPResponseException):
        return _answer(error.smtp_code, error.smtp_error)
    return str(error) or type(error).__name__


def _answer(code: int, reply: bytes | str) -> str:
    said = reply.decode("utf-8", "replace") if isinstance(reply, bytes) else reply
    return " ".join(f"{code} {said}".split())


def _with_crlf(data: bytes) -> bytes:
    return data.replace(b"\r\n", b"\n").replace(b"\n", b"\r\n")
