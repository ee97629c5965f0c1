"""Judging what a script sends: one object with numbers as text in, the parts of one answer out.

Nothing is known here of files or sentences; the kernel is the one that every check is judged by.
"""

from __future__ import annotations

import json
import re
from collections.abc import Mapping
from decimal import Decimal
from functools import lru_cache
from typing import Any

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import Criterion, from_json
from qa_tracker.core.decimals import MAX_PLACES, MAX_SCALED, MAX_TEXT, parse, plain
from qa_tracker.core.errors import Invalid
from qa_tracker.core.judgement import Judgement
from qa_tracker.core.verdict_kernel import RULES, Rule

NUMBERS = ("value", "nominal", "baseline", "reference", "quantity", "uncertainty")
KEYS = frozenset({*NUMBERS, "rule", "criterion"})
NEEDS_THE_REGISTER = ("grades", "coverage", "confidence")
"""Keys of a criterion that judge by words or by the set-ups of a baseline, which no line carries."""
NAMELESS_BANDS = "quantity"
CACHED_TEXT = 4096
"""Longest JSON text of a criterion that is remembered, so that hostile ones can't fill the memory."""

_NOT_FINITE = re.compile(r"[+-]?(?:nan|inf|infinity)", re.ASCII | re.IGNORECASE)
_DECIMAL = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?0*(?P<power>[0-9]+))?", re.ASCII)


def judge_line(given: Any) -> Judgement:
    """Judge one object.

    Parameters
    ----------
    given
        Parsed JSON: ``value``, ``nominal``, ``baseline``, ``reference``, ``quantity`` and ``uncertainty`` as decimal
        text, ``rule``, and ``criterion`` as in ``criteria.from_json`` (bands need no ``banded_by``). Null and blank
        text count as left out, also inside the criterion. NaN and infinities make the reading not assessable.

    Raises
    ------
    Invalid
        ``line.*`` and ``criterion.*`` codes, with the key as field; also ``rule.unknown`` and
        ``uncertainty.negative``.

    Examples
    --------
    >>> limit = {"basis": "nominal", "direction": "either", "remedial": {"absolute": "0.3"}}
    >>> judge_line({"value": "20.3", "nominal": "20.0", "criterion": limit}).verdict
    'conforming'
    """
    if not isinstance(given, Mapping):
        raise Invalid("line.not_object")
    for key in given:
        if key not in KEYS:
            shown = str(key)[:MAX_TEXT]
            raise Invalid("line.unknown_key", field=shown, key=shown, known=", ".join(sorted(KEYS)))
    criterion = _criterion_of(given.get("criterion"))
    numbers = {name: _number(given.get(name), name) for name in NUMBERS}
    uncertainty = numbers["uncertainty"]
    if uncertainty is not None and uncertainty.is_finite() and uncertainty < 0:
        raise Invalid("uncertainty.negative", field="uncertainty", uncertainty=plain(uncertainty))
    return judge(
        criterion,
        kind="number",
        rule=_rule(given.get("rule")),
        value=numbers["value"],
        nominal=numbers["nominal"],
        baseline=numbers["baseline"],
        reference=numbers["reference"],
        quantity=numbers["quantity"],
        uncertainty=uncertainty,
    )


def answer(judgement: Judgement) -> dict[str, str | float]:
    """Give what is answered but the sentence: exact decimals as text, of the level that decides.

    Departure, allowance and share are left out where nothing was compared, the probability where there is no
    uncertainty.

    Examples
    --------
    >>> limit = {"basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}}
    >>> answer(judge_line({"value": "145.4", "baseline": "152.0", "criterion": limit}))
    {'verdict': 'remedial', 'departure': '6.6', 'allowance': '6', 'used': '110.0'}
    """
    told: dict[str, str | float] = {"verdict": judgement.verdict}
    for name, number in (("departure", judgement.departure), ("allowance", judgement.allowance)):
        if number is not None:
            told[name] = plain(number, strip=True)
    if judgement.used is not None:
        told["used"] = plain(judgement.used)
    if judgement.probability is not None:
        told["probability"] = judgement.probability
    return told


def _rule(given: object) -> Rule:
    if given is None or given == "":
        return "simple"
    if given not in RULES:
        raise Invalid("rule.unknown", field="rule", rule=_shown(given), known=", ".join(RULES))
    return given


def _number(given: object, field: str) -> Decimal | None:
    """Read decimal text exactly; what is not finite stays so."""
    if given is None:
        return None
    if not isinstance(given, str):
        raise Invalid("line.not_number", field=field, value=_shown(given))
    text = given.strip()
    if not text:
        return None
    return Decimal("NaN") if _NOT_FINITE.fullmatch(text) else _decimal(text, field)


def _decimal(text: str, field: str) -> Decimal:
    """Read a finite decimal, refusing what is so long or so far from 1 that arithmetic would take the memory."""
    match = _DECIMAL.fullmatch(text)
    if match is None:
        raise Invalid("line.not_decimal", field=field, value=text[:MAX_TEXT])
    if len(text) <= MAX_TEXT and len(match["power"] or "") <= len(str(MAX_TEXT)):
        number = Decimal(text)
        if abs(number.adjusted()) <= MAX_TEXT:
            return number
    raise Invalid("line.too_long", field=field, value=text[:MAX_TEXT], digits=str(MAX_TEXT))


def _shown(given: object) -> str:
    """Write a value as the line has it; what is inside an object or a list is not looked at."""
    if isinstance(given, Mapping | list):
        return "{…}" if isinstance(given, Mapping) else "[…]"
    return (given if isinstance(given, str) else json.dumps(given))[:MAX_TEXT]


def _criterion_of(given: Any) -> Criterion:
    if not given:
        raise Invalid("line.no_criterion", field="criterion")
    try:
        text = json.dumps(given)
        return _criterion(text) if len(text) <= CACHED_TEXT else _criterion.__wrapped__(text)
    except RecursionError as error:
        raise Invalid("line.too_deep", field="criterion") from error


@lru_cache(maxsize=1024)
def _criterion(text: str) -> Criterion:
    """Read a criterion from its JSON text; a script's lines mostly repeat a few."""
    given = _in_full(json.loads(text), "criterion")
    if isinstance(given, dict) and given.get("bands"):
        given.setdefault("banded_by", NAMELESS_BANDS)
    return from_json(given)


def _in_full(given: Any, path: str) -> Any:
    """Write every number of a criterion out, as the published form has it ("1e1" is 10), and drop what is blank."""
    if isinstance(given, dict):
        for key in NEEDS_THE_REGISTER:
            if key in given:
                raise Invalid("line.needs_the_register", field=f"{path}.{key}")
        filled = {key: value for key, value in given.items() if value is not None and value != ""}
        return {key: _in_full(value, f"{path}.{key}") for key, value in filled.items()}
    if isinstance(given, list):
        return [_in_full(value, f"{path}[{place}]") for place, value in enumerate(given)]
    if isinstance(given, str) and _DECIMAL.fullmatch(given.strip()):
        return _limit_text(given.strip(), path)
    return given


def _limit_text(text: str, path: str) -> str:
    """Write a limit as a criterion may hold it; zeros at its end are dropped only where it is too long with them."""
    number = _decimal(text, path)
    for written in (plain(number), plain(number, strip=True)):
        try:
            return parse(written).entered
        except Invalid:
            continue
    digits, places = str(len(str(MAX_SCALED)) - 1), str(MAX_PLACES)
    raise Invalid("line.limit_too_long", field=path, value=text, digits=digits, places=places)
