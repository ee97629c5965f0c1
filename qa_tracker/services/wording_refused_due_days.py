"""Sentences of what is refused about moving due days, and about going on after a device was out of use."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

DUE_DAYS: Final = {
    "due_day.reason_missing": N_("Say why the due day is moved; it is shown beside the check."),
    "due_day.unplanned": N_("No plan asked for this check, so it has no due day to move."),
    "due_day.not_awaited": N_(
        "This check is no longer awaited, so its due day stays as it was. The next one may be moved."
    ),
    "due_day.window_over": N_(
        "The window of this check ended on %(last_on)s, so there is no day left to move it to. Do it now; it counts "
        "as overdue."
    ),
    "due_day.outside": N_(
        "A due day is moved inside its window only: choose a day from %(first_on)s to %(last_on)s."
    ),
    "due_day.past": N_("That day has passed. Choose today or a later day inside the window."),
    "due_day.same": N_("It is due on %(due_on)s already; nothing was changed."),
    "due_day.taken": N_("This plan has a check due on %(due_on)s already. Choose another day."),
    "plan.responsible_stays": N_(
        "At the new site neither %(name)s nor you may enter checks, so nobody would do what is planned there. Choose who is "
        "responsible from then on."
    ),
    "due_day.none_chosen": N_("Choose at least one of the checks that could be moved."),
    "due_day.following": N_(
        "The next check of this plan is due on %(due_on)s, so this one has to be due before. Choose an earlier day."
    ),
}
