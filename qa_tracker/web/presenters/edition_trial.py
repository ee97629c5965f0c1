"""The fields of an edition that is tried, in the order they would be asked, with room for example values."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from qa_tracker.services import wording
from qa_tracker.services.edition_trial import Trial, needs_baseline, needs_nominal
from qa_tracker.services.judging import Judged
from qa_tracker.web.presenters.entry import Field, Section, sections
from qa_tracker.web.refused import Refused


@dataclass(frozen=True)
class Example:
    """The input for a baseline or nominal value that the device or the test object would bring."""

    name: str
    is_baseline: bool
    value: str
    unit: str
    refusal: str


@dataclass(frozen=True)
class TrialField:
    """A field as the entry page shows it, and its examples."""

    field: Field
    examples: tuple[Example, ...]


@dataclass(frozen=True)
class TrialSection:
    """Fields that are read under the same condition."""

    title: str
    fields: tuple[TrialField, ...]


def trial_sections(
    laid: Trial, typed: Mapping[str, str], judged: Judged, beside: Refused, wrong: Refused
) -> tuple[TrialSection, ...]:
    """The sections of the entry page, each field with the examples that its limits and formulas use."""
    seen: set[str] = set()
    made = []
    for section in sections(laid.items, typed, judged, beside):
        made.append(_section(section, laid, typed, wrong, seen))
    return tuple(made)


def _section(
    section: Section, laid: Trial, typed: Mapping[str, str], wrong: Refused, seen: set[str]
) -> TrialSection:
    fields = []
    for field in section.fields:
        code = field.item.spec.code
        examples = () if code in seen else _examples(field, laid, typed, wrong)
        seen.add(code)
        fields.append(TrialField(field, examples))
    return TrialSection(section.title, tuple(fields))


def _examples(field: Field, laid: Trial, typed: Mapping[str, str], wrong: Refused) -> tuple[Example, ...]:
    item = field.item
    wanted = {
        f"baseline.{item.spec.code}": needs_baseline(item),
        f"nominal.{item.spec.code}": needs_nominal(item, laid.derived),
    }
    unit = "" if item.spec.unit == "1" else wording.unit_symbol(item.spec.unit)
    return tuple(
        Example(name, name.startswith("baseline"), typed.get(name, ""), unit, wrong.at(name))
        for name, is_wanted in wanted.items()
        if is_wanted
    )
