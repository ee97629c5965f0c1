"""What a criterion is, and reading one from its JSON form.

A criterion says on what a limit stands (nominal, baseline, nothing, another reading), which way is worse, and
how far a remedial and a suspension level let a reading go. How a reading is judged against it is in
``conformity``; the arithmetic of an allowance is in ``allowances``.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from decimal import Decimal
from itertools import pairwise
from typing import Any, Literal, cast, get_args

from qa_tracker.core.decimals import parse, plain
from qa_tracker.core.errors import Invalid

Level = Literal["remedial", "suspension"]
Basis = Literal["nominal", "baseline", "none", "ratio"]
Direction = Literal["either", "above", "below"]
Governs = Literal["larger", "smaller", "either"]

LEVELS: tuple[Level, ...] = get_args(Level)
GRADE_VERDICTS = ("conforming", "remedial", "suspension")
_LEVEL_KEYS = frozenset(LEVELS)
_SPREAD_KEYS = frozenset({"coverage", "confidence"})
_LIMIT_KEYS = frozenset({"absolute", "percent", "governs"}) | _SPREAD_KEYS
_KEYS = frozenset({"basis", "direction", "strict", "bands", "banded_by", "grades"}) | _LEVEL_KEYS


@dataclass(frozen=True)
class Limit:
    """How far one level lets a departure go.

    Parameters
    ----------
    absolute
        In the measurand's unit; with basis none and one direction it is the limit itself and may be negative.
    percent
        Of the magnitude of the nominal, baseline or other reading.
    governs
        Where both are given: the ``"larger"`` or the ``"smaller"`` of the two is the allowance, or
        ``"either"`` may be tripped (arithmetically the smaller; the sentence differs).
    coverage, confidence
        In percent, instead of the two above: the allowance is half the width of the two-sided tolerance
        interval built from the set-ups of the device's own baseline (``OwnSpread``).
    """

    absolute: Decimal | None = None
    percent: Decimal | None = None
    governs: Governs = "larger"
    coverage: Decimal | None = None
    confidence: Decimal | None = None

    @property
    def of_own_spread(self) -> bool:
        """Whether the allowance comes from the spread of the device's own baseline."""
        return self.coverage is not None


@dataclass(frozen=True)
class Band:
    """The levels for a banding quantity in [start, below); None leaves that side open."""

    start: Decimal | None
    below: Decimal | None
    remedial: Limit | None
    suspension: Limit | None

    def holds(self, quantity: Decimal) -> bool:
        """Tell whether the quantity lies in the band: its start belongs to it, its end does not."""
        return (self.start is None or quantity >= self.start) and (
            self.below is None or quantity < self.below
        )


@dataclass(frozen=True)
class Criterion:
    """A limit shape with at least one level.

    Parameters
    ----------
    basis
        ``nominal`` or ``baseline``: the change from it is judged; ``none``: the value itself; ``ratio``: the
        value as a percentage of another reading of the same check.
    direction
        Which way is worse. ``below`` on a baseline judges loss; ``below`` on none is a lower limit.
    strict
        True: exactly the limit conforms (published limits read "more than"). False: the limit itself fails.
    bands, banded_by
        Levels by a named quantity (``test_frequency_mhz``) instead of one pair for all.
    grades
        Pairs of grade and verdict; then nothing else counts.
    """

    basis: Basis = "none"
    direction: Direction = "either"
    strict: bool = True
    remedial: Limit | None = None
    suspension: Limit | None = None
    bands: tuple[Band, ...] = ()
    banded_by: str = ""
    grades: tuple[tuple[str, str], ...] = ()

    def levels(self) -> tuple[tuple[Level, Limit], ...]:
        """List the levels there are, lower first."""
        pairs = zip(LEVELS, (self.remedial, self.suspension), strict=True)
        return tuple((level, limit) for level, limit in pairs if limit is not None)

    def alone(self, level: Level) -> Criterion:
        """Return it with this level only."""
        kept = {name: limit for name, limit in self.levels() if name == level}
        return replace(self, remedial=kept.get("remedial"), suspension=kept.get("suspension"))

    @property
    def of_own_spread(self) -> bool:
        """Whether its remedial level is a limit of the device's own spread (shape J)."""
        return self.remedial is not None and self.remedial.of_own_spread

    def at(self, quantity: Decimal) -> Criterion | None:
        """Return the criterion without bands that holds at a banding quantity; None outside every band."""
        for band in self.bands:
            if band.holds(quantity):
                return Criterion(self.basis, self.direction, self.strict, band.remedial, band.suspension)
        return None


