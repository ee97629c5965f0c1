"""Random lines answered like a small model in fractions, written from the rules alone.

Values lie at the limits, a unit of the last place to each side of them, where a guard band ends, and anywhere.
"""

from __future__ import annotations

import random
from fractions import Fraction
from statistics import NormalDist

import pytest

from qa_tracker.core.judging_lines import answer, judge_line

LINES = 2000
UNIT = Fraction(1, 10**6)
ORDER = (
    ("conforming", ""), ("indeterminate", "remedial"), ("not_assessable", ""), ("remedial", "remedial"),
    ("indeterminate", "suspension"), ("suspension", "suspension"),
)  # fmt: skip
OF = {"nominal": "nominal", "baseline": "baseline", "ratio": "reference"}


def text(number: Fraction) -> str:
    """Write a fraction that is a decimal as one, zeros at the end taken off."""
    scaled, rest = divmod(abs(number) * 10**15, 1)
    assert not rest
    digits = str(scaled).rjust(16, "0")
    return ("-" if number < 0 else "") + f"{digits[:-15]}.{digits[-15:]}".rstrip("0").rstrip(".")


def decimal(chance: random.Random, most: int) -> Fraction:
    places = 10 ** chance.choice((0, 1, 2, 3))
    return Fraction(chance.randint(1, most * places), places)


def level_pair(chance: random.Random, basis: str, downwards: bool) -> dict[str, dict[str, str]]:
    """Both levels or one; the suspension level is beyond the remedial one, part by part."""
    parts = {"none": ["absolute"], "ratio": ["percent"]}.get(basis) or chance.choice(
        (["absolute"], ["percent"], ["absolute", "percent"])
    )
    found: dict[str, dict[str, str]] = {"remedial": {}, "suspension": {}}
    for part in parts:
        pair = sorted({decimal(chance, 30) / 10, decimal(chance, 30) / 10 + 4}, reverse=downwards)
        for level, number in zip(found.values(), pair, strict=True):
            level[part] = text(number)
    for level in found.values():
        level["governs"] = chance.choice(("larger", "smaller", "either"))
    if chance.random() < 0.3:
        del found[chance.choice(("remedial", "suspension"))]
    return found


def line(chance: random.Random) -> dict:
    basis = chance.choice(("nominal", "baseline", "none", "ratio"))
    direction = chance.choice(("above", "below") if basis == "ratio" else ("either", "above", "below"))
    levels = level_pair(chance, basis, direction == "below" and basis in ("none", "ratio"))
    given = {
        "criterion": {"basis": basis, "direction": direction, "strict": chance.random() < 0.5, **levels},
        "rule": chance.choice(("simple", "simple", "guarded", "zones")),
        **{name: text(decimal(chance, 200)) for name in OF.values()},
    }
    if chance.random() < 0.2:
        given["baseline"] = "-" + given["baseline"]
    if given["rule"] != "simple" or chance.random() < 0.3:
        given["uncertainty"] = text(decimal(chance, 20) / 10)
    if chance.random() < 0.2:
        given |= {
            "quantity": chance.choice(("2.999", "3", "7")),
            "criterion": banded(given["criterion"], levels),
        }
    return given | {"value": text(near_a_limit(chance, given))}


def banded(criterion: dict, levels: dict) -> dict:
    flat = {key: each for key, each in criterion.items() if key not in levels}
    return flat | {"bands": [{"from": "3", "below": "7", **levels}, {"below": "3", **levels}]}


def near_a_limit(chance: random.Random, given: dict) -> Fraction:
    """At a limit, just beside it, at the end of its guard band, or anywhere."""
    level = chance.choice(list(levels_of(given) or [{"absolute": "1"}]))
    reference = reference_of(given) or Fraction(100)
    bound = allowed(level, reference) + chance.choice((-1, 0, 0, 1)) * Fraction(given.get("uncertainty", 0))
    if given["criterion"]["basis"] in ("nominal", "baseline"):
        bound = reference + chance.choice((-1, 1)) * bound
    return bound + chance.choice((-1, 0, 0, 1)) * UNIT + (decimal(chance, 10) if chance.random() < 0.2 else 0)


