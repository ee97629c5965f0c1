"""Sentences of formulas that are refused, and of derived quantities that could not be worked out."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.core.formulas import Derived

_WRITTEN: Final = {
    "formula.syntax": N_(
        "%(field)s, column %(column)s: “%(at)s” can't stand there. A formula takes decimal numbers, names, + - * /, "
        "comparisons, && || !, ? :, brackets and the listed functions."
    ),
    "formula.unfinished": N_(
        "%(field)s, column %(column)s: the formula ends too early. Write what is still missing."
    ),
    "formula.whole_number": N_(
        "%(field)s, column %(column)s: “%(at)s” is a whole number, which can't be mixed with readings. "
        "Write %(instead)s."
    ),
    "formula.too_long": N_(
        "%(field)s is longer than %(most)s characters. Work out a part of it as a derived measurand of its own."
    ),
    "formula.too_deep": N_(
        "%(field)s, column %(column)s: more than %(most)s steps stand inside each other. Work out a part of it as a "
        "derived measurand of its own."
    ),
}
_NAMED: Final = {
    "formula.unknown_name": N_(
        "%(field)s, column %(column)s: “%(at)s” is nothing a formula here may name. Name one of: %(nearest)s."
    ),
    "formula.unknown_function": N_(
        "%(field)s, column %(column)s: there is no function “%(at)s”. Use one of: %(nearest)s."
    ),
    "formula.name_taken": N_(
        "%(field)s, column %(column)s: “%(at)s” means something of its own in formulas, so it can't also be a "
        "measurand there. Give the measurand another code."
    ),
    "formula.reading_no_number": N_(
        "%(field)s, column %(column)s: “%(at)s” is of the kind %(kind)s, which is no number. Name a measurand that "
        "is read as a number."
    ),
    "formula.no_nominal": N_(
        "%(field)s, column %(column)s: “%(at)s” stands for a nominal value that the measurand doesn't have. Give it "
        "one, or let it come from the test object."
    ),
    "formula.no_aperture": N_(
        "%(field)s, column %(column)s: “%(at)s” belongs to one aperture, but the measurand to the whole device. Make "
        "the measurand one per aperture, or take the name out."
    ),
    "formula.no_condition": N_(
        "%(field)s, column %(column)s: “%(at)s” belongs to one condition, but the measurand to none. Make it one by "
        "condition, or take the name out."
    ),
    "formula.no_test_object": N_(
        "%(field)s, column %(column)s: “%(at)s” needs a test object, which this procedure doesn't ask for. Let it "
        "ask for one, or take the name out."
    ),
    "formula.cycle": N_(
        "%(field)s, column %(column)s: these need each other and could never be worked out: %(names)s. Take one of "
        "the names out."
    ),
}
_FITTING: Final = {
    "formula.unit_clash": N_(
        "%(field)s, column %(column)s: “%(at)s” joins %(left)s and %(right)s. Bring both to one unit: convert by a "
        "named value such as mm_per_cm, or give a written number its unit, as in 5.0 * unit.mm."
    ),
    "formula.result_unit": N_(
        "%(field)s, column %(column)s: “%(at)s” gives %(unit)s, but the measurand is in %(wanted)s. Convert it by a "
        "named value such as mm_per_cm, or a plain ratio by percent; or correct the measurand's unit."
    ),
    "formula.root": N_(
        "%(field)s, column %(column)s: “%(at)s” would take the root of %(unit)s, which is no unit. Take the root of "
        "a square, such as mm * mm."
    ),
    "formula.arguments": N_(
        "%(field)s, column %(column)s: “%(at)s” doesn't give the function what it takes. Write it as %(usage)s; a "
        "measurand that is read several times is a list."
    ),
    "formula.list_as_number": N_(
        "%(field)s, column %(column)s: “%(at)s” is a list here, of repeats, apertures or conditions, where one number "
        "is needed. Take one from it, as in mean(%(at)s) or greatest(%(at)s)."
    ),
    "formula.yes_no_as_number": N_(
        "%(field)s, column %(column)s: “%(at)s” is a yes or no where a number is needed. Choose between two numbers "
        "by it, with ? and :."
    ),
    "formula.not_yes_no": N_(
        "%(field)s, column %(column)s: “%(at)s” is no yes or no. Compare it with something, as in a < b."
    ),
    "formula.repeated": N_(
        "%(field)s is %(repeats)s, but what is worked out is worked out once. Set it to 1; the formula may name the "
        "repeats of others."
    ),
}
_SPEED: Final = {
    "formula.lateral_correction": N_(
        "%(field)s, column %(column)s: “%(at)s” lies across the beam, where the beams' own spacing places the echoes, "
        "so the speed of sound doesn't scale it (Goldstein 2000). Correct distances along the beam only."
    ),
    "formula.no_correction": N_(
        "%(field)s, column %(column)s: “%(at)s” can't be corrected for the speed of sound: it isn't marked as a "
        "distance along the beam, and penetration and resolution are none (Goldstein 2000). Leave it as it is read."
    ),
    "formula.no_console_speed": N_(
        "%(field)s, column %(column)s: “%(at)s” corrects for the speed of sound, but not by the console's own setting. "
        "Divide by condition.sound_speed_m_s."
    ),
}
_VALUES: Final = {
    "formula.value_missing": N_(
        "There is no value for %(names)s. Read it first, or enter it where it is kept."
    ),
    "formula.value_qualified": N_(
        "%(names)s is no plain number but “more than”, “less than” or “not seen”, so nothing can be worked out from "
        "it. Judge the reading itself."
    ),
    "formula.not_finite": N_(
        "The formula gives no finite number: it divides by zero or the like. Look at the readings it is worked out "
        "from."
    ),
}
FORMULAS: Final = _WRITTEN | _NAMED | _FITTING | _SPEED | _VALUES

UNDERIVED: Final = {
    "missing": N_("It can't be worked out, because there is no value for %(names)s."),
    "qualified": N_(
        "It can't be worked out, because %(names)s is no plain number but “more than”, “less than” or “not seen”."
    ),
    "not_finite": N_("%(text)s is no finite number. Look at the readings it is worked out from."),
    "out_of_range": N_(
        "%(text)s has more digits than can be kept. Look at the readings it is worked out from."
    ),
    "layout_compensated": N_(
        "It isn't corrected for the speed of sound, because the layout of this test object already is: correcting "
        "twice would be wrong (Goldstein 2000)."
    ),
    "lateral_correction": N_(
        "It isn't corrected for the speed of sound, because that scales distances along the beam only "
        "(Goldstein 2000)."
    ),
    "no_correction": N_(
        "It isn't corrected for the speed of sound, because penetration and resolution are no distances between two "
        "targets (Goldstein 2000)."
    ),
}


def underived(derived: Derived) -> str:
    """Say why a derived quantity has no value; empty where it has one."""
    if not derived.problem:
        return ""
    return _(UNDERIVED[derived.problem]) % {"names": ", ".join(derived.names), "text": derived.text}
