"""The words for mail under way: what it is about, how it stands, what came of each try."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

from qa_tracker.services.wording_words import word

KINDS: Final = {
    "digest": N_("the day's letter"),
    "suspension": N_("suspension verdict, at once"),
    "electrical": N_("electrical safety, at once"),
    "ladder": N_("last step of the ladder, at once"),
}
STATES: Final = {
    "": N_("waits for the day's letter"),
    "waiting": N_("on its way"),
    "claimed": N_("being sent"),
    "sent": N_("sent"),
    "failed": N_("given up"),
    "unsent": N_("left unsent"),
}
TRIES: Final = {
    "begun": N_("cut off before the server answered"),
    "sent": N_("taken"),
    "put_off": N_("put off"),
    "given_up": N_("given up"),
}
HOLDS: Final = {"acknowledged": N_("acknowledged"), "snoozed": N_("snoozed")}


def mail_kind_word(kind: str) -> str:
    """The word for what a mail is about."""
    return word(KINDS, kind)


def mail_state_word(state: str) -> str:
    """The word for how a mail stands; empty: no mail carries the notice yet."""
    return word(STATES, state)


def try_word(outcome: str) -> str:
    """The word for what came of handing a mail to the server."""
    return word(TRIES, outcome)


def hold_word(kind: str) -> str:
    """The word for a hold."""
    return word(HOLDS, kind)
