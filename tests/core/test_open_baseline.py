"""A baseline that is only a bound: a verdict is given only where every baseline it can stand for gives the same."""

from __future__ import annotations

import doctest
import random
from decimal import Decimal as D

import numpy as np
import pytest

from qa_tracker.core import open_baseline
from qa_tracker.core.conformity import judge, severity
from qa_tracker.core.criteria import from_json
from qa_tracker.core.judged_again import Kept, verdict_ranks
from qa_tracker.core.open_baseline import AgainstBound, code_against_bound
from qa_tracker.core.verdict_kernel import Columns, verdict_codes

C_, R_, S_, I_ = "conforming", "remedial", "suspension", "indeterminate"


def _on_baseline(direction, remedial, suspension=None, **more):
    given = {"basis": "baseline", "direction": direction, "remedial": remedial, "suspension": suspension}
    return from_json(given | more)


LOSS = _on_baseline("below", {"absolute": "6"}, {"absolute": "10"})
RISE = _on_baseline("above", {"absolute": "6"}, {"absolute": "10"})
SHARE = _on_baseline("below", {"percent": "100"})
ROWS = {
    "loss_may_be_larger": (LOSS, "158", ">160", I_, "suspension"),
    "remedial_surely": (LOSS, "153", ">160", I_, "suspension"),
    "suspension_surely": (LOSS, "150", ">160", S_, "suspension"),
    "two_bounds": (LOSS, ">160", ">160", I_, "suspension"),
    "gain": (LOSS, "175", ">160", I_, "suspension"),
    "no_loss_at_all": (LOSS, "160", "<160", C_, None),
    "loss_allowed": (LOSS, "154", "<160", C_, None),
    "loss_in_doubt": (LOSS, "151", "<160", I_, "remedial"),
    "half_lines_apart": (LOSS, ">154", "<160", C_, None),
    "rise_surely": (RISE, "15", "<5", S_, "suspension"),
    "rise_allowed": (RISE, "15", ">9", C_, None),
    "never_all_of_it": (SHARE, "1", ">160", C_, None),
}  # fmt: skip


def _qualified(typed):
    return (typed[0], typed[1:]) if typed[0] in "<>" else ("=", typed)


def _judge(criterion, typed, base, **more):
    (sign, value), (side, bound) = _qualified(typed), _qualified(base)
    return judge(
        criterion, value=value, kind="number", qualifier=sign, baseline=bound, baseline_qualifier=side, **more
    )


@pytest.mark.parametrize(("criterion", "typed", "base", "verdict", "level"), ROWS.values(), ids=ROWS)
def test_verdict_is_given_only_when_every_baseline_agrees(criterion, typed, base, verdict, level):
    found = _judge(criterion, typed, base)
    assert (found.verdict, found.level) == (verdict, level)
    assert (found.code in ("hidden_loss", "open_baseline")) is (verdict == I_)


@pytest.mark.parametrize(("criterion", "typed", "base", "verdict", "level"), ROWS.values(), ids=ROWS)
def test_kept_reading_ranks_the_same_when_its_baseline_is_a_bound(criterion, typed, base, verdict, level):
    (sign, value), (side, bound) = _qualified(typed), _qualified(base)
    kept = Kept("number", sign, value=(int(value), 0), baseline=(int(bound), 0), baseline_qualifier=side)
    assert verdict_ranks(criterion, [kept]).tolist() == [severity(_judge(criterion, typed, base))]


def test_doubt_says_what_is_proven_when_the_remedial_level_is_passed_in_any_case():
    proven = [_judge(LOSS, value, ">160").parameters["proven"] for value in ("153", "158")]
    assert proven == ["remedial", "none"]


def test_gain_is_claimed_when_every_baseline_shows_it():
    assert _judge(LOSS, "166", "<160").code == "better_than_expected"
    assert _judge(LOSS, "165", "<160").code == "within_open"


def test_baseline_ends_at_zero_when_the_quantity_is_never_below_it():
    kept = [_judge(RISE, "5", "<3", never_below_zero=never).verdict for never in (True, False)]
    assert kept == [C_, I_]


def _random_limit(chance):
    parts = chance.choice((("absolute",), ("percent",), ("absolute", "percent")))
    sizes = {"absolute": (0, 1, 2, 5), "percent": (0, 5, 50, 100, 150)}
    return {part: str(chance.choice(sizes[part])) for part in parts} | {
        "governs": chance.choice(("larger", "smaller", "either"))
    }


def _asked_at_many(criterion, asked, rule):
    """The verdict from a fine grid of baselines, which reaches far beyond everything that is asked."""
    first = int(asked.bound * 40)
    steps = np.concatenate([np.arange(1, 4001), np.arange(4001, 10**6, 997)]) * asked.side + first
    if asked.never_below_zero:
        steps = steps[steps >= 0]
    many = len(steps)
    of = [
        np.full(many, int(number * 40)) for number in (asked.value, -1 if asked.uncertainty is None else asked.uncertainty)
    ]  # fmt: skip
    scaled = from_json(_times(criterion, 40))
    columns = Columns(of[0], steps, 0, np.full(many, asked.sign, np.int8), of[1])
    worst = 0
    for level, _ in scaled.levels():
        worst = max(worst, _together(level, set(verdict_codes(scaled.alone(level), columns, rule).tolist())))
    return worst


def _together(level, codes):
    proven, doubt = {"remedial": (3, 1), "suspension": (5, 4)}[level]
    if codes == {proven}:
        return proven
    return max(codes) if codes <= {0, 2} else doubt


def _times(criterion, factor):
    def limit(part):
        told = {"governs": part.governs}
        if part.absolute is not None:
            told["absolute"] = str(part.absolute * factor)
        return told | ({} if part.percent is None else {"percent": str(part.percent)})

    levels = {level: limit(part) for level, part in criterion.levels()}
    return {"basis": "baseline", "direction": criterion.direction, "strict": criterion.strict} | levels


def test_few_baselines_stand_for_all_when_compared_with_a_fine_grid():
    chance = random.Random(20261201)
    seen = set()
    for _ in range(300):
        criterion = _on_baseline(
            chance.choice(("either", "above", "below")), _random_limit(chance), strict=chance.random() < 0.5
        )
        rule = chance.choice(("simple", "guarded", "zones"))
        asked = AgainstBound(
            D(chance.randint(-10, 10)), chance.choice((-1, 0, 0, 1)), D(chance.randint(-10, 10)),
            chance.choice((-1, 1)), None if rule == "simple" else D(chance.choice((0, 1, 3))),
        )  # fmt: skip
        found = code_against_bound(criterion, asked, rule)
        assert found == _asked_at_many(criterion, asked, rule), (criterion, asked, rule)
        seen.add(found)
    assert seen >= {0, 1, 3}


def test_example_of_a_bound_gives_what_it_says():
    assert doctest.testmod(open_baseline) == (0, 4)
