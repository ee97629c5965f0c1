"""Judging while someone types: what can be judged is, and each field that can't be read says why."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Protocol

from qa_tracker.core.errors import DomainError, SeveralInvalid
from qa_tracker.services.entries import Entry
from qa_tracker.services.judging import Asked, Judged, judge_all


class Laid(Protocol):
    """What is laid out for entering: a check's sheet, or an edition that is tried."""

    @property
    def asked(self) -> Asked:
        """What is asked, and under what it is judged."""
        ...


def judge_what_can_be(laid: Laid, entries: Mapping[str, Entry]) -> tuple[Judged, tuple[DomainError, ...]]:
    """Judge the fields that are filled in.

    Returns
    -------
    Judged
        Without the fields that are empty or can't be read.
    tuple of DomainError
        One for each field that can't be read or whose value has to be confirmed; nothing for empty ones.
    """
    refused = [error for error in _refusals(laid, entries) if error.code != "reading.missing"]
    unreadable = {error.field for error in refused if not error.code.startswith("reading.confirm_")}
    readable = {key: entry for key, entry in entries.items() if key not in unreadable}
    judged = judge_all(laid.asked, readable, whole=False)
    return judged, tuple(refused)


def _refusals(laid: Laid, entries: Mapping[str, Entry]) -> tuple[DomainError, ...]:
    try:
        judge_all(laid.asked, entries, whole=True)
    except SeveralInvalid as several:
        return several.errors
    return ()
