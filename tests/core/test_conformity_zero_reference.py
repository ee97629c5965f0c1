"""A reference of exactly zero has no share: what the absolute numbers prove still counts, and nothing is cleared."""

from __future__ import annotations

import numpy as np
import pytest

from qa_tracker.core.conformity import judge, severity
from qa_tracker.core.criteria import from_json
from qa_tracker.core.judged_line import judged_line
from qa_tracker.core.verdict_kernel import Columns, verdict_codes

C_, R_, S_, N_ = "conforming", "remedial", "suspension", "not_assessable"


def _limits(remedial, suspension=None):
    return from_json(
        {"basis": "baseline", "direction": "either", "remedial": remedial, "suspension": suspension}
    )


def _both(governs):
    return _limits({"absolute": "2", "percent": "10", "governs": governs})


SHARE, FIXED = {"percent": "10"}, {"absolute": "5"}
ROWS = {
    "larger_within": (_both("larger"), "2", C_),
    "larger_beyond": (_both("larger"), "3", R_),
    "either_within": (_both("either"), "2", N_),
    "either_beyond": (_both("either"), "3", R_),
    "smaller_within": (_both("smaller"), "2", N_),
    "smaller_beyond": (_both("smaller"), "3", R_),
    "share_alone": (_limits(SHARE), "3", N_),
    "share_below_fixed_within": (_limits(SHARE, FIXED), "5", N_),
    "share_below_fixed_beyond": (_limits(SHARE, FIXED), "-6", S_),
    "fixed_below_share_within": (_limits(FIXED, SHARE), "5", N_),
    "fixed_below_share_beyond": (_limits(FIXED, SHARE), "6", R_),
    "larger_below_share": (_limits({"absolute": "2", "percent": "5"}, SHARE), "2", N_),
    "larger_below_fixed": (_limits({"absolute": "2", "percent": "5"}, FIXED), "2", C_),
}


@pytest.mark.parametrize(("criterion", "value", "verdict"), ROWS.values(), ids=ROWS)
def test_absolute_part_decides_what_it_can_when_the_reference_is_zero(criterion, value, verdict):
    found = judge(criterion, value=value, kind="number", baseline="0.0")
    assert found.verdict == verdict
    assert (found.code == "zero_reference") is (verdict == N_)


def test_verdict_says_that_no_share_was_taken_only_when_one_was_missing():
    kept = [
        judge(_both(word), value="3", kind="number", baseline="0").parameters for word in ("either", "larger")
    ]
    assert [given.get("no_share") for given in kept] == ["yes", None]


@pytest.mark.parametrize("kind", [np.int64, object])
@pytest.mark.parametrize("rule", ["simple", "guarded", "zones"])
@pytest.mark.parametrize(("criterion", "value", "verdict"), ROWS.values(), ids=ROWS)
def test_kernel_says_the_same_of_many_when_some_references_are_zero(criterion, value, verdict, rule, kind):
    values, references = np.array([int(value)] * 3).astype(kind), np.array([0, 7, 0]).astype(kind)
    columns = Columns(values, references, 0, uncertainties=np.array([1, 1, 0]).astype(kind))
    alone = [
        severity(judge(criterion, value=value, kind="number", baseline=base, uncertainty=u, rule=rule))
        for base, u in (("0", "1"), ("7", "1"), ("0", "0"))
    ]
    assert verdict_codes(criterion, columns, rule).tolist() == alone


def test_row_that_lacks_something_is_not_assessable_when_its_reference_is_zero():
    columns = Columns(np.array([9, 9]), np.array([0, 0]), 0, assessable=np.array([True, False]))
    assert verdict_codes(_both("either"), columns).tolist() == [3, 2]


def test_doubt_at_suspension_stays_when_the_remedial_share_has_no_size():
    found = judge(
        _limits(SHARE, FIXED), value="5", kind="number", baseline="0", uncertainty="1", rule="zones"
    )
    assert (found.verdict, found.level, found.code) == ("indeterminate", "suspension", "too_close")


def test_allowance_line_leaves_out_a_level_that_has_no_size():
    found = judge(_limits(SHARE, FIXED), value="6", kind="number", baseline="0")
    drawn = judged_line(_limits(SHARE, FIXED), found.parameters)
    assert (drawn.remedial, str(drawn.suspension)) == (None, "5")