def from_json(given: Mapping[str, Any], *, field: str = "criterion") -> Criterion:
    """Read a criterion from its JSON form, or refuse it naming the key.

    All numbers are decimal strings with a point. Null, an empty list and an empty object count as left out.
    ``strict`` left out is true, ``governs`` left out is ``larger``.

    Parameters
    ----------
    given
        The parsed JSON object.
    field
        Name that the refusals' fields start with.

    Raises
    ------
    Invalid
        A ``criterion.*`` code, with the path of the key as its field.

    Examples
    --------
    >>> from_json({"basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}}).remedial.absolute
    Decimal('6')
    """
    keys = _object(given, _KEYS, field)
    if "grades" in keys:
        return _graded(keys, field)
    basis = cast(Basis, _word(keys, "basis", get_args(Basis), field))
    direction = cast(Direction, _word(keys, "direction", get_args(Direction), field))
    strict = keys.get("strict", True)
    if not isinstance(strict, bool):
        raise Invalid(
            "criterion.unknown_word", field=f"{field}.strict", word=str(strict), known="true, false"
        )
    bands = _bands(keys, basis, direction, field)
    remedial, suspension = (None, None) if bands else _levels(keys, basis, direction, field)
    return Criterion(basis, direction, strict, remedial, suspension, bands, keys.get("banded_by", ""))


def to_json(criterion: Criterion) -> dict[str, Any]:
    """Write a criterion in its JSON form; ``from_json`` gives the same criterion back."""
    if criterion.grades:
        return {"grades": dict(criterion.grades)}
    written: dict[str, Any] = {
        "basis": criterion.basis,
        "direction": criterion.direction,
        "strict": criterion.strict,
        **_levels_json(criterion),
    }
    if criterion.bands:
        written |= {"bands": [_band_json(band) for band in criterion.bands], "banded_by": criterion.banded_by}
    return written


def _object(given: object, known: frozenset[str], field: str) -> dict[str, Any]:
    """Return the keys that were filled in, refusing those nobody knows."""
    if not isinstance(given, Mapping):
        raise Invalid("criterion.not_object", field=field)
    for key in given:
        if key not in known:
            raise Invalid(
                "criterion.unknown_key", field=f"{field}.{key}", key=str(key), known=", ".join(sorted(known))
            )
    return {key: value for key, value in given.items() if value is not None and value != [] and value != {}}


def _word(keys: dict[str, Any], key: str, known: tuple[str, ...], field: str) -> str:
    if key not in keys:
        raise Invalid("criterion.missing_key", field=f"{field}.{key}", key=key)
    if keys[key] not in known:
        raise Invalid(
            "criterion.unknown_word", field=f"{field}.{key}", word=str(keys[key]), known=", ".join(known)
        )
    return str(keys[key])


def _number(keys: dict[str, Any], key: str, field: str) -> Decimal | None:
    """Read a decimal string; a JSON number is refused because it may have been a binary float on its way."""
    if key not in keys:
        return None
    text, path = keys[key], f"{field}.{key}"
    if not isinstance(text, str) or "," in text:
        raise Invalid("criterion.not_decimal", field=path, value=str(text))
    try:
        return parse(text, field=path).decimal
    except Invalid as refusal:
        raise Invalid("criterion.not_decimal", field=path, value=text) from refusal


def _limit(
    keys: dict[str, Any], level: Level, basis: Basis, direction: Direction, field: str
) -> Limit | None:
    if level not in keys:
        return None
    path = f"{field}.{level}"
    parts = _object(keys[level], _LIMIT_KEYS, path)
    if parts.keys() & _SPREAD_KEYS:
        return _own_spread_limit(parts, level, basis, path)
    absolute, percent = _number(parts, "absolute", path), _number(parts, "percent", path)
    _check_parts(absolute, percent, basis, path)
    if direction == "either" and absolute is not None and absolute < 0:
        raise Invalid("criterion.negative_either_way", field=f"{path}.absolute", value=plain(absolute))
    governs = _word(parts, "governs", get_args(Governs), path) if "governs" in parts else "larger"
    both = absolute is not None and percent is not None
    return Limit(absolute, percent, cast(Governs, governs) if both else "larger")


def _own_spread_limit(parts: dict[str, Any], level: Level, basis: Basis, path: str) -> Limit:
    """Read a limit of the device's own spread: both shares, on a baseline, never for suspension."""
    if basis != "baseline" or level != "remedial":
        raise Invalid("criterion.own_spread_place", field=path)
    if others := parts.keys() - _SPREAD_KEYS:
        raise Invalid("criterion.own_spread_beside", field=path, keys=", ".join(sorted(others)))
    shares = [_number(parts, key, path) for key in ("coverage", "confidence")]
    for key, share in zip(("coverage", "confidence"), shares, strict=True):
        if share is None or not 0 < share < 100:
            raise Invalid(
                "criterion.own_spread_share",
                field=f"{path}.{key}",
                value="" if share is None else plain(share),
            )
    return Limit(coverage=shares[0], confidence=shares[1])


