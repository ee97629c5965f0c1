"""The words for codes: verdicts, states, roles, kinds, units, days. An unknown code is shown as it is, spaced."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable, Mapping
from typing import Final

from django.utils import dateformat
from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.core.units import UNITS, with_symbol

VERDICTS: Final = {
    "conforming": N_("conforming"),
    "remedial": N_("remedial"),
    "suspension": N_("suspension"),
    "indeterminate": N_("indeterminate"),
    "not_assessable": N_("not assessable"),
}
LEVELS: Final = {"remedial": N_("remedial level"), "suspension": N_("suspension level")}
CHECK_STATES: Final = {
    "scheduled": N_("scheduled"),
    "started": N_("started"),
    "submitted": N_("submitted"),
    "countersigned": N_("countersigned"),
    "sent_back": N_("sent back"),
    "missed": N_("missed"),
    "excused": N_("excused"),
    "void": N_("void"),
}
DEVICE_STATES: Final = {
    "ordered": N_("ordered"),
    "awaiting_acceptance": N_("awaiting acceptance"),
    "in_use": N_("in use"),
    "restricted": N_("restricted"),
    "quarantined": N_("quarantined"),
    "at_repair": N_("at repair"),
    "on_loan_in": N_("on loan to us"),
    "on_loan_out": N_("lent out"),
    "stored": N_("stored"),
    "lost": N_("lost"),
    "disposed": N_("disposed of"),
}
FAULT_STATES: Final = {
    "open": N_("open"),
    "awaiting_proof": N_("awaiting proof"),
    "closed": N_("closed"),
}
DOSSIER_STATES: Final = {
    "frozen": N_("waiting to be drawn"),
    "rendering": N_("being drawn"),
    "issued": N_("issued"),
    "failed": N_("not drawn, because of an error"),
}
ROLES: Final = {
    "user": N_("user"),
    "technician": N_("technician"),
    "lead": N_("lead sonographer"),
    "engineer": N_("clinical engineer"),
    "physicist": N_("physicist"),
    "auditor": N_("auditor"),
    "administrator": N_("administrator"),
}
KINDS: Final = {
    "scanner": N_("scanner"),
    "probe": N_("probe"),
    "test_object": N_("test object"),
    "leakage_tester": N_("leakage tester"),
    "scale": N_("scale"),
    "thermometer": N_("thermometer"),
    "photometer": N_("photometer"),
    "number": N_("number"),
    "count": N_("count"),
    "grade": N_("grade"),
    "yes_no": N_("yes/no"),
    "text": N_("text"),
    "derived": N_("derived"),
    "image": N_("from an image"),
}
ARRAYS: Final = {
    "linear": N_("linear"),
    "convex": N_("convex"),
    "micro_convex": N_("micro-convex"),
    "phased": N_("phased"),
    "matrix": N_("matrix"),
    "mechanical_3d": N_("mechanical 3D"),
    "cw_pencil": N_("CW pencil"),
    "single_element": N_("single element"),
}
CONTACTS: Final = {
    "skin": N_("skin"),
    "mucous_membrane": N_("mucous membrane"),
    "sterile": N_("sterile"),
}
REASONS: Final = {
    "in_use": N_("in use"),
    "in_theatre": N_("in theatre"),
    "being_disinfected": N_("being disinfected"),
    "isolation_room": N_("in an isolation room"),
    "on_loan": N_("on loan"),
    "not_found": N_("not found"),
    "other": N_("another reason"),
}
MEANINGS: Final = {
    "performed": N_("performed"),
    "countersigned": N_("countersigned"),
    "sent back": N_("sent back"),
    "amended": N_("amended"),
    "voided": N_("voided"),
    "withdrawn": N_("withdrawn"),
    "accepted": N_("accepted into use"),
    "restored to use": N_("restored to use"),
    "baseline set": N_("baseline set"),
    "adopted": N_("adopted"),
}
NOTICE_LEVELS: Final = {
    "upcoming": N_("open"),
    "due": N_("due"),
    "late": N_("late"),
    "overdue": N_("overdue"),
    "suspension": N_("suspension verdict"),
    "mail_failed": N_("mail given up"),
}
RECIPIENTS: Final = {
    "responsible": N_("the person responsible"),
    "lead": N_("lead sonographer"),
    "physicist": N_("physicist"),
    "engineer": N_("clinical engineer"),
    "administrator": N_("administrator"),
}
QUALIFIERS: Final = {
    "=": N_("equals"),
    ">": N_("more than"),
    "<": N_("less than"),
    "not_seen": N_("not seen"),
}
REFERENCES: Final = {"baseline": N_("the baseline"), "nominal": N_("the nominal value")}
BANDINGS: Final = {"test_frequency_mhz": N_("test frequency")}


def word(table: Mapping[str, str], code: str) -> str:
    """The word for a code; a code that is not in the table with its underscores spaced."""
    return _(table[code]) if code in table else code.replace("_", " ")


def verdict_word(verdict: str) -> str:
    """The word for a verdict."""
    return word(VERDICTS, verdict)


def level_word(level: str) -> str:
    """The word for a level of a criterion."""
    return word(LEVELS, level)


def check_state_word(state: str) -> str:
    """The word for a check's state."""
    return word(CHECK_STATES, state)


