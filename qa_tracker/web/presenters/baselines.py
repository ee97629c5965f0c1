"""Baselines in words: every epoch with its change from acceptance, and those about to be signed."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from itertools import groupby

from django.utils.formats import date_format
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from qa_tracker.core.decimals import from_scaled, places_of, plain, round_half_even
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records.queries.baselines import BaselineRow
from qa_tracker.records.queries.devices import ConditionRow
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.services import wording
from qa_tracker.services.baseline_limits import moves_of
from qa_tracker.services.baseline_rows import Moved
from qa_tracker.web.presenters.charts import amount_words

Specs = Mapping[str, MeasurandSpec]


@dataclass(frozen=True)
class ShownEpoch:
    """One epoch of a baseline; ``notes`` say what it rests on, ``changes`` how far the device has moved."""

    row: BaselineRow
    value: str
    notes: tuple[str, ...]
    changes: tuple[str, ...]


@dataclass(frozen=True)
class ShownBaseline:
    """The epochs of one series."""

    name: str
    where: str
    epochs: tuple[ShownEpoch, ...]

    @property
    def under_review(self) -> tuple[ShownEpoch, ...]:
        """Those that wait for a decision."""
        return tuple(each for each in self.epochs if each.row.under_review)


@dataclass(frozen=True)
class Limits:
    """What changes are held to: measurands, adopted limits, and the presets that bands go by."""

    specs: Specs
    adopted: Mapping[str, CriterionRow]
    conditions: Sequence[ConditionRow] = ()

    def quantity(self, condition_id: int | None) -> str:
        """The test frequency of a condition."""
        return next((each.test_frequency_mhz for each in self.conditions if each.id == condition_id), "")


def baselines_in_words(
    rows: Sequence[BaselineRow], limits: Limits, today: dt.date
) -> tuple[ShownBaseline, ...]:
    """Baselines by series, each epoch with the cumulative change from the first."""
    return tuple(
        _series(list(group), limits, today) for _key, group in groupby(rows, key=lambda row: row.key)
    )


def _series(rows: list[BaselineRow], limits: Limits, today: dt.date) -> ShownBaseline:
    first = rows[0]
    spec = limits.specs.get(first.measurand)
    moves = moves_of(rows, spec, limits.adopted, limits.quantity(first.condition_id))
    by_id = {row.id: row for row in rows}
    epochs = tuple(
        ShownEpoch(
            each,
            value_words(each.qualifier, each.entered, each.unit),
            tuple(_rests_on(each, today)),
            tuple(_moved(each, moves[each.id], by_id)),
        )
        for each in rows
    )
    name = spec.name if spec else first.measurand
    return ShownBaseline(name, place_of(first.aperture, first.condition), epochs)


def place_of(aperture: str, condition: str) -> str:
    """Aperture and condition, as far as there are any."""
    return ", ".join(part for part in (aperture, condition) if part)


def value_words(qualifier: str, entered: str, unit: str) -> str:
    """A baseline's value; a bound by its words."""
    amount = amount_words(entered, unit)
    return amount if qualifier == "=" else f"{wording.qualifier_word(qualifier)} {amount}"


def signed_words(value: Decimal, unit: str) -> str:
    """A difference with its sign."""
    sign = "+" if value > 0 else "\N{MINUS SIGN}" if value < 0 else ""
    return amount_words(f"{sign}{plain(abs(value))}", unit)


def _rests_on(row: BaselineRow, today: dt.date) -> list[str]:
    said = []
    if row.count:
        said.append(setups_words(row.count, row.standard_deviation, places_of(row.value) + 1, row.unit))
    if row.expires_on:
        past = row.expires_on <= today
        said.append(
            (_("ran out on %(day)s") if past else _("runs out on %(day)s"))
            % {"day": date_format(row.expires_on, "j F Y")}
        )
    return said


def setups_words(count: int, deviation: str, places: int, unit: str) -> str:
    """How many set-ups, and their standard deviation."""
    said = ngettext("mean of %(count)d set-up", "mean of %(count)d set-ups", count) % {"count": count}
    if not deviation:
        return said
    spread = amount_words(plain(round_half_even(Decimal(deviation), from_scaled(1, places))), unit)
    return f"{said}, " + _("standard deviation %(spread)s") % {"spread": spread}


def _moved(row: BaselineRow, moved: Moved, by_id: Mapping[int, BaselineRow]) -> list[str]:
    """The change from the first, the share of the allowance it uses, and what a test object adds."""
    if moved.change.before is None:
        return []
    said = [signed_words(moved.change.cumulative, row.unit)]
    if row.ended_at is None:
        said += share_words(moved)
    tied = by_id.get(row.overlap_of_id or 0)
    if tied is not None:
        said.append(object_words(moved, tied.test_object, row.overlap_entered, row.unit))
    elif moved.change.untold:
        said.append(
            _("as far as it can be told: a baseline was only a bound, or on an object without overlap")
        )
    return said


def share_words(moved: Moved) -> list[str]:
    """The share of the first level's allowance that a change from acceptance uses; nothing of none."""
    if not moved.used or not Decimal(moved.used):
        return []
    told = {"share": moved.used, "level": wording.level_word(moved.level)}
    return [_("%(share)s %% of what the %(level)s allows") % told]


def object_words(moved: Moved, on: str, overlap: str, unit: str) -> str:
    """What the step to another test object is, and that it is left out."""
    if moved.change.object_step is None:
        return _("no overlap with %(object)s: what changed there can't be told") % {"object": on}
    told = {
        "step": signed_words(moved.change.object_step, unit),
        "overlap": amount_words(overlap, unit),
        "object": on,
    }
    return _("%(step)s from the test objects left out (%(overlap)s on %(object)s)") % told
