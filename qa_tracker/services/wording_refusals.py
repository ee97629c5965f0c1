"""The sentence of a refusal: what, why, and what to do. One for every code that is raised anywhere."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.core.errors import DomainError, SeveralInvalid
from qa_tracker.core.roles import PERMISSIONS
from qa_tracker.services.wording_findings import REFUSED
from qa_tracker.services.wording_refused_acoustics import ACOUSTICS
from qa_tracker.services.wording_refused_baselines import BASELINES
from qa_tracker.services.wording_refused_due_days import DUE_DAYS
from qa_tracker.services.wording_refused_duties import DUTIES
from qa_tracker.services.wording_refused_editor import EDITOR
from qa_tracker.services.wording_refused_entry import ENTRY
from qa_tracker.services.wording_refused_feeds import FEEDS
from qa_tracker.services.wording_refused_formulas import FORMULAS
from qa_tracker.services.wording_refused_ladders import LADDERS
from qa_tracker.services.wording_refused_lines import LINES
from qa_tracker.services.wording_refused_notices import NOTICES
from qa_tracker.services.wording_refused_records import RECORDS
from qa_tracker.services.wording_refused_requests import REQUESTS
from qa_tracker.services.wording_refused_statistics import STATISTICS
from qa_tracker.services.wording_refused_uncertainty import UNCERTAINTY
from qa_tracker.services.wording_refused_values import VALUES
from qa_tracker.services.wording_verbs import MOVES, PERMITTED
from qa_tracker.services.wording_words import (
    CHECK_STATES,
    DEVICE_STATES,
    DOSSIER_STATES,
    FAULT_STATES,
    capital,
    day_words,
    kind_word,
    level_word,
    listed,
    moment_words,
    role_word,
    unit_words,
    word,
)

SENTENCES: Final[Mapping[str, str]] = (
    VALUES
    | RECORDS
    | REQUESTS
    | ENTRY
    | REFUSED
    | ACOUSTICS
    | FORMULAS
    | LINES
    | UNCERTAINTY
    | STATISTICS
    | BASELINES
    | EDITOR
    | NOTICES
    | DUTIES
    | LADDERS
    | DUE_DAYS
    | FEEDS
)
STATES: Final = {
    "check": CHECK_STATES,
    "device": DEVICE_STATES,
    "fault": FAULT_STATES,
    "dossier": DOSSIER_STATES,
}
NOUNS: Final = {
    "check": N_("check"),
    "device": N_("device"),
    "fault": N_("fault"),
    "dossier": N_("dossier"),
}
WRONG_STATE: Final = tuple(f"{noun}.wrong_state" for noun in STATES)
KNOWN: Final = frozenset(SENTENCES) | {*WRONG_STATE, "role.not_allowed", "several"}
"""Every code there is a sentence for."""


def refusal(error: DomainError) -> str:
    """Say in a sentence or two what was refused, why, and what to do; of several refusals each one once."""
    if isinstance(error, SeveralInvalid):
        return " ".join(dict.fromkeys(refusal(each) for each in error.errors))
    if error.code in WRONG_STATE:
        return _wrong_state(error)
    if error.code == "role.not_allowed":
        return _not_allowed(str(error.parameters.get("verb", "")))
    if error.code not in SENTENCES:
        return _("This was refused (%(code)s). Tell the administrator what you were doing.") % {
            "code": error.code
        }
    return _(SENTENCES[error.code]) % _Given(_in_words(error))


class _Given(dict[str, str]):
    """Parameters for a sentence: one that is missing leaves a gap, for a refusal must never itself be an error."""

    def __missing__(self, name: str) -> str:
        return "…"


def _in_words(error: DomainError) -> dict[str, str]:
    told = {name: _parameter(name, value) for name, value in error.parameters.items()}
    noun = error.code.partition(".")[0]
    if "state" in told and noun in STATES:
        told["state"] = word(STATES[noun], told["state"])
    return {"field": error.field} | told


def _parameter(name: str, value: object) -> str:
    """One parameter as a person reads it."""
    if isinstance(value, dt.datetime):
        return moment_words(value)
    if isinstance(value, dt.date):
        return day_words(value)
    if isinstance(value, list | tuple):
        return ", ".join(str(each) for each in value)
    text = str(value)
    if name == "opens_at":
        return moment_words(dt.datetime.fromisoformat(text))
    words = {"kind": kind_word, "level": level_word} | dict.fromkeys(
        ("unit", "wanted", "left", "right"), unit_words
    )
    return words[name](text) or text if name in words else text


def _wrong_state(error: DomainError) -> str:
    """Why a verb can't be done now, and what can."""
    noun = error.code.partition(".")[0]
    told = {
        "noun": _(NOUNS[noun]),
        "state": word(STATES[noun], str(error.parameters.get("state", ""))),
        "verb": word(MOVES[noun], str(error.parameters.get("verb", ""))),
    }
    sentence = _("This %(noun)s is %(state)s, so it can't be %(verb)s now.") % told
    allowed = error.parameters.get("allowed")
    if isinstance(allowed, list | tuple) and allowed:
        can = listed(word(MOVES[noun], str(verb)) for verb in dict.fromkeys(allowed))
        return f"{sentence} " + _("From here it can be %(verbs)s.") % {"verbs": can}
    if allowed == ():
        return f"{sentence} " + _("Nothing can be changed in it any more.")
    return f"{sentence} " + _("Look at it again: someone else may have changed it meanwhile.")


def _not_allowed(verb: str) -> str:
    told = {"verb": word(PERMITTED, verb)}
    who = [role_word(role) for role, allowed in PERMISSIONS.get(verb, {}).items() if allowed]
    sentence = _("Your role here doesn't let you %(verb)s.") % told
    if not who:
        return sentence
    return f"{sentence} " + _("Ask someone who may: %(roles)s.") % {"roles": capital(listed(who))}
