"""Sentences of what is refused while a check is being entered."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

ENTRY: Final = {
    "draft.kept_meanwhile": N_(
        "Another window of yours kept something else for this check, so nothing was written over. "
        "Compare the two below and keep the one that is right."
    ),
    "draft.someone_else": N_(
        "Someone else has signed in here since this page was opened, so it was not kept under their name. "
        "Sign in again as yourself, or let them enter their own readings."
    ),
    "reading.condition_unconfirmed": N_(
        "Nothing was said about the preset “%(condition)s”. Confirm that it is unchanged, or say what differs."
    ),
    "check.measured_at_wrong": N_(
        "“%(entered)s” is no date and time. Choose them in the calendar, or leave the field empty for now."
    ),
}
