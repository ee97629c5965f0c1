"""The geometry of a series over time: where its levels, baseline and readings lie."""

from __future__ import annotations

import datetime as dt
import re
from decimal import Decimal
from itertools import pairwise

import pytest

from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.records.queries.series import PointRow
from qa_tracker.web.presenters import charts
from qa_tracker.web.presenters.charts import Line, Series
from qa_tracker.web.presenters.drawing import TimeLine

UNTIL = dt.datetime(2026, 12, 1, tzinfo=dt.UTC)
LOSS = Criterion("baseline", "below", remedial=Limit(Decimal(6)), suspension=Limit(Decimal(10)))


def point(text, days_ago, verdict="conforming"):
    whole, _, part = text.partition(".")
    return PointRow(
        UNTIL - dt.timedelta(days=days_ago), "=", text, int(whole + part), len(part), "mm", verdict
    )


def circles(figure):
    return re.findall(r"translate\(([\d.]+) ([\d.]+)\)", figure)


def test_series_when_values_fall_is_drawn_downwards_and_rightwards():
    series = Series("Depth", "", "mm", (point("152.0", 90), point("149.0", 60), point("141.0", 30)), ())
    spots = [(float(x), float(y)) for x, y in circles(charts.drawn(series, UNTIL))]
    assert spots == sorted(spots)
    assert [y for _x, y in spots] == sorted(y for _x, y in spots)


def test_series_of_one_equal_value_has_room_on_both_sides():
    series = Series("Depth", "", "mm", (point("0", 3), point("0", 1)), ())
    heights = {float(y) for _x, y in circles(charts.drawn(series, UNTIL))}
    assert len(heights) == 1
    assert charts.TOP < heights.pop() < charts.BOTTOM


@pytest.mark.parametrize(
    ("criterion", "values"),
    [
        pytest.param(LOSS, {("remedial", 146), ("suspension", 142)}, id="loss"),
        pytest.param(
            Criterion("baseline", "either", remedial=Limit(Decimal(2))),
            {("remedial", 150), ("remedial", 154)},
            id="either way",
        ),
        pytest.param(
            Criterion("baseline", "either", remedial=Limit(percent=Decimal(10))),
            {("remedial", Decimal("136.8")), ("remedial", Decimal("167.2"))},
            id="percent",
        ),
    ],
)
def test_levels_when_on_a_baseline_lie_around_it(criterion, values):
    found = charts._levels(criterion, Decimal(152), UNTIL, None)
    assert {(each.role, each.value) for each in found} == {(role, Decimal(value)) for role, value in values}


def test_levels_on_the_value_itself_lie_where_they_are():
    low = Criterion("none", "below", remedial=Limit(Decimal(5)))
    assert [each.value for each in charts._levels(low, Decimal(0), None, None)] == [Decimal(5)]


def test_labels_of_lines_that_lie_close_are_kept_apart():
    lines = (
        Line("remedial", Decimal("10.0")),
        Line("suspension", Decimal("10.1")),
        Line("baseline", Decimal(0)),
    )
    series = Series("Depth", "", "mm", (point("1", 1),), lines)
    figure = charts.drawn(series, UNTIL)
    heights = sorted(float(y) for y in re.findall(rf'<text x="{charts.RIGHT + 5}" y="([\d.]+)"', figure))
    assert all(after - before >= charts.LABEL_GAP for before, after in pairwise(heights))


def test_figure_carries_no_style():
    figure = charts.drawn(Series("Depth", "<b>", "mm", (point("1", 1),), ()), UNTIL)
    assert "style=" not in figure
    assert "&lt;b&gt;" in figure


def test_moment_outside_a_line_of_time_comes_to_its_end():
    line = TimeLine(UNTIL - dt.timedelta(days=10), UNTIL, 0.0, 100.0)
    assert line.x(UNTIL + dt.timedelta(days=5)) == 100.0
    assert line.x(UNTIL - dt.timedelta(days=5)) == 50.0
