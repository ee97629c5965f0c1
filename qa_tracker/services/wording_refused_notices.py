"""Sentences of what is refused about notices: holding them, and the mail that carries them."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

NOTICES: Final = {
    "hold.unknown": N_("There is no such hold here. Open the check again: it may have ended meanwhile."),
    "hold.ended_already": N_("This hold has ended already, so there is nothing left to end."),
    "hold.reason_missing": N_("Say why, in a few words: others read it beside the check."),
    "hold.end_missing": N_("Say until which day. On that day the notices begin again."),
    "hold.end_past": N_("That day is no later than today. Choose a day from tomorrow on."),
    "hold.end_too_far": N_(
        "That is more than %(days)s days ahead. Choose %(latest_on)s or earlier; it can be held again then."
    ),
    "hold.not_awaited": N_(
        "Nobody is waiting for this check any more, so no notice of it is coming and there is nothing to hold."
    ),
    "hold.suspension": N_(
        "This check gave the verdict suspension. Notices of it are never held: see that the device is out of "
        "use, then do the check again."
    ),
    "hold.electrical": N_(
        "This is a check of electrical safety. Notices of it are never held: do the check, or let it be "
        "excused with the reason."
    ),
    "mail.unknown": N_("There is no such mail here. Go back to the list and choose it there."),
    "mail.not_given_up": N_(
        "This mail is not given up: it was sent, waits, or someone else has seen to it meanwhile. Look at it again."
    ),
    "mail.reason_missing": N_(
        "Say why this mail need not be sent any more; its notices stay in the program."
    ),
    "person.email_same": N_("That is the address on record already; nothing was changed."),
    "site.quiet_half": N_("Quiet hours have a beginning and an end. Fill in both, or neither."),
    "site.quiet_hour_wrong": N_("%(hour)s is no hour of the day. Write one from 0 to 23."),
    "site.quiet_all_day": N_(
        "From an hour to the same hour is all day, so no mail would ever come. Choose another end, or leave both "
        "empty."
    ),
    "site.hours_same": N_("The hours of this site are so already; nothing was changed."),
    "location.hours_same": N_("This room is recorded so already; nothing was changed."),
}
