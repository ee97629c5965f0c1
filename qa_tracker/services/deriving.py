"""Working out the derived quantities of a check from its readings and the attributes around them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal

from qa_tracker.core import decimals
from qa_tracker.core.decimals import Exact
from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_check import is_listed, order
from qa_tracker.core.formula_inputs import Qualified
from qa_tracker.core.formulas import Derived, derive
from qa_tracker.core.judgement import Judgement, not_assessable
from qa_tracker.core.sentence_codes import SentenceCode as Say
from qa_tracker.records.models import Device, TestObject
from qa_tracker.services.entries import EMPTY, Entry
from qa_tracker.services.items import Item

Attributes = Mapping[str, Mapping[str, object]]
ORIGIN = "derived"
THOUSAND = Decimal(1000)


@dataclass(frozen=True)
class WorkedOut:
    """A derived item with what its formula gave; ``refusal`` where it gave nothing that can be judged."""

    item: Item
    entry: Entry
    exact: Exact | None
    refusal: Judgement | None
    arithmetic: str


def attributes_of(device: Device, test_object: TestObject | None) -> Attributes:
    """What formulas may name of the device and of what it was measured on."""
    found: dict[str, Mapping[str, object]] = {"device": {"handheld": device.handheld}}
    if test_object is not None:
        found["test_object"] = {
            "sound_speed_m_s": _number(test_object.sound_speed_m_s),
            "depth_mm": _number(test_object.depth_mm),
            "layout_compensated": test_object.layout_compensated,
        }
    return found


def work_out(
    derived: Sequence[Item],
    items: Sequence[Item],
    entries: Mapping[str, Entry],
    exact: Mapping[str, Exact | None],
    attributes: Attributes,
) -> list[WorkedOut]:
    """Work out every derived item, in an order in which each finds what it is made of.

    Parameters
    ----------
    items, entries, exact
        What was asked, as typed and as read.
    attributes
        As ``attributes_of``; those of aperture and condition are the items' own.
    """
    given = {item.key: _given(item, entries.get(item.key, EMPTY), exact.get(item.key)) for item in items}
    specs = {item.spec.code: item.spec for item in (*items, *derived)}
    ranks = {spec.code: rank for rank, spec in enumerate(order(list(specs.values())))}
    found: list[WorkedOut] = []
    for item in sorted(derived, key=lambda each: ranks[each.spec.code]):
        values = _values(item, (*items, *derived), given) | _around(item, attributes, items)
        worked = _worked_out(
            item, derive(item.spec, values), {code: spec.name for code, spec in specs.items()}
        )
        given[item.key] = worked.exact.decimal if worked.exact else None
        found.append(worked)
    return sorted(found, key=lambda each: derived.index(each.item))


def _given(item: Item, entry: Entry, value: Exact | None) -> object:
    """What stands under a reading's name in a formula."""
    if item.spec.kind == "yes_no":
        return None if entry.text not in ("yes", "no") else entry.text == "yes"
    if entry.qualifier != "=":
        return Qualified(entry.qualifier, value.decimal if value else None)
    return value.decimal if value else None


def _values(item: Item, others: Sequence[Item], given: Mapping[str, object]) -> dict[str, object]:
    """Readings by code: those of the item's own aperture and condition, and of the whole device.

    A quantity of the whole device is made of the readings at every part, as a list; so are repeats.
    """
    found: dict[str, list[object]] = {}
    listed: dict[str, bool] = {}
    for other in others:
        here = all(
            mine is None or its is None or its == mine
            for mine, its in ((item.aperture, other.aperture), (item.condition, other.condition))
        )
        if here and other.key in given:
            found.setdefault(other.spec.code, []).append(given[other.key])
            listed[other.spec.code] = is_listed(other.spec, item.spec)
    return {code: values if listed[code] else values[0] for code, values in found.items()}


def _around(item: Item, attributes: Attributes, items: Sequence[Item]) -> dict[str, object]:
    """Attributes, and the nominal values of this measurand and of the others."""
    nominals = {each.spec.code: _number(each.nominal) for each in items if each.nominal}
    found: dict[str, object] = {**attributes, "nominals": nominals, "nominal": _number(item.nominal)}
    if item.aperture is not None:
        pitch = item.aperture.pitch_um
        found["aperture"] = {
            "elements": None if item.aperture.elements is None else Decimal(item.aperture.elements),
            "pitch_mm": None if pitch is None else Decimal(pitch) / THOUSAND,
        }
    if item.condition is not None:
        found["condition"] = {
            "test_frequency_mhz": _number(item.condition.test_frequency_mhz),
            "sound_speed_m_s": _number(item.condition.sound_speed_m_s),
        }
    return found


def _number(text: str | None) -> Decimal | None:
    """A number kept as text; None where it is empty or was never one."""
    try:
        return decimals.parse(text).decimal if text else None
    except Invalid:
        return None


def _worked_out(item: Item, found: Derived, names: Mapping[str, str]) -> WorkedOut:
    if found.value is not None:
        text, places = decimals.plain(found.value), decimals.places_of(found.value)
        exact = Exact(text, decimals.scaled_at(found.value, places), places)
        return WorkedOut(item, Entry(text, origin=ORIGIN), exact, None, found.text)
    return WorkedOut(item, EMPTY, None, _refusal(found, names), found.text)


def _refusal(found: Derived, names: Mapping[str, str]) -> Judgement:
    """Why nothing was worked out, as the verdict that a limit gives then."""
    told = ", ".join(names.get(name, name) for name in found.names)
    if found.problem == "missing":
        return not_assessable(Say.NO_INPUT, names=told)
    if found.problem == "qualified":
        return not_assessable(Say.OPEN_INPUT, names=told)
    if found.problem == "layout_compensated":
        return not_assessable(Say.LAYOUT_COMPENSATED)
    return not_assessable(Say.NOT_FINITE, what="value")
