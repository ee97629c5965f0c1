"""Sentences of what is refused in lines that scripts send to be judged."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

LINES: Final = {
    "line.not_json": N_("The line is not JSON: it breaks at character %(at)s. Send one JSON object a line."),
    "line.not_utf8": N_("The line is not UTF-8: it breaks at byte %(at)s. Save it as UTF-8."),
    "line.not_object": N_("The line is no JSON object. Send one object a line, in braces."),
    "line.too_large": N_("The line is longer than %(most)s bytes. Send one reading a line."),
    "line.too_deep": N_("The line is nested too deeply to be read. Send one reading a line."),
    "line.key_twice": N_(
        "“%(key)s” stands twice in one object, so it can't be told which counts. Give it once."
    ),
    "line.unknown_key": N_("“%(key)s” is not known here. Use: %(known)s."),
    "line.no_criterion": N_(
        "There is no criterion to judge by. Give “criterion” with basis, direction and a level."
    ),
    "line.not_text": N_(
        "%(value)s is not written as text. Put numbers in quotes: a JSON number may have been a binary float on "
        "its way."
    ),
    "line.not_number": N_('%(field)s is %(value)s, which is no number. Write it as text, such as "20.3".'),
    "line.not_decimal": N_(
        "%(field)s: “%(value)s” is not a decimal number. Write digits with a point, and no unit or sign of comparison."
    ),
    "line.too_long": N_(
        "%(field)s: “%(value)s” has more than the %(digits)s digits that are judged exactly. Write fewer."
    ),
    "line.limit_too_long": N_(
        "%(field)s: “%(value)s” is longer than a limit can be, which is %(digits)s digits and %(places)s decimal "
        "places. Write fewer."
    ),
    "line.needs_the_register": N_(
        "%(field)s can't be judged from a line: grades and a device's own spread stand in the register. Give levels "
        "with absolute or percent."
    ),
}
