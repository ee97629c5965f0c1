"""A formula as the editor shows it: what it may name, what it gives, and the place where it goes wrong."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _

from qa_tracker.core.decimals import plain
from qa_tracker.core.edition_draft import Writing
from qa_tracker.core.edition_places import Spot
from qa_tracker.core.errors import DomainError
from qa_tracker.core.formula_check import is_listed
from qa_tracker.core.formula_names import FUNCTIONS, NAMED_VALUES, OBJECT_SPEED, YES_NO
from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec
from qa_tracker.core.measurand_draft import NUMERIC, SAMPLE, samples_of
from qa_tracker.core.ready_formulas import READY_FORMULAS, ReadyFormula, Role, fill
from qa_tracker.services import formula_trial, wording
from qa_tracker.services.formula_trial import Nameable, Tried
from qa_tracker.services.wording_formulas import FUNCTION_WORDS, READY_TITLES
from qa_tracker.services.wording_refused_formulas import underived
from qa_tracker.services.wording_words import amount, unit_words
from qa_tracker.web.presenters.edition_editor import sentence
from qa_tracker.web.presenters.edition_words import ATTRIBUTES

WIDTH = 34
"""Most characters of a formula shown around a wrong place: as many as a phone has room for."""
READY = "ready-"


@dataclass(frozen=True)
class Caret:
    """Some of a formula in one line, and a second line with a mark under the wrong place."""

    line: str
    under: str
    column: int


@dataclass(frozen=True)
class NameLine:
    """A name a formula may use, with what it stands for."""

    name: str
    says: str
    unit: str


@dataclass(frozen=True)
class Sample:
    """The input for a name's sample value."""

    input: str
    name: str
    title: str
    unit: str
    listed: bool
    yes_no: bool
    value: str
    refusal: str


@dataclass(frozen=True)
class RoleChoice:
    """A measurand to be chosen for a place in a ready formula."""

    input: str
    name: str
    options: tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class ReadyLine:
    """A formula that can be put in."""

    code: str
    title: str
    template: str
    source: str
    roles: tuple[RoleChoice, ...]


@dataclass(frozen=True)
class ShownFormula:
    """What the page says of a formula now."""

    samples: tuple[Sample, ...]
    names: str
    caret: Caret | None
    refusal: str
    result: str
    arithmetic: str
    note: str


def shown_formula(writing: Writing, key: str) -> ShownFormula:
    """Try a part's formula and put what comes of it in words."""
    tried = formula_trial.try_formula(writing, key)
    typed = writing.part(key).typed
    if tried is None or not tried.formula:
        said = _("The result is shown once there is a formula.") if tried else ""
        return ShownFormula((), "", None, "", "", "", said)
    samples = _samples(tried, samples_of(typed))
    names = " ".join(each.name for each in samples) if tried.inputs is not None else "?"
    if tried.refusal is not None:
        said = sentence(tried.refusal, Spot(key, "formula"))
        return ShownFormula(samples, names, caret_of(tried), said, "", "", "")
    return _given(tried, samples, names, typed.get("unit", ""))


def _given(tried: Tried, samples: tuple[Sample, ...], names: str, unit: str) -> ShownFormula:
    derived = tried.derived
    if derived is None:
        return ShownFormula(samples, names, None, "", "", "", _("Correct the sample values first."))
    if derived.problem == "missing":
        says = _("Nothing is wrong with the formula. Type sample values to see what it gives.")
        return ShownFormula(samples, names, None, "", "", "", says)
    if derived.value is None:
        return ShownFormula(samples, names, None, "", "", derived.text, underived(derived))
    value = amount(plain(derived.value), unit)
    return ShownFormula(samples, names, None, "", value, derived.text, "")


def _samples(tried: Tried, typed: Mapping[str, str]) -> tuple[Sample, ...]:
    return tuple(
        Sample(
            f"{SAMPLE}{each.name}",
            each.name,
            each.title,
            "" if each.unit in (YES_NO, "1") else wording.unit_symbol(each.unit),
            each.listed,
            each.unit == YES_NO,
            typed.get(each.name, ""),
            wording.refusal(tried.wrong_samples[each.name]) if each.name in tried.wrong_samples else "",
        )
        for each in tried.inputs or ()
    )


def caret_of(tried: Tried) -> Caret | None:
    """The formula around its wrong place with a mark under it; none where no column is known."""
    return _caret(tried.formula, tried.refusal)


