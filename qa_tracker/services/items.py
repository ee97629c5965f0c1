"""What a check asks: each measurand at each aperture and condition, with the limit and baseline it meets."""

from __future__ import annotations

from dataclasses import dataclass, replace

from qa_tracker.core.applicability import Circumstances
from qa_tracker.core.library import asked_of
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records.models import Device
from qa_tracker.records.queries import baselines, devices, library, series, uncertainties
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.records.queries.devices import ApertureRow, ConditionRow
from qa_tracker.records.queries.library import CriterionRow, EditionRow
from qa_tracker.records.queries.series import PointRow
from qa_tracker.records.queries.uncertainties import UncertaintyRow


@dataclass(frozen=True)
class Item:
    """One field of a check. ``key`` tells it apart in forms, drafts and the API.

    Each of ``criteria`` judges it; the first is the one its procedure names.
    """

    key: str
    spec: MeasurandSpec
    aperture: ApertureRow | None
    condition: ConditionRow | None
    repeat: int
    criteria: tuple[CriterionRow, ...]
    baseline: BaselineRow | None
    uncertainty: UncertaintyRow | None
    met: Circumstances
    nominal: str | None
    last: PointRow | None
    quantity: str

    @property
    def criterion(self) -> CriterionRow | None:
        """The limit that is named first."""
        return self.criteria[0] if self.criteria else None

    @property
    def series(self) -> SeriesKey:
        """The series its reading will belong to."""
        return (
            self.spec.code,
            self.aperture.id if self.aperture else None,
            self.condition.id if self.condition else None,
        )


@dataclass(frozen=True)
class Measured:
    """What judging needs to know of the device that is checked."""

    id: int
    kind: str
    array_kind: str
    applied_part: str
    protection_class: str


def measured(device: Device) -> Measured:
    """A device with its facts, as they are joined to it."""
    probe, scanner = getattr(device, "probe_facts", None), getattr(device, "scanner_facts", None)
    return Measured(
        device.id,
        device.kind,
        probe.array_kind if probe else "",
        probe.applied_part if probe else "",
        scanner.protection_class if scanner else "",
    )


@dataclass(frozen=True)
class Surroundings:
    """What a check meets at one device: fetched once, used for each item."""

    device: Measured
    edition: EditionRow
    apertures: list[ApertureRow]
    conditions: list[ConditionRow]
    criteria: dict[str, CriterionRow]
    baselines: dict[SeriesKey, tuple[BaselineRow, ...]]
    last: dict[SeriesKey, PointRow]
    nominals: dict[str, str]
    uncertainties: dict[str, UncertaintyRow]
    test_object_id: int | None = None


def surroundings(
    device: Measured,
    edition: EditionRow,
    site_id: int | None,
    nominals: dict[str, str],
    test_object_id: int | None,
) -> Surroundings:
    """Fetch what the items of a check need, in a handful of queries whatever the history."""
    apertures, conditions = devices.parts_of(device.id)
    around = Surroundings(
        device,
        edition,
        apertures,
        conditions,
        library.adopted_criteria(site_id),
        baselines.choices_in_force(device.id),
        {},
        nominals,
        uncertainties.in_force(site_id),
        test_object_id,
    )
    keys = {item.series for item in items_of(around)}
    return replace(around, last=series.last_readings(device.id, keys))


def items_of(around: Surroundings) -> tuple[Item, ...]:
    """Every item the edition asks of this device, in the edition's order.

    A derived measurand has its items too: nobody is asked for them, they are worked out.
    """
    return tuple(
        _item(around, spec, aperture, condition, repeat)
        for spec in around.edition.spec.measurands
        if asked_of(spec, device_kind=around.device.kind, array_kind=around.device.array_kind or None)
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
    device = around.device
    baseline = baselines.for_object(around.baselines.get(key, ()), around.test_object_id)
    return Item(
        key=".".join([spec.code, str(key[1] or 0), str(key[2] or 0), str(repeat)]),
        spec=spec,
        aperture=aperture,
        condition=condition,
        repeat=repeat,
        criteria=criteria_for(spec, around.criteria, baseline),
        baseline=baseline,
        uncertainty=around.uncertainties.get(spec.code),
        met=Circumstances(
            device.array_kind,
            device.protection_class,
            device.applied_part,
            spec.medium,
            spec.method,
        ),
        nominal=around.nominals.get(spec.code) if spec.nominal_from == "test_object" else spec.nominal,
        last=around.last.get(key),
        quantity=condition.test_frequency_mhz if condition else "",
    )


def criteria_for(
    spec: MeasurandSpec, adopted: dict[str, CriterionRow], baseline: BaselineRow | None
) -> tuple[CriterionRow, ...]:
    """The limits that judge a measurand: the first adopted one its procedure names, and those that name it.

    A limit of the device's own spread that nobody's procedure asks for begins to judge with the first baseline
    made of set-ups: until then the reading is recorded for its trend, as before.
    """
    named = next((adopted[code] for code in spec.criteria if code in adopted), None)
    beside = [
        row
        for row in adopted.values()
        if spec.code in row.spec.measurands
        and row.code not in spec.criteria
        and not (row.spec.criterion.of_own_spread and not (baseline and baseline.count))
    ]
    return (named, *beside) if named else tuple(beside)
