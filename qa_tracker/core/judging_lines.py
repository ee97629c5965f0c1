"""Judging what a script sends: one object with numbers as text in, the parts of one answer out.

Nothing is known here of files or sentences; the kernel is the one that every check is judged by.
"""

from __future__ import annotations

import json
import re
from collections.abc import Mapping
from decimal import Decimal
from functools import lru_cache
from typing import Any, cast

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import Criterion, from_json
from qa_tracker.core.decimals import MAX_TEXT, plain
from qa_tracker.core.errors import Invalid
from qa_tracker.core.judgement import Judgement
from qa_tracker.core.verdict_kernel import Rule

NUMBERS = ("value", "nominal", "baseline", "reference", "quantity", "uncertainty")
KEYS = frozenset({*NUMBERS, "rule", "criterion"})
NOT_FINITE = re.compile(r"[+-]?(?:nan|inf|infinity)", re.ASCII | re.IGNORECASE)
DECIMAL = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?", re.ASCII)
NAMELESS_BANDS = "quantity"


def judge_line(given: Any) -> Judgement:
    """Judge one object.

    Parameters
    ----------
    given
        Parsed JSON: ``value``, ``nominal``, ``baseline``, ``reference``, ``quantity`` and ``uncertainty`` as decimal
        text, ``rule``, and ``criterion`` as in ``criteria.from_json`` (bands need no ``banded_by``). Null and the
        empty text count as left out; NaN and infinities make the reading not assessable.

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
            raise Invalid("line.unknown_key", field=str(key), key=str(key), known=", ".join(sorted(KEYS)))
    if not given.get("criterion"):
        raise Invalid("line.no_criterion", field="criterion")
    criterion = _criterion(json.dumps(given["criterion"], sort_keys=True))
    numbers = {name: _number(given.get(name), name) for name in NUMBERS}
    rule = given.get("rule") or "simple"
    if not isinstance(rule, str):
        raise Invalid("line.not_text", field="rule", value=str(rule))
    return judge(
        criterion,
        kind="number",
        rule=cast(Rule, rule),
        value=numbers["value"],
        nominal=numbers["nominal"],
        baseline=numbers["baseline"],
        reference=numbers["reference"],
        quantity=numbers["quantity"],
        uncertainty=numbers["uncertainty"],
    )


def answer(judgement: Judgement) -> dict[str, str | float]:
    """Give what is answered but the sentence: exact decimals as text, of the level that decides.

    Examples
    --------
    >>> limit = {"basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}}
    >>> answer(judge_line({"value": "145.4", "baseline": "152.0", "criterion": limit}))
    {'verdict': 'remedial', 'departure': '6.6', 'allowance': '6', 'used': '110.0'}
    """
    told: dict[str, str | float] = {"verdict": judgement.verdict}
    for name in ("departure", "allowance"):
        number = getattr(judgement, name)
        if number is not None:
            told[name] = plain(number, strip=True)
    if judgement.used is not None:
        told["used"] = plain(judgement.used)
    if judgement.probability is not None:
        told["probability"] = judgement.probability
    return told


def _number(given: object, field: str) -> Decimal | None:
    """Read decimal text exactly; what is not finite stays so."""
    if given is None or given == "":
        return None
    if not isinstance(given, str):
        raise Invalid("line.not_text", field=field, value=str(given)[:MAX_TEXT])
    text = given.strip()
    if NOT_FINITE.fullmatch(text):
        return Decimal("NaN")
    if not DECIMAL.fullmatch(text):
        raise Invalid("line.not_decimal", field=field, value=text[:MAX_TEXT])
    number = Decimal(text)
    if max(len(text), abs(number.adjusted()) if number else 0) > MAX_TEXT:
        raise Invalid("line.too_long", field=field, value=text[:MAX_TEXT], digits=str(MAX_TEXT))
    return number


@lru_cache(maxsize=4096)
def _criterion(text: str) -> Criterion:
    """Read a criterion; a script's lines mostly repeat a few."""
    given = json.loads(text)
    if isinstance(given, dict):
        given = _in_full(given)
        if given.get("bands") and not given.get("banded_by"):
            given["banded_by"] = NAMELESS_BANDS
    return from_json(given)


def _in_full(given: Any) -> Any:
    """Write every number of a criterion out, as the published form has it: "1e1" is 10."""
    if isinstance(given, dict):
        return {key: _in_full(value) for key, value in given.items()}
    if isinstance(given, list):
        return [_in_full(value) for value in given]
    if isinstance(given, str) and DECIMAL.fullmatch(given.strip()) and len(given) <= MAX_TEXT:
        number = Decimal(given.strip())
        return plain(number) if abs(number.adjusted()) <= MAX_TEXT else given
    return given
