"""What differs between two editions of a set of criteria, criterion by criterion and key by key.

Nothing is judged here: two limits that allow the same by other numbers differ, and ``1.5`` and ``1.50`` do not.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from typing import Literal, TypeAlias

from qa_tracker.core.criteria import LEVELS, Band, Criterion, Limit
from qa_tracker.core.library_specs import CriterionSpec

Value: TypeAlias = str | Decimal | bool | tuple[str, ...] | None
"""What stands at a key; None where nothing does."""
State = Literal["added", "removed", "changed", "same"]

LIMIT_KEYS = ("absolute", "percent", "governs", "coverage", "confidence")


@dataclass(frozen=True)
class KeyChange:
    """One key at which two editions of a criterion differ."""

    key: str
    old: Value
    new: Value


@dataclass(frozen=True)
class Difference:
    """One criterion of two editions side by side; ``old`` or ``new`` is None where an edition lacks it."""

    old: CriterionSpec | None
    new: CriterionSpec | None
    changes: tuple[KeyChange, ...] = ()

    @property
    def state(self) -> State:
        """In one word what became of it."""
        if self.old is None:
            return "added"
        if self.new is None:
            return "removed"
        return "changed" if self.changes else "same"


def differences(
    old: Sequence[CriterionSpec], new: Sequence[CriterionSpec], stand_ins: Mapping[str, str] | None = None
) -> tuple[Difference, ...]:
    """Lay two editions side by side: each criterion of the old one in its order, then what the new one adds.

    Parameters
    ----------
    old, new
        The criteria of each edition; either may be empty, then all of the other are added or removed.
    stand_ins
        Old id to the new id it is compared with, for sets that call the same limit by other names. An id that
        both have is compared with itself.

    Returns
    -------
    tuple of Difference
        A criterion that is the same in both is there too, without changes.

    Examples
    --------
    >>> differences((), ())
    ()
    """
    by_id = {spec.id: spec for spec in new}
    laid: list[Difference] = []
    for spec in old:
        other = by_id.pop(spec.id, None) or by_id.pop((stand_ins or {}).get(spec.id, ""), None)
        laid.append(Difference(spec, other, changes(spec, other) if other else ()))
    return (*laid, *(Difference(None, spec) for spec in new if spec.id in by_id))


def stand_ins(named: Iterable[Sequence[str]], old: Iterable[str], new: Iterable[str]) -> dict[str, str]:
    """Find which criteria of two sets stand for one another: those that procedures name for one measurand.

    Parameters
    ----------
    named
        For each measurand the ids of its criteria, in order of preference.
    old, new
        The ids of the two sets; an id that both have stands for itself and is left out.

    Returns
    -------
    dict
        Old id to the first new id named beside it; empty where no measurand names criteria of both.

    Examples
    --------
    >>> stand_ins([("A-VERT", "B-AX"), ("A-PEN",)], ["A-VERT", "A-PEN"], ["B-AX", "B-LAT"])
    {'A-VERT': 'B-AX'}
    """
    of_old, of_new = set(old), set(new)
    found: dict[str, str] = {}
    for ids in named:
        other = next((each for each in ids if each in of_new and each not in of_old), None)
        for each in ids:
            if other is not None and each in of_old and each not in of_new:
                found.setdefault(each, other)
    return found


def changes(old: CriterionSpec, new: CriterionSpec) -> tuple[KeyChange, ...]:
    """Name every key at which two criteria differ, the limit itself first.

    Bands are compared in ascending order, the first with the first.

    Parameters
    ----------
    old, new
        Two criteria; their ids are not compared.
    """
    before, after = keys_of(old), keys_of(new)
    return tuple(
        KeyChange(key, before.get(key), after.get(key))
        for key in dict.fromkeys([*before, *after])
        if before.get(key) != after.get(key)
    )


def keys_of(spec: CriterionSpec) -> dict[str, Value]:
    """Write a criterion as one flat row of keys; what is empty has None.

    Examples
    --------
    >>> from qa_tracker.core.library_specs import ByLevel
    >>> loss = Criterion("baseline", "below", True, Limit(Decimal("6")))
    >>> spec = CriterionSpec("PEN", "Loss", "D", "mm", "phantom", ("eye",), "", ByLevel("memory"), ByLevel(), (),
    ...     False, (), loss, "")
    >>> keys_of(spec)["remedial.absolute"], keys_of(spec)["standing.remedial"], keys_of(spec)["note"]
    (Decimal('6'), 'memory', None)
    """
    flat: dict[str, Value] = {
        **_limit_keys(spec.criterion),
        "unit": spec.unit,
        "medium": spec.medium,
        "methods": spec.methods,
        "not_for_array_kinds": spec.not_for_array_kinds,
        **{f"applies_when.{name}": value for name, value in spec.applies_when},
        "electrical": spec.electrical,
        "shape": spec.shape,
        "measurands": spec.measurands,
        "name": spec.name,
        **{f"standing.{level}": getattr(spec.standing, level) for level in LEVELS},
        **{f"own_words.{level}": getattr(spec.own_words, level) for level in LEVELS},
        "source": spec.source,
        "note": spec.note,
    }
    return {key: None if value in ("", ()) else value for key, value in flat.items()}


def _limit_keys(criterion: Criterion) -> dict[str, Value]:
    if criterion.grades:
        return {f"grades.{grade}": verdict for grade, verdict in criterion.grades}
    flat: dict[str, Value] = {
        "basis": criterion.basis,
        "direction": criterion.direction,
        "strict": criterion.strict,
        **_levels(criterion, ""),
        "banded_by": criterion.banded_by,
    }
    for number, band in enumerate(criterion.bands):
        place = f"bands[{number}]."
        flat |= {f"{place}from": band.start, f"{place}below": band.below, **_levels(band, place)}
    return flat


def _levels(part: Criterion | Band, place: str) -> dict[str, Value]:
    return {
        f"{place}{level}.{key}": _of_limit(getattr(part, level), key)
        for level in LEVELS
        for key in LIMIT_KEYS
    }


def _of_limit(limit: Limit | None, key: str) -> Value:
    """One part of a limit; which part governs says something only where there are two."""
    if limit is None or (key == "governs" and None in (limit.absolute, limit.percent)):
        return None
    found: Value = getattr(limit, key)
    return found
