"""A formula tried on sample values while it is written: what it may name, what it gives, or where it goes wrong."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

from qa_tracker.core import decimals
from qa_tracker.core.edition_draft import Writing, document_of
from qa_tracker.core.edition_refusals import read_whole
from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.core.formula_check import check_formula, corrects, is_listed, order
from qa_tracker.core.formula_grammar import parse
from qa_tracker.core.formula_names import (
    LAYOUT_COMPENSATED,
    NAMED_VALUES,
    NAMES,
    NOMINAL,
    NOMINALS,
    YES_NO,
)
from qa_tracker.core.formula_tree import names_in
from qa_tracker.core.formulas import Derived, derive
from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec
from qa_tracker.core.measurand_draft import NUMERIC, SAMPLE, formula_of, samples_of
from qa_tracker.core.typed_text import decimal, neat
from qa_tracker.core.units import UNITS


@dataclass(frozen=True)
class Nameable:
    """A name that a formula may use.

    Parameters
    ----------
    name
        As it is written.
    title
        The measurand it stands for; empty for what is no measurand.
    unit
        Code of its unit; ``yes_no`` for a yes or no.
    listed
        Whether it is a list of readings.
    """

    name: str
    title: str
    unit: str
    listed: bool = False


@dataclass(frozen=True)
class Tried:
    """A formula tried: ``refusal`` with its column, or ``derived`` once it could be worked out, or failed to.

    ``inputs`` are the names that need a sample value, None where the formula can't even be read;
    ``wrong_samples`` are refusals by name.
    """

    formula: str
    inputs: tuple[Nameable, ...] | None
    derived: Derived | None
    refusal: DomainError | None
    wrong_samples: Mapping[str, DomainError]


def spec_of(writing: Writing) -> ProcedureSpec | None:
    """What a draft says as far as it can be read, with stand-ins where it can't."""
    return read_whole(document_of(writing)).spec


def nameable(spec: ProcedureSpec, derived: MeasurandSpec) -> tuple[Nameable, ...]:
    """Everything of the procedure and around it that a formula of a derived measurand may name."""
    others = [one for one in spec.measurands if one.code != derived.code and one.kind in NUMERIC]
    readings = [Nameable(one.code, one.name, one.unit, is_listed(one, derived)) for one in others]
    nominals = [Nameable(f"{NOMINALS}.{one.code}", one.name, one.unit) for one in others if _has_nominal(one)]
    own = [Nameable(NOMINAL, derived.name, derived.unit)] if _has_nominal(derived) else []
    attributes = [Nameable(name, "", unit) for name, unit in NAMES.items() if _is_there(name, spec, derived)]
    return (*readings, *nominals, *own, *attributes)


def _has_nominal(one: MeasurandSpec) -> bool:
    return one.nominal is not None or one.nominal_from is not None


def _is_there(name: str, spec: ProcedureSpec, derived: MeasurandSpec) -> bool:
    """Whether an attribute belongs to what the measurand is read at."""
    noun = name.partition(".")[0]
    there = {
        "aperture": derived.per == "aperture",
        "condition": derived.by_condition,
        "test_object": spec.needs_test_object or "test_object" in spec.applies_to.kinds,
    }
    return there.get(noun, True)


def measurand_of(writing: Writing, key: str, spec: ProcedureSpec) -> MeasurandSpec:
    """The derived measurand of a part as it is typed, also where its formula is wrong."""
    typed = writing.part(key).typed
    read = spec.measurands[[each.key for each in writing.measurands].index(key)]
    unit, code = neat(typed, "unit"), neat(typed, "code")
    return replace(
        read,
        kind="derived",
        formula=formula_of(typed),
        code=code or read.code,
        unit=unit if unit in UNITS else "1",
        resolution=_step(decimal(neat(typed, "resolution"))),
        repeats=1,
    )


def _step(text: str) -> str:
    try:
        return text if decimals.parse(text).scaled > 0 else "1"
    except Invalid:
        return "1"


def try_formula(writing: Writing, key: str) -> Tried | None:
    """Check the formula of a part and work it out on the sample values typed beside it.

    None where the draft can't be read at all.
    """
    spec = spec_of(writing)
    if spec is None:
        return None
    measurand = measurand_of(writing, key, spec)
    index = [each.key for each in writing.measurands].index(key)
    among = (*spec.measurands[:index], measurand, *spec.measurands[index + 1 :])
    around = replace(spec, measurands=among)
    formula = measurand.formula or ""
    inputs = _inputs(formula, around, measurand)
    try:
        check_formula(measurand, around)
        order(among)
    except DomainError as refusal:
        return Tried(formula, inputs, None, refusal, {})
    values, wrong = _values(inputs or (), samples_of(writing.part(key).typed))
    return Tried(formula, inputs, None if wrong else derive(measurand, values), None, wrong)


def _inputs(formula: str, spec: ProcedureSpec, measurand: MeasurandSpec) -> tuple[Nameable, ...] | None:
    """The names of a formula that stand for what is read, in the order written; what is unknown is left out."""
    try:
        names = [each.dotted for each in names_in(parse(formula))]
    except DomainError:
        return None
    if corrects(names):
        names.append(LAYOUT_COMPENSATED)
    known = {each.name: each for each in nameable(spec, measurand)}
    wanted = dict.fromkeys(name for name in names if name not in NAMED_VALUES)
    return tuple(known[name] for name in wanted if name in known)


def _values(
    inputs: Sequence[Nameable], samples: Mapping[str, str]
) -> tuple[dict[str, object], dict[str, DomainError]]:
    """Sample values as a formula takes them, and what of them can't be read."""
    values: dict[str, object] = {}
    wrong: dict[str, DomainError] = {}
    for each in inputs:
        noun, _, attribute = each.name.partition(".")
        try:
            value = _value(each, samples.get(each.name, ""))
        except DomainError as refusal:
            wrong[each.name] = refusal
            continue
        if attribute:
            mapping = values.setdefault(noun, {})
            assert isinstance(mapping, dict)  # a noun with a point is never a reading's code
            mapping[attribute] = value
        else:
            values[noun] = value
    return values, wrong


def _value(each: Nameable, text: str) -> object:
    if not text:
        return None
    if each.unit == YES_NO:
        return text == "yes"
    field = f"{SAMPLE}{each.name}"
    if not each.listed:
        return decimals.parse(text, field=field).decimal
    return [decimals.parse(part, field=field).decimal for part in text.replace(";", " ").split()]
