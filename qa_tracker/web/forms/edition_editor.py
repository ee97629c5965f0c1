"""The inputs of an edition that is being written: its head and its steps, kept just as typed."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, replace

from django.http import QueryDict
from django.utils.functional import Promise
from django.utils.translation import gettext_lazy as _

from qa_tracker.core.edition_draft import steps_typed
from qa_tracker.core.library_shapes import (
    ARRAY_KINDS,
    CONTACT_CLASSES,
    DEVICE_KINDS,
    INSTRUMENTS,
    SIGNINGS,
)
from qa_tracker.core.roles import ROLES
from qa_tracker.core.typed_text import YES, Typed
from qa_tracker.services import cautions, wording
from qa_tracker.services.wording_words import capital
from qa_tracker.web.forms.fields import Field, Option, Words
from qa_tracker.web.presenters import edition_words as words


@dataclass(frozen=True)
class Group:
    """Fields that belong together; ``shown_for`` names the class of a part that not every kind has."""

    title: Words
    fields: tuple[Field, ...]
    shown_for: str = ""
    folded: bool = False
    lead: Words = ""


def field(
    name: str, kind: str = "text", hint: Words = "", options: Iterable[Option] = (), *, required: bool = True
) -> Field:
    """A field by its name, with the label that every page has for it."""
    return Field(name, words.LABELS[name], kind, hint, tuple(options), required)


def named(codes: Iterable[str], word: Callable[[str], str]) -> tuple[Option, ...]:
    """Codes with their words, as options."""
    return tuple((code, capital(word(code))) for code in codes)


def of_table(table: Mapping[str, Promise]) -> tuple[Option, ...]:
    """A table of words, as options."""
    return tuple((code, capital(str(text))) for code, text in table.items())


def head_groups(typed: Typed) -> tuple[Group, ...]:
    """What an edition says before its steps."""
    groups = (
        Group(
            "",
            (
                field("title"),
                field("when", hint=_("In words, such as “Monthly” or “After each use”.")),
                field("note", "area", _("What a reader should know: what it covers, on what it rests."), required=False),
                field(
                    "standing",
                    hint=_("The source, or “common practice, no source”, or who decided it here."),
                ),
            ),
        ),
        Group(
            _("Who does it, and how it is signed"),
            (
                field("performed_by", "ticks", options=named(ROLES[:5], wording.role_word)),
                field("signing", "radio", options=tuple((each, capital(str(words.SIGNINGS[each]))) for each in SIGNINGS)),
                *(field(f"minutes_{kind}", "whole", required=False) for kind in DEVICE_KINDS),
            ),
        ),
        Group(
            _("How often"),
            (
                field("period", "select", options=of_table(words.PERIODS)),
                field("every", "whole", required=False),
                field(
                    "rule",
                    hint=_("As RFC 5545 writes it, such as FREQ=MONTHLY;BYDAY=1MO for the first Monday."),
                    required=False,
                ),
                field("before_days", "whole", required=False),
                field("grace_days", "whole", required=False),
            ),
            lead=_("What a plan begins with. A plan that is made already is not changed."),
        ),
        Group(
            _("What it needs"),
            (
                field("needs_test_object", "tick", required=False),
                field(
                    "needs_instrument",
                    "select",
                    options=(("", _("none")), *named(INSTRUMENTS, wording.kind_word)),
                    required=False,
                ),
                field("decontamination_gate", "tick", required=False),
            ),
        ),
        Group(
            _("Which devices, and which cautions"),
            (
                field("applies_kinds", "ticks", options=named(DEVICE_KINDS, wording.kind_word)),
                field("applies_arrays", "ticks", _("None ticked: every array."), named(ARRAY_KINDS, wording.array_word), required=False),
                field("applies_contacts", "ticks", _("None ticked: all."), named(CONTACT_CLASSES, wording.contact_word), required=False),
                field("cautions", "ticks", options=((code, each.text) for code, each in cautions.published().items()), required=False),
            ),
        ),
    )  # fmt: skip
    return filled(groups, typed)


def filled(groups: Iterable[Group], typed: Typed) -> tuple[Group, ...]:
    """Groups whose fields hold what is typed."""
    return tuple(replace(each, fields=tuple(_filled(one, typed) for one in each.fields)) for each in groups)


def _filled(one: Field, typed: Typed) -> Field:
    text = typed.get(one.name, "")
    if one.kind == "ticks":
        return replace(one, values=tuple(text.split()))
    if one.kind in ("select", "radio"):
        return replace(one, values=(text,))
    return one.starting(text)


def typed_in(groups: Iterable[Group], given: QueryDict) -> dict[str, str]:
    """What was typed in the fields of these groups, by name; several marks joined by blanks.

    Marks that were there before keep their order, which a page of boxes can't tell.
    """
    return {one.name: _typed(one, given) for each in groups for one in each.fields if _typed(one, given)}


def _typed(one: Field, given: QueryDict) -> str:
    if one.kind == "ticks":
        marked = [str(value) for value in given.getlist(one.name)]
        before = [value for value in one.values if value in marked]
        return " ".join([*before, *(value for value in marked if value not in before)])
    if one.kind == "tick":
        return YES if given.get(one.name) else ""
    return str(given.get(one.name, ""))


def steps_in(given: QueryDict) -> dict[str, str]:
    """The steps that were typed, after what a button asks: one more, one moved, one taken out.

    ``do`` is ``add``, or ``up``, ``down`` or ``remove`` with the step's number, such as ``up-3``.
    """
    names = sorted(
        (name for name in given if name.startswith("step-") and name[5:].isdecimal()),
        key=lambda name: int(name[5:]),
    )
    texts = [str(given[name]) for name in names]
    verb, _, number = given.get("do", "").partition("-")
    place = names.index(f"step-{number}") if f"step-{number}" in names else None
    if verb == "add":
        texts.append("")
    elif place is not None and verb == "remove":
        del texts[place]
    elif place is not None and verb in ("up", "down"):
        step = texts.pop(place)
        texts.insert(max(place + (1 if verb == "down" else -1), 0), step)
    return steps_typed(texts)
