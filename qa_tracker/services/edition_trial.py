"""An edition tried on sample values: what it would ask of a device, and what its limits would say. Nothing is kept."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Mapping
from dataclasses import dataclass, field
from decimal import Decimal

from qa_tracker.core import decimals
from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.core.formula_grammar import parse
from qa_tracker.core.formula_names import LAYOUT_COMPENSATED, NAMES, NOMINALS, OBJECT_SPEED, YES_NO
from qa_tracker.core.formula_tree import names_in
from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec
from qa_tracker.core.measurand_draft import NUMERIC
from qa_tracker.records.queries import library, uncertainties
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.records.queries.devices import ApertureRow, ConditionRow
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.services.items import Item, Measured, Surroundings, items_of
from qa_tracker.services.judging import Asked

NOBODY = uuid.UUID(int=0)
PART = 1
"""The key of the one aperture and the one condition of an invented device."""
AROUND = ("aperture", "condition")


@dataclass(frozen=True)
class Invented:
    """The device that an edition is tried on, and what would be known of it; texts as typed.

    Parameters
    ----------
    baselines, nominals
        Example values by measurand code.
    attributes
        Example values by dotted name, such as ``condition.test_frequency_mhz``.
    condition
        What its one condition is called.
    """

    kind: str
    array_kind: str = ""
    applied_part: str = ""
    protection_class: str = ""
    baselines: Mapping[str, str] = field(default_factory=dict)
    nominals: Mapping[str, str] = field(default_factory=dict)
    attributes: Mapping[str, str] = field(default_factory=dict)
    condition: str = ""


@dataclass(frozen=True)
class Trial:
    """An edition laid out for an invented device.

    ``wrong`` are the example values that can't be read; ``needs`` the attributes that limits and formulas use.
    """

    items: tuple[Item, ...]
    derived: tuple[Item, ...]
    attributes: Mapping[str, Mapping[str, object]]
    needs: tuple[str, ...]
    wrong: tuple[DomainError, ...]

    @property
    def asked(self) -> Asked:
        """What is asked, and under what it is judged."""
        return Asked(self.items, self.derived, self.attributes)


def lay_out(spec: ProcedureSpec, device: Invented, site_id: int | None, at: dt.datetime) -> Trial:
    """Lay an edition out as a check would be, judged by the limits adopted at a site. Reads only."""
    wrong: list[DomainError] = []
    readings = {one.code: one for one in spec.measurands if one.kind in NUMERIC}
    baselines = _readable(device.baselines, readings, "baseline", wrong)
    nominals = _readable(device.nominals, readings, "nominal", wrong)
    attributes = _attributes(device.attributes, wrong)
    around = Surroundings(
        Measured(0, device.kind, device.array_kind, device.applied_part, device.protection_class),
        EditionRow(0, NOBODY, 0, NOBODY, spec.procedure, spec.title, spec.edition, "", spec),
        [_aperture(attributes)] if device.kind == "probe" else [],
        [_condition(device, attributes)],
        library.adopted_criteria(site_id),
        _in_force(readings, baselines, device.kind == "probe", at),
        {},
        nominals,
        uncertainties.in_force(site_id),
    )
    items = items_of(around)
    return Trial(
        tuple(item for item in items if item.spec.kind != "derived"),
        tuple(item for item in items if item.spec.kind == "derived"),
        {noun: each for noun, each in attributes.items() if noun not in AROUND},
        _needs(items),
        tuple(wrong),
    )


def _readable(
    typed: Mapping[str, str], readings: Mapping[str, MeasurandSpec], what: str, wrong: list[DomainError]
) -> dict[str, str]:
    """Example values that are numbers; each other one is told beside its field."""
    found: dict[str, str] = {}
    for code, text in typed.items():
        if code in readings and text.strip():
            try:
                found[code] = decimals.plain(decimals.parse(text, field=f"{what}.{code}").decimal)
            except Invalid as refusal:
                wrong.append(refusal)
    return found


def _attributes(typed: Mapping[str, str], wrong: list[DomainError]) -> dict[str, dict[str, object]]:
    found: dict[str, dict[str, object]] = {}
    for name, unit in NAMES.items():
        noun, _, attribute = name.partition(".")
        text = typed.get(name, "").strip()
        if not text:
            continue
        try:
            value = text == "yes" if unit == YES_NO else decimals.parse(text, field=name).decimal
        except Invalid as refusal:
            wrong.append(refusal)
            continue
        found.setdefault(noun, {})[attribute] = value
    return found


def _aperture(attributes: Mapping[str, Mapping[str, object]]) -> ApertureRow:
    given = attributes.get("aperture", {})
    elements, pitch = given.get("elements"), given.get("pitch_mm")
    return ApertureRow(
        PART,
        NOBODY,
        "",
        int(elements) if isinstance(elements, Decimal) else None,
        int(pitch * 1000) if isinstance(pitch, Decimal) else None,
    )


def _condition(device: Invented, attributes: Mapping[str, Mapping[str, object]]) -> ConditionRow:
    given = attributes.get("condition", {})
    frequency, speed = (
        device.attributes.get(f"condition.{name}", "").strip().replace(",", ".") if name in given else ""
        for name in ("test_frequency_mhz", "sound_speed_m_s")
    )
    return ConditionRow(PART, NOBODY, device.condition, frequency, speed, "{}")


def _in_force(
    readings: Mapping[str, MeasurandSpec], baselines: Mapping[str, str], has_aperture: bool, at: dt.datetime
) -> dict[SeriesKey, tuple[BaselineRow, ...]]:
    found: dict[SeriesKey, tuple[BaselineRow, ...]] = {}
    for code, text in baselines.items():
        one = readings[code]
        aperture = PART if one.per == "aperture" and has_aperture else None
        condition = PART if one.by_condition else None
        found[(code, aperture, condition)] = (_baseline(one, text, aperture, condition, at),)
    return found


def _baseline(
    one: MeasurandSpec, text: str, aperture: int | None, condition: int | None, at: dt.datetime
) -> BaselineRow:
    return BaselineRow(
        id=0, uid=NOBODY, device_id=0, measurand=one.code, aperture_id=aperture, aperture="",
        condition_id=condition, condition="", epoch=1, qualifier="=", entered=text, value=Decimal(text),
        unit=one.unit, console_model="", console_software="", test_object_id=None, test_object_uid=None,
        test_object="", method="", reason="", set_by="", valid_from=at, ended_at=None, under_review=False,
        expires_on=None, overlap_of_id=None, overlap_entered="",
    )  # fmt: skip


def needs_baseline(item: Item) -> bool:
    """Whether a limit of the item stands on a baseline, so that an example of one is asked for."""
    return any(each.spec.criterion.basis == "baseline" for each in item.criteria)


def needs_nominal(item: Item, derived: tuple[Item, ...]) -> bool:
    """Whether the test object would bring a nominal value that a limit or a formula uses."""
    if item.spec.nominal_from is None:
        return False
    named = {name for each in derived for name in _names(each.spec)}
    by_limit = any(each.spec.criterion.basis == "nominal" for each in item.criteria)
    return by_limit or f"{NOMINALS}.{item.spec.code}" in named


def _needs(items: tuple[Item, ...]) -> tuple[str, ...]:
    """The attributes that some formula names, or that some limit is banded by."""
    named = {name for item in items for name in _names(item.spec)}
    if OBJECT_SPEED in named:
        named.add(LAYOUT_COMPENSATED)
    banded = {f"condition.{each.spec.criterion.banded_by}" for item in items for each in item.criteria}
    return tuple(name for name in NAMES if name in named | banded)


def _names(spec: MeasurandSpec) -> set[str]:
    return {each.dotted for each in names_in(parse(spec.formula))} if spec.formula else set()
