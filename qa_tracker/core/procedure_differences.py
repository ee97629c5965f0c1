"""What differs between two editions of a procedure: keys of the head, steps, and measurands key by key.

Nothing is judged here: two editions that ask for the same by other words differ.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from difflib import SequenceMatcher
from itertools import zip_longest

from qa_tracker.core.edition_differences import KeyChange, State, Value
from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec, RecurrenceSpec


@dataclass(frozen=True)
class StepDifference:
    """One step of two editions side by side; None where an edition lacks it."""

    old: str | None
    new: str | None

    @property
    def state(self) -> State:
        """In one word what became of it."""
        if self.old is None:
            return "added"
        if self.new is None:
            return "removed"
        return "same" if self.old == self.new else "changed"


@dataclass(frozen=True)
class MeasurandDifference:
    """One measurand of two editions side by side; ``old`` or ``new`` is None where an edition lacks it."""

    old: MeasurandSpec | None
    new: MeasurandSpec | None
    changes: tuple[KeyChange, ...] = ()

    @property
    def state(self) -> State:
        """In one word what became of it."""
        if self.old is None:
            return "added"
        if self.new is None:
            return "removed"
        return "changed" if self.changes else "same"

    @property
    def spec(self) -> MeasurandSpec:
        """The newer of the two there are."""
        found = self.new or self.old
        assert found is not None  # one of the two is always there
        return found


@dataclass(frozen=True)
class ProcedureDifferences:
    """Two editions side by side. ``reordered``: what both have comes in another order."""

    head: tuple[KeyChange, ...]
    steps: tuple[StepDifference, ...]
    measurands: tuple[MeasurandDifference, ...]
    reordered: bool

    @property
    def none(self) -> bool:
        """Whether they ask the same in the same words."""
        states = {each.state for each in self.steps} | {each.state for each in self.measurands}
        return not self.head and not self.reordered and states <= {"same"}


def procedure_differences(old: ProcedureSpec, new: ProcedureSpec) -> ProcedureDifferences:
    """Lay two editions of a procedure side by side; their numbers are not compared.

    Parameters
    ----------
    old, new
        The editions. A measurand is told by its code: one with another code is another measurand.

    Returns
    -------
    ProcedureDifferences
        Measurands in the old edition's order, then those that the new one adds; what is the same is there too.
    """
    return ProcedureDifferences(
        _changes(head_keys(old), head_keys(new)),
        steps_beside(old.steps, new.steps),
        _measurands(old.measurands, new.measurands),
        _reordered(old.measurands, new.measurands),
    )


def steps_beside(old: Sequence[str], new: Sequence[str]) -> tuple[StepDifference, ...]:
    """Lay steps side by side, those that are the same beside each other.

    Examples
    --------
    >>> [each.state for each in steps_beside(["Clean.", "Look."], ["Clean.", "Dry.", "Look."])]
    ['same', 'added', 'same']
    """
    laid: list[StepDifference] = []
    for _, low, high, new_low, new_high in SequenceMatcher(None, old, new, autojunk=False).get_opcodes():
        laid += [StepDifference(*pair) for pair in zip_longest(old[low:high], new[new_low:new_high])]
    return tuple(laid)


def head_keys(spec: ProcedureSpec) -> dict[str, Value]:
    """Write what an edition says before its steps as one flat row of keys; what is empty has None.

    Lists whose order says nothing are sorted, here and in ``measurand_keys``.

    The yearly part is named ``yearly.*``, and what it applies to ``applies_to.*``.
    """
    flat: dict[str, Value] = {
        "title": spec.title,
        "when": spec.when,
        **_recurrence_keys(spec.recurrence, ""),
        "performed_by": _sorted(spec.performed_by),
        **{f"minutes_{kind}": str(minutes) if minutes else None for kind, minutes in spec.minutes},
        "signing": spec.signing,
        "needs_test_object": spec.needs_test_object,
        "needs_instrument": spec.needs_instrument,
        "decontamination_gate": spec.decontamination_gate,
        "applies_kinds": _sorted(spec.applies_to.kinds),
        "applies_arrays": _sorted(spec.applies_to.array_kinds),
        "applies_contacts": _sorted(spec.applies_to.contact_classes),
        "cautions": _sorted(spec.cautions),
        "standing": spec.standing,
        "note": spec.note,
    }
    if spec.yearly is not None:
        flat |= {"yearly.performed_by": _sorted(spec.yearly.performed_by)}
        flat |= _recurrence_keys(spec.yearly.recurrence, "yearly.")
    return _empty_as_none(flat)


def _recurrence_keys(recurrence: RecurrenceSpec | None, before: str) -> dict[str, Value]:
    if recurrence is None:
        return {}
    return {
        f"{before}rule": recurrence.rule,
        f"{before}before_days": str(recurrence.before_days),
        f"{before}grace_days": str(recurrence.grace_days),
    }


def measurand_keys(spec: MeasurandSpec) -> dict[str, Value]:
    """Write a measurand as one flat row of keys, its code left out; what is empty has None."""
    band = spec.plausible
    return _empty_as_none(
        {
            "name": spec.name,
            "kind": spec.kind,
            "unit": spec.unit,
            "resolution": spec.resolution,
            "formula": spec.formula,
            "per": spec.per,
            "by_condition": spec.by_condition,
            "repeats": str(spec.repeats),
            "qualifiers": _sorted(spec.qualifiers),
            "required": spec.required,
            "one_of": spec.one_of,
            "criteria": spec.criteria,
            "medium": spec.medium,
            "method": spec.method,
            "nominal": spec.nominal,
            "nominal_from": spec.nominal_from,
            "reference_from": spec.reference_from,
            "own_baseline": spec.own_baseline,
            "grades": tuple(f"{each.value}: {each.name}" for each in spec.grades),
            "suggests_quarantine_on": _sorted(spec.suggests_quarantine_on),
            "low": band.low if band else None,
            "high": band.high if band else None,
            "hide_last": spec.hide_last,
            "prompt": spec.prompt,
            "kinds": _sorted(spec.kinds),
            "not_for_array_kinds": _sorted(spec.not_for_array_kinds),
            "sound_speed_correction": spec.sound_speed_correction,
            "yearly": spec.yearly,
            "note": spec.note,
        }
    )


def _sorted(names: Sequence[str] | None) -> tuple[str, ...]:
    return tuple(sorted(names or ()))


def _empty_as_none(flat: dict[str, Value]) -> dict[str, Value]:
    return {key: None if value in ("", ()) else value for key, value in flat.items()}


def _changes(before: dict[str, Value], after: dict[str, Value]) -> tuple[KeyChange, ...]:
    return tuple(
        KeyChange(key, before.get(key), after.get(key))
        for key in dict.fromkeys([*before, *after])
        if before.get(key) != after.get(key)
    )


def _measurands(
    old: Sequence[MeasurandSpec], new: Sequence[MeasurandSpec]
) -> tuple[MeasurandDifference, ...]:
    by_code = {spec.code: spec for spec in new}
    known = {spec.code for spec in old}
    laid = [_beside(spec, by_code.get(spec.code)) for spec in old]
    return (*laid, *(MeasurandDifference(None, spec) for spec in new if spec.code not in known))


def _beside(old: MeasurandSpec, new: MeasurandSpec | None) -> MeasurandDifference:
    if new is None:
        return MeasurandDifference(old, None)
    return MeasurandDifference(old, new, _changes(measurand_keys(old), measurand_keys(new)))


def _reordered(old: Sequence[MeasurandSpec], new: Sequence[MeasurandSpec]) -> bool:
    before, after = ([spec.code for spec in specs] for specs in (old, new))
    return [code for code in before if code in after] != [code for code in after if code in before]