def _caret(formula: str, refusal: DomainError | None) -> Caret | None:
    column = refusal.parameters.get("column") if refusal else None
    if not isinstance(column, int):
        return None
    at = str(refusal.parameters.get("at", "")).removesuffix("…") if refusal else ""
    if formula[column - 1 : column - 1 + len(at)] != at:
        at = ""  # it names the whole of which the mark shows the joint
    start = max(0, min(column - 1 - WIDTH // 3, len(formula) - WIDTH))
    line = formula[start : start + WIDTH]
    before, after = ("…" if start else ""), ("…" if start + WIDTH < len(formula) else "")
    place = column - 1 - start
    marks = max(1, min(len(at), len(line) - place))
    return Caret(f"{before}{line}{after}", " " * (len(before) + place) + "^" * marks, column)


def name_lines(spec: ProcedureSpec, derived: MeasurandSpec) -> tuple[NameLine, ...]:
    """Everything a formula may name of what is read and known, with its unit."""
    return tuple(
        _name_line(each) for each in formula_trial.nameable(spec, derived) if each.name not in ATTRIBUTES
    )


def attribute_lines(spec: ProcedureSpec, derived: MeasurandSpec) -> tuple[NameLine, ...]:
    """Attributes of device, aperture, condition and test object."""
    found = (each for each in formula_trial.nameable(spec, derived) if each.name in ATTRIBUTES)
    return tuple(
        NameLine(each.name, str(ATTRIBUTES[each.name]), _("yes or no") if each.unit == YES_NO else "")
        for each in found
    )


def _name_line(each: Nameable) -> NameLine:
    says = each.title
    if each.name.partition(".")[0] in ("nominal", "nominals"):
        says = _("%(name)s, nominal value") % {"name": each.title}
    if each.listed:
        says = _("%(name)s, a list of its readings") % {"name": each.title}
    return NameLine(each.name, says, unit_words(each.unit))


def function_lines() -> tuple[NameLine, ...]:
    """Every function a formula may call."""
    return tuple(NameLine(f"{name}( )", _(FUNCTION_WORDS[name]), "") for name in FUNCTIONS)


def value_lines() -> tuple[NameLine, ...]:
    """The numbers that have a name, save the units: those are one rule."""
    plain_ones = {name: each for name, each in NAMED_VALUES.items() if not name.startswith("unit.")}
    return tuple(
        NameLine(name, "", unit_words(each.above) if each.below == "1" else f"{each.above}/{each.below}")
        for name, each in plain_ones.items()
    )


def ready_lines(spec: ProcedureSpec, derived: MeasurandSpec) -> tuple[ReadyLine, ...]:
    """The ready formulas for which this procedure has the measurands."""
    others = [one for one in spec.measurands if one.code != derived.code and one.kind in NUMERIC]
    lines = (_ready_line(each, others, derived) for each in READY_FORMULAS)
    return tuple(line for line in lines if line is not None)


def _ready_line(
    ready: ReadyFormula, others: Sequence[MeasurandSpec], derived: MeasurandSpec
) -> ReadyLine | None:
    roles = tuple(
        RoleChoice(
            f"{READY}{ready.code}-{role.name}", role_word(role.name), _fitting(role, ready, others, derived)
        )
        for role in ready.roles
    )
    if not all(role.options for role in roles):
        return None
    known = "" if ready.standing == "practice" else f", {wording.standing_word(ready.standing)}"
    source = f"{ready.source}{known}"
    return ReadyLine(ready.code, _(READY_TITLES[ready.code]), ready.template, source, roles)


def _fitting(
    role: Role, ready: ReadyFormula, others: Sequence[MeasurandSpec], derived: MeasurandSpec
) -> tuple[tuple[str, str], ...]:
    wants_nominal = f"nominals.{{{role.name}}}" in ready.needs
    return tuple(
        (one.code, one.name)
        for one in others
        if role.unit in (None, one.unit)
        and is_listed(one, derived) == role.repeated
        and (not wants_nominal or one.nominal is not None or one.nominal_from is not None)
        and (OBJECT_SPEED not in ready.needs or one.sound_speed_correction)
    )


def role_word(name: str) -> str:
    """What a place in a ready formula is called."""
    words = {
        "reading": _("Reading"),
        "length": _("Length"),
        "width": _("Width"),
        "height": _("Height"),
        "after": _("After"),
        "before": _("Before"),
        "other": _("Divided by"),
    }
    return words.get(name, name)


def put_in(code: str, chosen: Mapping[str, str]) -> str:
    """A ready formula with the chosen measurands in its places; nothing where one is missing."""
    ready = next((each for each in READY_FORMULAS if each.code == code), None)
    if ready is None:
        return ""
    roles = {role.name: chosen.get(f"{READY}{code}-{role.name}", "") for role in ready.roles}
    return fill(ready, roles) if all(roles.values()) else ""
