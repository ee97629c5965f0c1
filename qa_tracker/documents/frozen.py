"""Frozen content to canonical bytes and back; the SHA-256 of these bytes names the content."""

from __future__ import annotations

import json
from dataclasses import asdict, fields, is_dataclass
from datetime import date
from decimal import Decimal, InvalidOperation
from functools import cache
from types import UnionType
from typing import Any, get_args, get_origin, get_type_hints

from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import Invalid
from qa_tracker.core.figures import VERDICT_COLOURS
from qa_tracker.documents.content import SCHEMA, DeviceDossier
from qa_tracker.documents.labels import ENGLISH


def content_bytes(content: DeviceDossier) -> bytes:
    """Write the content as the canonical JSON of RFC 8785: text and yes/no only, names in order."""
    require_complete(content)
    return canonical(asdict(content))


def from_bytes(data: bytes) -> DeviceDossier:
    """Read what :func:`content_bytes` wrote; anything else is refused, never guessed at."""
    try:
        plain = json.loads(data)
        if plain.get("schema") != SCHEMA:
            raise Invalid("dossier.schema_unknown", schema=str(plain.get("schema", "")), known=SCHEMA)
        content: DeviceDossier = _built(DeviceDossier, plain)
    except (ValueError, TypeError, AttributeError, KeyError) as error:
        raise Invalid("dossier.content_unreadable", problem=str(error)) from error
    require_complete(content)
    return content


def require_complete(content: DeviceDossier) -> None:
    """Refuse a missing label, a verdict without a mark, a day or amount that can't be read, before drawing."""
    _require_labels_and_verdicts(content)
    for check in content.checks:
        for day in filter(None, (check.due_on, check.measured_at[:10])):
            _require_day(day)
        for reading in check.readings:
            line = reading.line
            for amount in filter(None, (line.origin, line.value, line.remedial, line.suspension)):
                _require_amount(amount)


def _require_day(text: str) -> None:
    try:
        date.fromisoformat(text)
    except ValueError as error:
        raise Invalid("dossier.day_unreadable", day=text) from error


def _require_amount(text: str) -> None:
    try:
        finite = Decimal(text).is_finite()
    except InvalidOperation:
        finite = False
    if not finite:
        raise Invalid("dossier.amount_unreadable", amount=text)


def _require_labels_and_verdicts(content: DeviceDossier) -> None:
    missing = sorted(ENGLISH.keys() - content.labels.keys())
    if missing:
        raise Invalid("dossier.label_missing", labels=", ".join(missing))
    verdicts = {check.verdict for check in content.checks if check.verdict}
    verdicts |= {reading.verdict for check in content.checks for reading in check.readings if reading.verdict}
    unknown = sorted(verdicts - VERDICT_COLOURS.keys())
    if unknown:
        raise Invalid("dossier.verdict_unknown", verdicts=", ".join(unknown))


@cache
def _hints(kind: type) -> dict[str, Any]:
    return get_type_hints(kind)


def _built(kind: Any, plain: Any) -> Any:
    """Build a value of a declared kind: a dataclass, tuples of one, an optional one, or a plain value."""
    if get_origin(kind) is tuple:
        return tuple(_built(get_args(kind)[0], item) for item in plain)
    if isinstance(kind, UnionType):
        return None if plain is None else _built(get_args(kind)[0], plain)
    if is_dataclass(kind):
        return _built_dataclass(kind, plain)
    if kind in (str, bool) and type(plain) is not kind:
        raise TypeError(f"{plain!r} where {kind.__name__} is expected")
    return plain


def _built_dataclass(kind: Any, plain: dict[str, Any]) -> Any:
    unknown = sorted(plain.keys() - {field.name for field in fields(kind)})
    if unknown:
        raise KeyError(f"{kind.__name__} has no {', '.join(unknown)}")
    hints = _hints(kind)
    return kind(**{name: _built(hints[name], value) for name, value in plain.items()})
