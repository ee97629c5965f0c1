"""Canonical JSON bytes: the same value always gives the same bytes, so that a hash can stand for it."""

from __future__ import annotations

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
    _refuse_what_has_no_exact_form(value, depth=0)
    try:
        return rfc8785.dumps(value)  # type: ignore[no-any-return, arg-type, unused-ignore]
    except ValueError as error:
        raise Invalid("canonical.not_json", what=str(error)) from error


def _refuse_what_has_no_exact_form(value: object, depth: int) -> None:
    if depth > DEEPEST_NESTING:
        raise Invalid("canonical.too_deep", most=DEEPEST_NESTING)
    if isinstance(value, float):
        raise Invalid("canonical.binary_fraction", value=repr(value))
    if isinstance(value, int) and abs(value) > LARGEST_INTEGER:
        raise Invalid("canonical.integer_too_large", value=str(value), most=LARGEST_INTEGER)
    for member in _members(value):
        _refuse_what_has_no_exact_form(member, depth + 1)


def _members(value: object) -> tuple[object, ...]:
    if isinstance(value, dict):
        return (*value.keys(), *value.values())
    if isinstance(value, list | tuple):
        return tuple(value)
    return ()
