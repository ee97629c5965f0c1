"""Template tags: verdict marks, the allowance line, words for codes, days and moments at a site."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable
from typing import Any

from django import template
from django.utils import formats
from django.utils.html import format_html, format_html_join
from django.utils.safestring import SafeString
from django.utils.translation import gettext as _

from qa_tracker.core import figures
from qa_tracker.core.decimals import plain
from qa_tracker.core.figures import Judged
from qa_tracker.core.schedule_days import zone_of
from qa_tracker.core.shapes import Shape, svg_path
from qa_tracker.core.shapes import verdict_mark as mark_shapes
from qa_tracker.services import wording
from qa_tracker.services.wording_words import listed_all
from qa_tracker.web.refused import Refused

register = template.Library()
MARK_PX = 16
LINE_PX = (224, 26)
WORDS = {
    "level": wording.level_word,
    "check_state": wording.check_state_word,
    "device_state": wording.device_state_word,
    "fault_state": wording.fault_state_word,
    "dossier_state": wording.dossier_state_word,
    "role": wording.role_word,
    "kind": wording.kind_word,
    "array": wording.array_word,
    "contact": wording.contact_word,
    "reason": wording.reason_word,
    "meaning": wording.meaning_word,
    "notice": wording.level_of_notice_word,
    "unit": wording.unit_symbol,
    "qualifier": wording.qualifier_word,
    "verdict": wording.verdict_word,
    "recipient": wording.recipient_word,
    "hold": wording.hold_word,
    "mail_kind": wording.mail_kind_word,
    "mail_state": wording.mail_state_word,
    "try": wording.try_word,
}


def svg_shapes(shapes: Iterable[Shape], scale: float = 1.0) -> SafeString:
    """Shapes as SVG paths with presentation attributes."""
    return format_html_join(
        "",
        '<path d="{}" fill="{}" stroke="{}" stroke-width="{}"/>',
        (
            (svg_path(each.steps, scale), each.fill, each.stroke, f"{each.stroke_width * scale:g}")
            for each in shapes
        ),
    )


@register.simple_tag
def verdict_mark(verdict: str, level: str = "") -> SafeString | str:
    """The mark of a verdict and its word; an indeterminate one names its level."""
    if not verdict:
        return format_html('<span class="verdict none">{}</span>', _("no limit applies"))
    words = wording.verdict_word(verdict)
    if verdict == "indeterminate" and level:
        words = _("%(verdict)s at the %(level)s") % {"verdict": words, "level": wording.level_word(level)}
    return format_html(
        '<span class="verdict">{} <span class="word">{}</span></span>', mark_only(verdict), words
    )


@register.simple_tag
def mark_only(verdict: str) -> SafeString:
    """The mark alone, where its word stands beside it anyway."""
    return format_html(
        '<svg class="mark" viewBox="0 0 {0} {0}" width="{0}" height="{0}" aria-hidden="true">{1}</svg>',
        MARK_PX,
        svg_shapes(mark_shapes(verdict), MARK_PX),
    )


@register.simple_tag
def allowance_line(judged: Judged | None) -> SafeString | str:
    """The allowance line of a judged reading with the share of allowance as a figure; nothing without one."""
    if judged is None:
        return ""
    line = figures.allowance_line(judged)
    share = figures.share_text(line)
    width, height = LINE_PX
    return format_html(
        '<span class="allowance"><svg viewBox="0 0 {0} {1}" width="{0}" height="{1}" role="img" '
        'aria-label="{2}">{3}</svg><span class="share">{4}</span></span>',
        width,
        height,
        line_label(judged, share),
        svg_shapes(figures.allowance_shapes(line, width, height)),
        _("%(share)s of the allowance used") % {"share": share} if share else "",
    )


def line_label(judged: Judged, share: str) -> str:
    """What the line shows, for those who can't see it."""
    if share:
        return _("Allowance line: %(share)s of the first level's allowance used") % {"share": share}
    value = plain(judged.value) if judged.value is not None and not judged.ranks else ""
    return _("Allowance line, reading %(value)s") % {"value": value} if value else _("Allowance line")


@register.filter
def word(code: str, table: str) -> str:
    """The word for a code: ``{{ device.state|word:"device_state" }}``."""
    return WORDS[table](code) if code else ""


@register.filter
def mail_stands(state: str) -> str:
    """How the mail of a notice stands, also where none carries it yet."""
    return wording.mail_state_word(state)


@register.filter
def notice_levels(levels: Iterable[str]) -> str:
    """Levels of notices, joined for reading."""
    return listed_all(wording.level_of_notice_word(level) for level in levels)


@register.filter
def sentence_case(text: str) -> str:
    """The text with a capital first letter."""
    return text[:1].upper() + text[1:]


@register.filter
def local_time(moment: dt.datetime | None, zone: str) -> str:
    """A moment by the clock of a site."""
    if moment is None:
        return ""
    local = moment.astimezone(zone_of(zone or "UTC"))
    return f"{formats.date_format(local, 'j F Y')}, {local:%H:%M}"


@register.filter
def local_day(moment: dt.datetime | None, zone: str) -> str:
    """A moment's day by the calendar of a site."""
    if moment is None:
        return ""
    return formats.date_format(moment.astimezone(zone_of(zone or "UTC")), "j F Y")


@register.filter
def excuse(text: str) -> str:
    """Why a check was excused, in words."""
    return wording.excuse_words(text)


@register.filter
def day(value: dt.date | None) -> str:
    """A day in words."""
    return formats.date_format(value, "j F Y") if value else ""


@register.inclusion_tag("_refusals.html")
def refusals(refused: Refused | None) -> dict[str, Any]:
    """Every refusal of a form in one place, each leading to its field."""
    return {"refused": refused}


@register.simple_tag
def refusal_at(refused: Refused | None, field: str) -> SafeString | str:
    """The refusal beside one field; its id is ``refusal_<field>``."""
    sentence = refused.at(field) if refused else ""
    if not sentence:
        return ""
    return format_html('<p class="refusal" id="refusal_{}">{}</p>', field, sentence)


@register.simple_tag
def described_by(refused: Refused | None, field: str, hint: str = "") -> SafeString | str:
    """The attributes that tie a field to its hint and its refusal."""
    sentence = refused.at(field) if refused else ""
    ids = " ".join(part for part in (hint, f"refusal_{field}" if sentence else "") if part)
    if not ids:
        return ""
    if sentence:
        return format_html(' aria-describedby="{}" aria-invalid="true"', ids)
    return format_html(' aria-describedby="{}"', ids)