def _check_parts(absolute: Decimal | None, percent: Decimal | None, basis: Basis, path: str) -> None:
    """Refuse a limit of nothing, of the wrong kind for its basis, or below zero where that means nothing."""
    if absolute is None and percent is None:
        raise Invalid("criterion.empty_limit", field=path)
    if basis == "none" and percent is not None:
        raise Invalid("criterion.percent_without_reference", field=f"{path}.percent")
    if basis == "ratio" and absolute is not None:
        raise Invalid("criterion.absolute_with_ratio", field=f"{path}.absolute")
    if percent is not None and percent < 0:
        raise Invalid("criterion.negative", field=f"{path}.percent", value=plain(percent))
    if basis != "none" and absolute is not None and absolute < 0:
        raise Invalid("criterion.negative", field=f"{path}.absolute", value=plain(absolute))


def _levels(
    keys: dict[str, Any], basis: Basis, direction: Direction, field: str
) -> tuple[Limit | None, Limit | None]:
    remedial, suspension = (_limit(keys, level, basis, direction, field) for level in LEVELS)
    if remedial is None and suspension is None:
        raise Invalid("criterion.no_level", field=field)
    if remedial is not None and suspension is not None:
        downwards = direction == "below" and basis in ("none", "ratio")
        pairs = ((remedial.absolute, suspension.absolute), (remedial.percent, suspension.percent))
        for inner, outer in pairs:
            if inner is not None and outer is not None and (outer >= inner if downwards else outer <= inner):
                raise Invalid(
                    "criterion.not_beyond", field=field, remedial=plain(inner), suspension=plain(outer)
                )
    return remedial, suspension


def _bands(keys: dict[str, Any], basis: Basis, direction: Direction, field: str) -> tuple[Band, ...]:
    """Read the bands in ascending order; gaps are allowed (a reading there is not assessable)."""
    rows = keys.get("bands", [])
    if not isinstance(rows, list):
        raise Invalid("criterion.not_list", field=f"{field}.bands")
    if bool(rows) != ("banded_by" in keys):
        raise Invalid("criterion.bands_and_quantity", field=f"{field}.banded_by")
    if rows and (not isinstance(keys["banded_by"], str) or not keys["banded_by"].isidentifier()):
        raise Invalid("criterion.banding_name", field=f"{field}.banded_by", name=str(keys["banded_by"]))
    if rows and keys.keys() & _LEVEL_KEYS:
        raise Invalid("criterion.levels_beside_bands", field=f"{field}.bands")
    bands = [_band(row, basis, direction, f"{field}.bands[{n}]") for n, row in enumerate(rows)]
    bands.sort(key=lambda band: (band.start is not None, band.start or Decimal(0)))
    for lower, upper in pairwise(bands):
        if lower.below is None or upper.start is None or lower.below > upper.start:
            raise Invalid(
                "criterion.bands_overlap", field=f"{field}.bands", **_ends(lower), **_ends(upper, "other_")
            )
    return tuple(bands)


def _band(given: object, basis: Basis, direction: Direction, path: str) -> Band:
    keys = _object(given, _LEVEL_KEYS | {"from", "below"}, path)
    start, below = _number(keys, "from", path), _number(keys, "below", path)
    if start is not None and below is not None and start >= below:
        raise Invalid("criterion.band_reversed", field=path, start=plain(start), below=plain(below))
    return Band(start, below, *_levels(keys, basis, direction, path))


def _ends(band: Band, prefix: str = "") -> dict[str, str]:
    ends = (("start", band.start), ("below", band.below))
    return {prefix + name: "" if end is None else plain(end) for name, end in ends}


def _graded(keys: dict[str, Any], field: str) -> Criterion:
    """Read an ordered grade: each grade a person may give, and its verdict."""
    if others := keys.keys() - {"grades"}:
        raise Invalid(
            "criterion.grades_beside_limits", field=f"{field}.grades", keys=", ".join(sorted(others))
        )
    grades = keys["grades"]
    if not isinstance(grades, Mapping):
        raise Invalid("criterion.not_object", field=f"{field}.grades")
    for grade in grades:
        _word(dict(grades), grade, GRADE_VERDICTS, f"{field}.grades")
    if set(grades.values()) == {"conforming"}:
        raise Invalid("criterion.no_level", field=f"{field}.grades")
    return Criterion(grades=tuple((str(grade), str(verdict)) for grade, verdict in grades.items()))


def _levels_json(levelled: Criterion | Band) -> dict[str, Any]:
    pairs = zip(LEVELS, (levelled.remedial, levelled.suspension), strict=True)
    return {level: _limit_json(limit) for level, limit in pairs if limit is not None}


def _limit_json(limit: Limit) -> dict[str, str]:
    parts = [(name, getattr(limit, name)) for name in ("absolute", "percent", "coverage", "confidence")]
    written = {name: plain(number) for name, number in parts if number is not None}
    both = limit.absolute is not None and limit.percent is not None
    return written | ({"governs": limit.governs} if both else {})


def _band_json(band: Band) -> dict[str, Any]:
    ends = (("from", band.start), ("below", band.below))
    return {name: None if end is None else plain(end) for name, end in ends} | _levels_json(band)
