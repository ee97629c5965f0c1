"""Canonical JSON bytes: the same value always gives the same bytes, so that a hash can stand for it."""

from __future__ import annotations

import json
from collections.abc import Collection

import rfc8785

from qa_tracker.core.errors import Invalid

LARGEST_INTEGER = 2**53 - 1
DEEPEST_NESTING = 64


def canonical(value: object) -> bytes:
    r"""Serialise a value as the canonical JSON of RFC 8785.

    Names are sorted by their UTF-16 code units (RFC 8785, 3.2.3), no space is written, and the text is UTF-8.

    Source: RFC 8785, section 3.2.

    Parameters
    ----------
    value
        Text, integers up to 2^53 - 1 in size, booleans, ``None``, lists or tuples and dicts with text names,
        nested at most 64 deep. Measured values are text, exactly as entered.

    Returns
    -------
    bytes
        An empty list gives ``b"[]"``, ``None`` gives ``b"null"``. A binary fraction (``float``, also a whole or
        non-finite one) is refused anywhere inside, as is anything JSON has no form for.

    Examples
    --------
    >>> canonical({"unit": "mm", "entered": "12.50", "places": 2})
    b'{"entered":"12.50","places":2,"unit":"mm"}'
    """
    plainly_ordered = _check_exact_form(value, depth=0)
    try:
        if plainly_ordered:
            return _PLAIN.encode(value).encode()
        return rfc8785.dumps(value)  # type: ignore[no-any-return, arg-type, unused-ignore]  # checked above
    except (ValueError, TypeError) as error:
        raise Invalid("canonical.not_json", what=str(error)) from error


def _check_exact_form(value: object, depth: int) -> bool:
    """Refuse what has no exact form, and tell whether every name orders the same by code point and code unit.

    Then Python's own writer gives the bytes of RFC 8785, many times faster: names sort alike, whole numbers and
    escapes are written alike, and there are no fractions.
    """
    if isinstance(value, str) or value is None:
        return True
    if depth > DEEPEST_NESTING:
        raise Invalid("canonical.too_deep", most=DEEPEST_NESTING)
    if isinstance(value, float):
        raise Invalid("canonical.binary_fraction", value=repr(value))
    if isinstance(value, int):
        if abs(value) > LARGEST_INTEGER:
            raise Invalid("canonical.integer_too_large", value=str(value), most=LARGEST_INTEGER)
        return type(value) in (int, bool)
    if isinstance(value, dict):
        named = _check_members(value, depth + 1)
        plain_names = named and all([type(name) is str and name.isascii() for name in value])
        return _check_members(value.values(), depth + 1) and plain_names
    if isinstance(value, list | tuple):
        return _check_members(value, depth + 1)
    return False


def _check_members(members: Collection[object], depth: int) -> bool:
    """The same of members; most are texts, which need no look at each."""
    if _TEXTS.issuperset(map(type, members)):
        return True
    return all([_check_exact_form(member, depth) for member in members])


_TEXTS = frozenset({str, type(None)})
_PLAIN = json.JSONEncoder(ensure_ascii=False, check_circular=False, sort_keys=True, separators=(",", ":"))
