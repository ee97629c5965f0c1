"""Two editions of a procedure side by side in words."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, ngettext

from qa_tracker.core.edition_differences import KeyChange
from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec
from qa_tracker.core.procedure_differences import (
    MeasurandDifference,
    ProcedureDifferences,
    StepDifference,
    measurand_keys,
    procedure_differences,
)
from qa_tracker.web.presenters.edition_words import label, value_lines

STATES = {
    "added": gettext_lazy("Added"),
    "removed": gettext_lazy("Removed"),
    "changed": gettext_lazy("Changed"),
    "same": gettext_lazy("The same"),
}
TOLD = ("kind", "unit", "resolution", "per", "repeats", "criteria", "grades", "formula")


@dataclass(frozen=True)
class ShownChange:
    """One key with what stands there in either edition, in lines; none where nothing does.

    ``in_part``: there are further lines, the same in both.
    """

    key: str
    old: tuple[str, ...]
    new: tuple[str, ...]
    in_part: bool = False

    @property
    def lines(self) -> tuple[str, ...]:
        """What stands there in the one edition that has it."""
        return self.new or self.old


@dataclass(frozen=True)
class ShownStep:
    """One step in both editions; empty where an edition lacks it."""

    state: str
    word: str
    old: str
    new: str


@dataclass(frozen=True)
class ShownMeasurand:
    """A measurand that differs: what became of it, and its keys in both editions."""

    state: str
    word: str
    name: str
    code: str
    changes: tuple[ShownChange, ...]


@dataclass(frozen=True)
class ShownDifferences:
    """Two editions side by side; ``steps`` is empty where no step differs."""

    old: int
    new: int
    summary: str
    head: tuple[ShownChange, ...]
    steps: tuple[ShownStep, ...]
    measurands: tuple[ShownMeasurand, ...]
    same: tuple[str, ...]
    reordered: tuple[str, ...]
    none: bool


def shown_differences(old: ProcedureSpec, new: ProcedureSpec) -> ShownDifferences:
    """Compare two editions and put the result in words."""
    found = procedure_differences(old, new)
    steps = found.steps if any(each.state != "same" for each in found.steps) else ()
    return ShownDifferences(
        old.edition,
        new.edition,
        _summary(found),
        _changes(found.head),
        tuple(_step(each) for each in steps),
        tuple(_measurand(each) for each in found.measurands if each.state != "same"),
        tuple(each.spec.name for each in found.measurands if each.state == "same"),
        tuple(one.name for one in new.measurands) if found.reordered else (),
        found.none,
    )


def _changes(changes: Sequence[KeyChange]) -> tuple[ShownChange, ...]:
    return tuple(ShownChange(label(each.key), *_differing(each)) for each in changes)


def _differing(each: KeyChange) -> tuple[tuple[str, ...], tuple[str, ...], bool]:
    """The lines that differ; all of them where the order alone does."""
    old, new = value_lines(each.key, each.old), value_lines(each.key, each.new)
    gone = tuple(line for line in old if line not in new)
    come = tuple(line for line in new if line not in old)
    return (gone, come, len(gone) < len(old)) if gone or come else (old, new, False)


def _step(each: StepDifference) -> ShownStep:
    return ShownStep(each.state, str(STATES[each.state]), each.old or "", each.new or "")


def _measurand(each: MeasurandDifference) -> ShownMeasurand:
    changes = _changes(each.changes)
    if each.old is None:
        changes = _told(each.spec, is_new=True)
    elif each.new is None:
        changes = _told(each.spec, is_new=False)
    return ShownMeasurand(each.state, str(STATES[each.state]), each.spec.name, each.spec.code, changes)


def _told(spec: MeasurandSpec, *, is_new: bool) -> tuple[ShownChange, ...]:
    """What a measurand is that only one of the editions has."""
    keys = measurand_keys(spec)
    lines = [(label(key), value_lines(key, keys[key])) for key in TOLD if keys[key] is not None]
    return tuple(ShownChange(name, () if is_new else text, text if is_new else ()) for name, text in lines)


def _summary(found: ProcedureDifferences) -> str:
    """How much differs: "1 measurand added, 2 measurands changed, 1 step differs"."""
    of = Counter(each.state for each in found.measurands)
    steps, others = sum(each.state != "same" for each in found.steps), len(found.head)
    told = (
        (of["added"], ngettext("%(n)d measurand added", "%(n)d measurands added", of["added"])),
        (of["removed"], ngettext("%(n)d measurand removed", "%(n)d measurands removed", of["removed"])),
        (of["changed"], ngettext("%(n)d measurand changed", "%(n)d measurands changed", of["changed"])),
        (steps, ngettext("%(n)d step differs", "%(n)d steps differ", steps)),
        (others, ngettext("%(n)d other thing differs", "%(n)d other things differ", others)),
        (int(found.reordered), _("the order differs")),
    )
    return ", ".join(text % {"n": number} for number, text in told if number)
