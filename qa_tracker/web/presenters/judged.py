"""A verdict as pages show it: mark and word, sentence, source, allowance line, and what to do now."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from django.utils.translation import gettext_lazy as _

from qa_tracker.core.figures import Judged as Line
from qa_tracker.core.judged_line import judged_line
from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.records.queries.submissions import ReadingRow, VerdictRow
from qa_tracker.services import wording
from qa_tracker.services.judging import JudgedItem
from qa_tracker.services.weighing import Weighed

YES_NO_WORDS = {"yes": _("yes"), "no": _("no")}


@dataclass(frozen=True)
class Shown:
    """One verdict in words, with the numbers its allowance line is drawn from.

    ``further`` is what other limits of the same measurand say.
    """

    verdict: str
    level: str
    sentence: str
    source: str
    instruction: str
    line: Line | None
    criterion: str = ""
    further: tuple[Shown, ...] = ()


@dataclass(frozen=True)
class ShownReading:
    """One reading as recorded or about to be: what, where, value as entered, verdict."""

    key: str
    name: str
    where: str
    value: str
    not_tested: str
    remark: str
    note: str
    shown: Shown | None


def shown(
    verdict: str,
    level: str,
    code: str,
    parameters: Mapping[str, str],
    criterion: CriterionRow | None,
    instruction: str,
    further: tuple[Shown, ...] = (),
) -> Shown:
    """Put a verdict in words; the criterion it was judged by brings source and line."""
    return Shown(
        verdict,
        level,
        wording.verdict_sentence(code, parameters, verdict, level),
        wording.source_line(criterion, level) if criterion else "",
        instruction,
        judged_line(criterion.spec.criterion, parameters) if criterion else None,
        criterion.spec.name if criterion else "",
        further,
    )


def shown_item(one: JudgedItem) -> Shown | None:
    """The verdict of an item that is being entered or signed."""
    judgement = one.judgement
    if judgement is None:
        return None
    return shown(
        judgement.verdict,
        judgement.level or "",
        str(judgement.code),
        judgement.parameters,
        one.criterion,
        one.instruction,
        tuple(_shown_further(each) for each in one.further),
    )


def _shown_further(weighed: Weighed) -> Shown:
    said = weighed.judgement
    return shown(said.verdict, said.level or "", str(said.code), said.parameters, weighed.criterion, "")


def shown_row(row: VerdictRow | None) -> Shown | None:
    """A recorded verdict."""
    if row is None:
        return None
    further = tuple(each for each in map(shown_row, row.further) if each)
    return shown(row.verdict, row.level, row.code, row.parameters, row.criterion, row.instruction, further)


def value_words(spec: MeasurandSpec | None, qualifier: str, entered: str, unit: str) -> str:
    """A value as entered, with qualifier and unit; a grade by its name."""
    if qualifier == "not_seen":
        return wording.qualifier_word("not_seen")
    if spec is not None and spec.kind == "yes_no":
        return str(YES_NO_WORDS.get(entered, entered))
    if spec is not None and spec.kind == "grade":
        return next((grade.name for grade in spec.grades if grade.value == entered), entered)
    symbol = wording.unit_symbol(unit) if unit not in ("", "1") else ""
    sign = "" if qualifier == "=" else f"{qualifier} "
    return f"{sign}{entered}\N{NO-BREAK SPACE}{symbol}" if symbol else f"{sign}{entered}"


def where_words(aperture: str, condition: str, repeat: int, repeats: int = 1) -> str:
    """Aperture, condition and repeat, as far as they tell items apart."""
    number = f"{repeat}." if repeats > 1 else ""
    return ", ".join(part for part in (aperture, condition, number) if part)


def about_to_be_signed(one: JudgedItem, *, name_aperture: bool = True) -> ShownReading:
    """An item of the signing page, exactly as it will be recorded."""
    item, entry = one.item, one.entry
    return ShownReading(
        item.key,
        item.spec.name,
        where_words(
            item.aperture.name if item.aperture and name_aperture else "",
            item.condition.name if item.condition else "",
            item.repeat,
            item.spec.repeats,
        ),
        value_words(item.spec, entry.qualifier, entry.text, item.spec.unit) if one.is_read else "",
        wording.reason_word(entry.not_tested) if entry.not_tested else "",
        entry.remark,
        entry.condition_note,
        shown_item(one),
    )


def recorded(row: ReadingRow, spec: ProcedureSpec, *, name_aperture: bool = True) -> ShownReading:
    """A reading of a submission; the only aperture of a probe needs no name."""
    of = next((each for each in spec.measurands if each.code == row.measurand), None)
    return ShownReading(
        str(row.id or ""),
        of.name if of else row.measurand,
        where_words(
            row.aperture if name_aperture else "", row.condition, row.repeat, of.repeats if of else 1
        ),
        value_words(of, row.qualifier, row.entered, row.unit) if row.id is not None else "",
        "",
        "",
        row.condition_note,
        shown_row(row.verdict),
    )