def levels_of(given: dict) -> list[dict]:
    """The levels that hold, lower first, each with its name."""
    source = given["criterion"]
    if "bands" in source:
        quantity = Fraction(given["quantity"])
        holding = [
            band for band in source["bands"]
            if Fraction(band.get("from", "0")) <= quantity < Fraction(band["below"])
        ]  # fmt: skip
        source = holding[0] if holding else {}
    return [source[name] | {"name": name} for name in ("remedial", "suspension") if name in source]


def reference_of(given: dict) -> Fraction | None:
    basis = given["criterion"]["basis"]
    return Fraction(given[OF[basis]]) if basis in OF else None


def allowed(level: dict, reference: Fraction | None) -> Fraction:
    sizes = [Fraction(level["absolute"])] if "absolute" in level else []
    if "percent" in level:
        sizes.append(Fraction(level["percent"]) * abs(reference) / 100)
    return max(sizes) if level.get("governs", "larger") == "larger" else min(sizes)


def expected(given: dict) -> dict[str, str]:
    """What the line is answered with, but for sentence and probability."""
    levels, reference, value = levels_of(given), reference_of(given), Fraction(given["value"])
    if not levels:
        return {"verdict": "not_assessable"}
    found = worst_of(given)
    departure, share = departure_of(given), used(given, allowed(levels[0], reference), value)
    told = {
        "verdict": found[0],
        "departure": text(departure),
        "allowance": text(allowed(deciding(given), reference)),
    }
    return told | ({} if share is None else {"used": share})


def worst_of(given: dict) -> tuple[str, str]:
    return max((found_at(given, level, reference_of(given)) for level in levels_of(given)), key=ORDER.index)


def deciding(given: dict) -> dict:
    """The level that decided, or the first."""
    levels = levels_of(given)
    return next((level for level in levels if level["name"] == worst_of(given)[1]), levels[0])


def is_lower(given: dict) -> bool:
    return given["criterion"]["direction"] == "below" and given["criterion"]["basis"] in ("none", "ratio")


def departure_of(given: dict) -> Fraction:
    value, criterion = Fraction(given["value"]), given["criterion"]
    change = value - reference_of(given) if criterion["basis"] in ("nominal", "baseline") else value
    if criterion["direction"] == "either":
        return abs(change)
    return -change if criterion["direction"] == "below" and not is_lower(given) else change


def found_at(given: dict, level: dict, reference: Fraction | None) -> tuple[str, str]:
    """What one level says: y against L, both turned round for a lower limit."""
    sign = -1 if is_lower(given) else 1
    over = sign * (departure_of(given) - allowed(level, reference))
    moved = Fraction(given.get("uncertainty", 0)) if given["rule"] != "simple" else Fraction(0)
    strict = given["criterion"]["strict"]
    outside, doubtful = over - (moved if given["rule"] == "zones" else -moved), over + moved
    if outside > 0 or (outside == 0 and not strict):
        return level["name"], level["name"]
    if doubtful > 0 or (doubtful == 0 and not strict):
        return "indeterminate", level["name"]
    return "conforming", ""


def used(given: dict, allowance: Fraction, value: Fraction) -> str | None:
    part, whole = (allowance, value) if is_lower(given) else (departure_of(given), allowance)
    if whole <= 0:
        return None
    tenths = max(round(1000 * part / whole), 0)
    return f"{tenths // 10}.{tenths % 10}"


def probability(given: dict) -> float:
    """Of conformity with the level that decided, else the first: normal, with half the expanded uncertainty."""
    known = NormalDist(0, float(Fraction(given["uncertainty"]) / 2))
    size, value = allowed(deciding(given), reference_of(given)), Fraction(given["value"])
    if is_lower(given):
        return known.cdf(float(value - size))
    departure = departure_of(given)
    within = known.cdf(float(size - departure))
    return (
        within - known.cdf(float(-size - departure))
        if given["criterion"]["direction"] == "either"
        else within
    )


def test_answers_are_those_of_fractions_for_random_lines():
    chance, verdicts = random.Random(20261201), set()
    for given in (line(chance) for _ in range(LINES)):
        told, wanted = answer(judge_line(given)), expected(given)
        given_probability = told.pop("probability", None)
        assert told == wanted, given
        compared = "departure" in told and "uncertainty" in given
        assert (given_probability is not None) == compared
        if compared:
            assert given_probability == pytest.approx(probability(given), abs=1e-12), given
        verdicts.add(told["verdict"])
    assert verdicts == {verdict for verdict, _ in ORDER}