def device_state_word(state: str) -> str:
    """The word for a device's state."""
    return word(DEVICE_STATES, state)


def fault_state_word(state: str) -> str:
    """The word for a fault's state."""
    return word(FAULT_STATES, state)


def dossier_state_word(state: str) -> str:
    """The word for a dossier's state."""
    return word(DOSSIER_STATES, state)


def role_word(role: str) -> str:
    """The word for a role."""
    return word(ROLES, role)


def kind_word(kind: str) -> str:
    """The word for the kind of a device, an instrument or a measurand."""
    return word(KINDS, kind)


def array_word(array_kind: str) -> str:
    """The word for a probe's array."""
    return word(ARRAYS, array_kind)


def contact_word(contact_class: str) -> str:
    """The word for what a probe touches."""
    return word(CONTACTS, contact_class)


def reason_word(reason: str) -> str:
    """The word for why something could not be tested."""
    return word(REASONS, reason)


def meaning_word(meaning: str) -> str:
    """The word for what a signature means."""
    return word(MEANINGS, meaning)


def level_of_notice_word(level: str) -> str:
    """The word for what a notice says of its check; t1, t2 ... are the steps after overdue."""
    if level[:1] == "t" and level[1:].isdecimal():
        return _("overdue, step %(step)s") % {"step": level[1:]}
    return word(NOTICE_LEVELS, level)


def recipient_word(recipient: str) -> str:
    """The word for the rung of the ladder by which someone is told."""
    return word(RECIPIENTS, recipient)


def qualifier_word(qualifier: str) -> str:
    """The word for a qualifier."""
    return word(QUALIFIERS, qualifier)


def banding_word(name: str) -> str:
    """The word for the quantity that limits are banded by."""
    return word(BANDINGS, name)


def banding_unit(name: str) -> str:
    """The unit code of a banding quantity: its name ends with it."""
    return "MHz" if name.endswith("_mhz") else ""


def unit_symbol(code: str) -> str:
    """The symbol of a unit; empty for plain numbers."""
    return UNITS[code].symbol if code in UNITS else code


def unit_words(code: str) -> str:
    """The symbol of a unit, and words where it has none."""
    return unit_symbol(code) or _("a plain number")


def amount(number: str, unit: str) -> str:
    """A number with its unit's symbol, as ``core.units`` writes it; a unit that is not known stands as it is."""
    if unit in UNITS:
        return with_symbol(number, unit)
    return f"{number}\N{NO-BREAK SPACE}{unit}" if unit else number


def percent(number: str) -> str:
    """A share in percent, without a needless zero."""
    return with_symbol(number.removesuffix(".0"), "%")


def read_amount(number: str, qualifier: str, unit: str) -> str:
    """A reading as it was qualified: "more than 160 mm"."""
    if qualifier in (">", "<"):
        return f"{qualifier_word(qualifier)} {amount(number, unit)}"
    return amount(number, unit)


def capital(text: str) -> str:
    """The text with its first letter large."""
    return text[:1].upper() + text[1:]


def listed(words: Iterable[str]) -> str:
    """Words joined for reading: "a, b or c"."""
    *first, last = list(words) or [""]
    return _("%(first)s or %(last)s") % {"first": ", ".join(first), "last": last} if first else last


def listed_all(words: Iterable[str]) -> str:
    """Words joined for reading: "a, b and c"."""
    *first, last = list(words) or [""]
    return _("%(first)s and %(last)s") % {"first": ", ".join(first), "last": last} if first else last


def day_words(day: dt.date, near: dt.date | None = None) -> str:
    """A day as "5 March 2025"; without the year where it is that of ``near``."""
    return dateformat.format(day, "j F" if near is not None and near.year == day.year else "j F Y")


def moment_words(moment: dt.datetime) -> str:
    """An instant in UTC as "5 March 2025 at 14:02 UTC"."""
    utc = moment.astimezone(dt.UTC)
    return _("%(day)s at %(time)s UTC") % {"day": day_words(utc.date()), "time": utc.strftime("%H:%M")}


REGISTER: Final = {
    "udi": N_("Unique device identifier (UDI)"),
    "owner": N_("Owner"),
    "purchased_on": N_("Bought on"),
    "warranty_ends_on": N_("Warranty ends"),
    "contract": N_("Contract"),
    "replacement_year": N_("Planned replacement"),
    "network_title": N_("Network title"),
    "clinical_use": N_("Clinical use"),
    "keeper": N_("Keeper"),
    "spare": N_("Spare"),
}


def register_word(name: str) -> str:
    """The label of a register field."""
    return _(REGISTER[name])
