"""The inputs of one measurand of an edition, in the order in which one thinks of it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from django.http import QueryDict
from django.utils.translation import gettext as _t
from django.utils.translation import gettext_lazy as _

from qa_tracker.core.library_shapes import ARRAY_KINDS, DEVICE_KINDS, KINDS, QUALIFIERS
from qa_tracker.core.library_specs import CriterionSpec
from qa_tracker.core.measurand_draft import SAMPLE
from qa_tracker.core.typed_text import Typed, neat
from qa_tracker.core.units import UNITS
from qa_tracker.services import wording
from qa_tracker.services.wording_words import capital
from qa_tracker.web.forms.edition_editor import Group, field, filled, named, of_table, typed_in
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.presenters import edition_words as words

LIMIT = "limit-"
MOST_LIMITS = 9
NUMBERS, GRADES, WORDED, READ, VALUES = "for-numbers", "for-grades", "for-words", "for-read", "for-values"


def measurand_groups(
    typed: Typed, criteria: Sequence[CriterionSpec], others: Sequence[Option]
) -> tuple[Group, ...]:
    """Every input of a measurand.

    Parameters
    ----------
    criteria
        Every published criterion; offered are those in the measurand's unit and medium.
    others
        The other measurands of the edition, which it may be a share of.
    """
    groups = (*_what(), *_how(), *_judged(typed, criteria, others), *_where())
    return filled(groups, {**typed, **_limits_typed(typed)})


def _what() -> tuple[Group, ...]:
    return (
        Group(
            "",
            (
                field("name", hint=_("As it is asked on the page: short, the quantity first.")),
                field(
                    "code",
                    hint=_(
                        "The series it belongs to: the same code in every edition and procedure that measures the "
                        "same quantity."
                    ),
                ),
                field("kind", "select", options=named(KINDS, wording.kind_word)),
                field("prompt", "area", _("What to look at or to do, in a sentence; it stands beside the field.")),
            ),
        ),
        Group(
            _("The number"),
            (
                field("unit", "select", options=((code, words.unit_name(code)) for code in UNITS)),
                field("resolution", "decimal", _("The step it is read and judged in, such as 0.5.")),
            ),
            NUMBERS,
        ),
        Group(
            _("The answers"),
            (
                field("grades", "area", _("One on each line, the best first: a code, a colon and the words, such as “amber: Worn, nothing open”.")),
            ),
            GRADES,
        ),
        Group(
            "",
            (
                field("suggests_quarantine_on", hint=_("The codes of the answers, or “yes” or “no”, with blanks between them."), required=False),
            ),
            WORDED,
        ),
    )  # fmt: skip


def _how() -> tuple[Group, ...]:
    return (
        Group(
            _("How it is read"),
            (
                field("per", "radio", options=of_table(words.PER)),
                field(
                    "by_condition", "tick", _("Once under each named preset of the device."), required=False
                ),
                field("required", "tick", required=False),
                field("hide_last", "tick", _("Values that are shown get copied."), required=False),
            ),
        ),
        Group(
            "",
            (
                field("repeats", "whole"),
                field("qualifiers", "ticks", options=named(QUALIFIERS, words.qualifier_name)),
                field("low", "decimal", _("A value far outside is asked for again."), required=False),
                field("high", "decimal", required=False),
            ),
            READ,
        ),
    )


def _judged(typed: Typed, criteria: Sequence[CriterionSpec], others: Sequence[Option]) -> tuple[Group, ...]:
    return (
        Group(
            _("What it is judged by"),
            (field("medium", "select", options=of_table(words.MEDIA)), *limit_fields(typed, criteria)),
            lead=_(
                "The first limit that is adopted judges. Offered are those in the unit and medium that were saved "
                "last."
            ),
        ),
        Group(
            "",
            (
                field("nominal", "decimal", required=False),
                field("nominal_from", "tick", required=False),
                field(
                    "reference_from",
                    "select",
                    options=(("", _("not a share of another reading")), *others),
                ),
                field("own_baseline", "tick", required=False),
            ),
            VALUES,
        ),
    )


def _where() -> tuple[Group, ...]:
    return (
        Group(
            _("Rarely needed"),
            (
                field("kinds", "ticks", _("None ticked: every kind the procedure is meant for."), named(DEVICE_KINDS, wording.kind_word), required=False),
                field("not_for_array_kinds", "ticks", options=named(ARRAY_KINDS, wording.array_word), required=False),
                field("one_of", hint=_("A name that several measurands share: one answer is enough for all of them."), required=False),
                field("sound_speed_correction", "tick", _("Only then may a formula correct it by the console's sound-speed setting."), required=False),
                field("yearly", "tick", required=False),
                field("method", hint=_("A code such as eye or image."), required=False),
                field("note", "area", required=False),
            ),
            folded=True,
        ),
    )  # fmt: skip


def limit_fields(typed: Typed, criteria: Sequence[CriterionSpec]) -> tuple[Field, ...]:
    """Limits in order of preference: those chosen and one more, from what is published in this unit and medium."""
    chosen = neat(typed, "criteria").split()
    says = {each.id: capital(wording.criterion_words(each)) for each in criteria}
    options = _limit_options(typed, criteria, chosen, says)
    count = min(len(chosen) + 1, MOST_LIMITS)
    return tuple(
        Field(
            f"{LIMIT}{number}",
            _t("Limit") if number == 1 else _t("Otherwise by"),
            "select",
            says.get(chosen[number - 1], "") if number <= len(chosen) else "",
            options,
        )
        for number in range(1, count + 1)
    )


def _limit_options(
    typed: Typed, criteria: Sequence[CriterionSpec], chosen: Sequence[str], says: Mapping[str, str]
) -> tuple[Option, ...]:
    """Published ids with their limit, each once; a chosen one that does not fit is still there, and says so."""
    kind, medium = neat(typed, "kind"), neat(typed, "medium")
    worded = kind in ("grade", "yes_no")
    unit = "1" if worded or kind == "text" else neat(typed, "unit")
    fitting = {
        each.id
        for each in criteria
        if each.unit == unit and each.medium in ("any", medium) and bool(each.criterion.grades) == worded
    }
    offered = [(code, f"{code}: {says[code]}") for code in sorted(fitting)]
    foreign = [
        (code, _t("%(code)s (not in this unit and medium)") % {"code": code})
        for code in chosen
        if code not in fitting
    ]
    return (("", _t("none")), *foreign, *offered)


def _limits_typed(typed: Typed) -> dict[str, str]:
    return {f"{LIMIT}{number}": code for number, code in enumerate(neat(typed, "criteria").split(), 1)}


def measurand_in(given: QueryDict, groups: Sequence[Group], before: Typed) -> dict[str, str]:
    """What was typed of a measurand; sample values that the page did not show stay as they were."""
    typed = typed_in(groups, given)
    limits = [typed.pop(f"{LIMIT}{number}", "") for number in range(1, MOST_LIMITS + 1)]
    typed["criteria"] = " ".join(dict.fromkeys(code for code in limits if code))
    typed["formula"] = str(given.get("formula", ""))
    samples = {name: text for name, text in before.items() if name.startswith(SAMPLE)}
    samples |= {name: str(given[name]) for name in given if name.startswith(SAMPLE)}
    return {name: text for name, text in (typed | samples).items() if text}
