"""The rows of the published library: criteria sets, procedures and cautions, as frozen values.

They are made, and refused, by ``library``; nothing is decided here.
"""

from __future__ import annotations

from dataclasses import dataclass

from qa_tracker.core.criteria import Criterion


@dataclass(frozen=True)
class ByLevel:
    """A word for each level a criterion has; None for a level it has not."""

    remedial: str | None = None
    suspension: str | None = None


@dataclass(frozen=True)
class CriterionSpec:
    """A published limit with where it comes from; ``standing`` says per level how well the number is known.

    ``measurands`` are judged by it beside the limit their procedure names, and the worst verdict decides.
    """

    id: str
    name: str
    shape: str
    unit: str
    medium: str
    methods: tuple[str, ...]
    source: str
    standing: ByLevel
    own_words: ByLevel
    not_for_array_kinds: tuple[str, ...]
    electrical: bool
    applies_when: tuple[tuple[str, str], ...]
    criterion: Criterion
    note: str
    measurands: tuple[str, ...] = ()


@dataclass(frozen=True)
class CriteriaSetSpec:
    """One edition of a published set."""

    set: str
    edition: str
    title: str
    source: str
    note: str
    cautions: tuple[str, ...]
    criteria: tuple[CriterionSpec, ...]


@dataclass(frozen=True)
class GradeSpec:
    """One answer of a graded measurand, best first."""

    value: str
    name: str


@dataclass(frozen=True)
class Plausible:
    """The band outside which a value is asked for again; plain decimals in the measurand's unit."""

    low: str
    high: str


@dataclass(frozen=True)
class MeasurandSpec:
    """A quantity to be measured. ``criteria`` in order of preference: the first adopted one judges."""

    code: str
    name: str
    kind: str
    unit: str
    resolution: str
    per: str
    by_condition: bool
    repeats: int
    qualifiers: tuple[str, ...]
    required: bool
    criteria: tuple[str, ...]
    medium: str
    nominal: str | None
    nominal_from: str | None
    reference_from: str | None
    grades: tuple[GradeSpec, ...]
    hide_last: bool
    plausible: Plausible | None
    prompt: str
    suggests_quarantine_on: tuple[str, ...]
    own_baseline: bool
    kinds: tuple[str, ...] | None
    not_for_array_kinds: tuple[str, ...]
    one_of: str | None
    formula: str | None
    sound_speed_correction: bool
    yearly: bool
    note: str
    method: str = ""

    @property
    def never_below_zero(self) -> bool:
        """Whether a reading below zero can only be a stray sign: a count, or a plausible band that starts at zero.

        Degrees Celsius start nowhere in particular.
        """
        band = self.plausible
        return self.kind == "count" or (
            band is not None and not band.low.startswith("-") and self.unit != "degC"
        )


@dataclass(frozen=True)
class RecurrenceSpec:
    """An RFC 5545 rule and the window around each due day, in days."""

    rule: str
    before_days: int
    grace_days: int


@dataclass(frozen=True)
class YearlySpec:
    """The yearly part of a procedure whose monthly part is another person's."""

    performed_by: tuple[str, ...]
    minutes: tuple[tuple[str, int], ...]
    recurrence: RecurrenceSpec


@dataclass(frozen=True)
class AppliesTo:
    """The devices a procedure is meant for; None means every array kind or contact class."""

    kinds: tuple[str, ...]
    array_kinds: tuple[str, ...] | None
    contact_classes: tuple[str, ...] | None


@dataclass(frozen=True)
class ProcedureSpec:
    """One edition of a procedure. ``recurrence`` is None where an event makes it due, named by ``when``."""

    procedure: str
    title: str
    edition: int
    standing: str
    performed_by: tuple[str, ...]
    signing: str
    minutes: tuple[tuple[str, int], ...]
    when: str
    applies_to: AppliesTo
    decontamination_gate: bool
    needs_test_object: bool
    needs_instrument: str | None
    recurrence: RecurrenceSpec | None
    yearly: YearlySpec | None
    cautions: tuple[str, ...]
    note: str
    steps: tuple[str, ...]
    measurands: tuple[MeasurandSpec, ...]


@dataclass(frozen=True)
class DwellSpec:
    """One row of a dwell-time table, half-open; ``minutes`` None where the source gives none."""

    from_value: str
    to_value: str | None
    minutes: str | None
    says: str


@dataclass(frozen=True)
class CautionSpec:
    """A sentence that must be shown where it applies."""

    code: str
    text: str
    applies: tuple[str, ...]
    source: str
    standing: str | None
    quantity: str
    table: tuple[DwellSpec, ...]
