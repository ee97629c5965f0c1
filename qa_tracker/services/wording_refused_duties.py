"""Sentences of what is refused about leave, deputies and rotas."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

DUTIES: Final = {
    "leave.unknown": N_("There is no such leave here. Open the list again: it may have been cancelled."),
    "leave.over": N_("This leave is over or cancelled already, so there is nothing to cancel."),
    "leave.ends_before_start": N_("The last day is before the first, %(from_on)s. Correct one of them."),
    "leave.past": N_("These days are over, so nobody needs to stand in. Choose days from today on."),
    "leave.too_long": N_("That is more than %(days)s days. Enter a shorter leave; another can follow it."),
    "leave.overlaps": N_(
        "There is a leave from %(from_on)s to %(until_on)s already. Cancel that one first, or choose other days."
    ),
    "leave.own_deputy": N_("Nobody stands in for themself. Choose someone else as deputy."),
    "leave.deputy_may_not_enter": N_(
        "%(deputy)s may not enter checks there, so the checks would be left undone. Choose someone who may, or have "
        "them given a role first."
    ),
    "rota.weeks": N_("A turn lasts 1 to %(most)s weeks, not %(weeks)s. Choose another length."),
    "rota.nobody": N_("A rota needs at least one member. Add someone first."),
}
