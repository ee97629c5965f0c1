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
    "check.outside_reason_missing": N_(
        "This check opens on %(opens_at)s. Say why it is accepted outside its window, or measure it then."
    ),
    "check.days_are_named": N_(
        "The plan names its days, so it can't be counted from another. Record an unplanned check instead; the "
        "planned one stays due."
    ),
    "check.due_day_taken": N_(
        "Counted from that day the plan would be due on %(due_on)s, and it has a check for that day already. "
        "Record an unplanned check instead; the planned one stays due."
    ),
    "check.measured_at_wrong": N_(
        "“%(entered)s” is no date and time. Choose them in the calendar, or leave the field empty for now."
    ),
}
