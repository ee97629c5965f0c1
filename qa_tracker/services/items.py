"""What a check asks: each measurand at each aperture and condition, with the limit and baseline it meets."""

from __future__ import annotations

from dataclasses import dataclass

from qa_tracker.core.library import asked_of
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records.queries import baselines, devices, library, series
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.records.queries.devices import ApertureRow, ConditionRow, DeviceRow
from qa_tracker.records.queries.library import CriterionRow, EditionRow
from qa_tracker.records.queries.series import PointRow


@dataclass(frozen=True)
class Item:
    """One field of a check. ``key`` tells it apart in forms, drafts and the API."""

    key: str
    spec: MeasurandSpec
    aperture: ApertureRow | None
    condition: ConditionRow | None
    repeat: int
    criterion: CriterionRow | None
    baseline: BaselineRow | None
    nominal: str | None
    last: PointRow | None
    quantity: str

    @property
    def series(self) -> SeriesKey:
        """The series its reading will belong to."""
        return (
            self.spec.code,
            self.aperture.id if self.aperture else None,
            self.condition.id if self.condition else None,
        )


@dataclass(frozen=True)
class Surroundings:
    """What a check meets at one device: fetched once, used for each item."""

    device: DeviceRow
    edition: EditionRow
    apertures: list[ApertureRow]
    conditions: list[ConditionRow]
    criteria: dict[str, CriterionRow]
    baselines: dict[SeriesKey, BaselineRow]
    last: dict[SeriesKey, PointRow]
    nominals: dict[str, str]


def surroundings(
    device: DeviceRow, edition: EditionRow, site_id: int | None, nominals: dict[str, str]
) -> Surroundings:
    """Fetch what the items of a check need; the number of queries doesn't grow with the history."""
    codes = [spec.code for spec in edition.spec.measurands]
    return Surroundings(
        device,
        edition,
        devices.apertures_of(device.id),
        devices.conditions_of(device.id),
        library.adopted_criteria(site_id),
        baselines.in_force(device.id),
        series.last_readings(device.id, codes),
        nominals,
    )


def items_of(around: Surroundings) -> tuple[Item, ...]:
    """Every item the edition asks of this device, in the edition's order.

    A derived measurand is not asked: it is computed.
    """
    return tuple(
        _item(around, spec, aperture, condition, repeat)
        for spec in around.edition.spec.measurands
        if spec.kind != "derived"
        and asked_of(spec, device_kind=around.device.kind, array_kind=around.device.array_kind or None)
        for aperture in _apertures(around, spec)
        for condition in _conditions(around, spec)
        for repeat in range(1, spec.repeats + 1)
    )


def _apertures(around: Surroundings, spec: MeasurandSpec) -> list[ApertureRow | None]:
    return list(around.apertures) if spec.per == "aperture" and around.apertures else [None]


def _conditions(around: Surroundings, spec: MeasurandSpec) -> list[ConditionRow | None]:
    return list(around.conditions) if spec.by_condition and around.conditions else [None]


def _item(
    around: Surroundings,
    spec: MeasurandSpec,
    aperture: ApertureRow | None,
    condition: ConditionRow | None,
    repeat: int,
) -> Item:
    key = (spec.code, aperture.id if aperture else None, condition.id if condition else None)
    criterion = next((around.criteria[code] for code in spec.criteria if code in around.criteria), None)
    return Item(
        key=".".join([spec.code, str(key[1] or 0), str(key[2] or 0), str(repeat)]),
        spec=spec,
        aperture=aperture,
        condition=condition,
        repeat=repeat,
        criterion=criterion,
        baseline=around.baselines.get(key),
        nominal=around.nominals.get(spec.code) if spec.nominal_from == "test_object" else spec.nominal,
        last=around.last.get(key),
        quantity=condition.test_frequency_mhz if condition else "",
    )
