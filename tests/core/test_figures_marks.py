"""The verdict marks: one outline for each verdict, inside the unit square, without style attributes."""

from __future__ import annotations

import pytest

from qa_tracker.core.figures import VERDICT_COLOURS, Shape, svg_path, verdict_mark


@pytest.mark.parametrize("verdict", VERDICT_COLOURS)
def test_mark_when_drawn_stays_in_the_unit_square(verdict):
    numbers = [n for shape in verdict_mark(verdict) for _, step in shape.steps for n in step]
    assert min(numbers) >= 0
    assert max(numbers) <= 1


def test_marks_when_colour_is_taken_away_still_differ():
    outlines = {tuple((s.steps, s.fill != "none") for s in verdict_mark(v)) for v in VERDICT_COLOURS}
    assert len(outlines) == len(VERDICT_COLOURS)


def test_mark_when_the_verdict_is_unknown_is_refused():
    with pytest.raises(KeyError):
        verdict_mark("passed")


def area(shape: Shape) -> float:
    """Signed area of a shape of straight lines, subpath by subpath."""
    total, points = 0.0, []
    for letter, numbers in shape.steps:
        if letter == "Z":
            total += (
                sum(a[0] * b[1] - b[0] * a[1] for a, b in zip(points, points[1:] + points[:1], strict=True))
                / 2
            )
            points = []
        else:
            points.append(numbers)
    return abs(total)


def test_suspension_mark_when_filled_leaves_its_bar_open():
    (shape,) = verdict_mark("suspension")
    assert area(shape) == pytest.approx(0.84 * 0.84 - 0.56 * 0.2)


def test_half_disc_when_drawn_is_filled_on_the_left_only():
    _, half = verdict_mark("indeterminate")
    assert max(x for _, step in half.steps for x in step[::2]) == 0.5


@pytest.mark.parametrize(
    ("scale", "path"),
    [(1.0, "M0.5 0.13C0.704 0.13 0.87 0.296 0.87 0.5"), (16.0, "M8 2.08C11.27 2.08 13.92 4.73 13.92 8")],
)
def test_svg_path_when_scaled_is_written_to_three_places(scale, path):
    (ring,) = verdict_mark("not_assessable")
    assert svg_path(ring.steps, scale).startswith(path)
