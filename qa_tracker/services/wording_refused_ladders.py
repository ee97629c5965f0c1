"""Sentences for what is refused of ladders: who is told at which level."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

LADDERS: Final = {
    "ladder.reason_missing": N_(
        "Say why the ladder changes: people will ask why they are told, or no longer are."
    ),
    "ladder.same": N_("This is the ladder there is already. Change a level, or leave it as it stands."),
    "ladder.none_of_its_own": N_(
        "There is no ladder of its own to give up: the common one is in force here already."
    ),
    "ladder.empty": N_("A ladder that tells nobody is none. Name who is told at one level at least."),
    "ladder.told_twice": N_("Someone is named twice at a level. Name each recipient of a level once."),
    "ladder.unknown_recipient": N_(
        "“%(recipient)s” is nobody a ladder can tell. Name responsible, lead, physicist, engineer or administrator."
    ),
    "ladder.unknown_level": N_(
        "There is no level “%(level)s”. Levels are upcoming, due, late, overdue, and the steps t1 to t%(most)s."
    ),
    "ladder.days_out_of_range": N_(
        "The level %(level)s has days that can't be. A step comes 1 to %(most)s days after overdue; the levels "
        "before it have no days of their own."
    ),
    "ladder.steps_with_gap": N_("A step is left out. Number the steps t1, t2 … without gaps."),
    "ladder.step_on_two_days": N_("A step stands on two days. Give every recipient of a step the same day."),
    "ladder.steps_not_climbing": N_(
        "A step comes no later than the one before it. Give each step more days than the one before."
    ),
}
