"""Paths with their colours, for a page and for paper alike, and the marks of the five verdicts.

A page writes a path with :func:`svg_path`, a PDF replays its steps, so the two can't differ. Colours are
presentation values (``fill="#007A5E"``), never a style attribute.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

INK = "#10212B"
PAPER = "#F7F5F0"
RULE = "#C9D2D3"
BORDER = "#5A666B"
TEAL = "#0E6E6E"
VERDICT_COLOURS = {
    "conforming": "#007A5E",
    "remedial": "#9A5B00",
    "suspension": "#A3123A",
    "indeterminate": "#5B4B9A",
    "not_assessable": "#5A666B",
}

# Four cubic curves with this handle draw a circle to 0.03 % of its radius.
CIRCLE_HANDLE = 0.5522847498

Step = tuple[str, tuple[float, ...]]


@dataclass(frozen=True)
class Shape:
    """One path with its colours.

    Parameters
    ----------
    steps
        ``("M", (x, y))``, ``("L", (x, y))``, ``("C", (x1, y1, x2, y2, x, y))`` and ``("Z", ())``; y grows
        downwards, as in SVG.
    role
        What it stands for: ``scale``, ``origin``, ``remedial``, ``suspension``, ``plumb``, ``bound``,
        ``off_scale`` or ``mark``.
    fill, stroke
        ``"#rrggbb"`` or ``"none"``. Fill follows the non-zero winding rule.
    stroke_width
        In the units of the steps.
    """

    steps: tuple[Step, ...]
    role: str
    fill: str = "none"
    stroke: str = "none"
    stroke_width: float = 0.0


def polygon(points: Sequence[tuple[float, float]], role: str, fill: str) -> Shape:
    """Give a filled, closed outline through the points."""
    first, *others = points
    return Shape((("M", first), *(("L", point) for point in others), ("Z", ())), role=role, fill=fill)


def circle_steps(x: float, y: float, radius: float) -> tuple[Step, ...]:
    """Give a closed circle as four cubic curves, starting at its top and going right."""
    r, k = radius, radius * CIRCLE_HANDLE
    return (
        ("M", (x, y - r)),
        ("C", (x + k, y - r, x + r, y - k, x + r, y)),
        ("C", (x + r, y + k, x + k, y + r, x, y + r)),
        ("C", (x - k, y + r, x - r, y + k, x - r, y)),
        ("C", (x - r, y - k, x - k, y - r, x, y - r)),
        ("Z", ()),
    )


def verdict_mark(verdict: str) -> tuple[Shape, ...]:
    """Give the mark of a verdict in a unit square.

    Conforming is a filled disc, remedial a lozenge, suspension a square with a bar cut through it,
    indeterminate a ring with its left half filled, not assessable an open ring. They differ in outline,
    so they can be told apart without colour. An unknown verdict raises KeyError.

    Examples
    --------
    >>> [shape.fill for shape in verdict_mark("conforming")]
    ['#007A5E']
    """
    colour = VERDICT_COLOURS[verdict]
    if verdict == "conforming":
        return (Shape(circle_steps(0.5, 0.5, 0.42), "mark", fill=colour),)
    if verdict == "remedial":
        return (polygon(((0.5, 0.02), (0.94, 0.5), (0.5, 0.98), (0.06, 0.5)), "mark", colour),)
    if verdict == "suspension":
        return (_barred_square(colour),)
    ring = Shape(circle_steps(0.5, 0.5, 0.37), "mark", stroke=colour, stroke_width=0.11)
    if verdict == "not_assessable":
        return (ring,)
    left = (*circle_steps(0.5, 0.5, 0.37)[3:5], ("Z", ()))
    return (ring, Shape((("M", (0.5, 0.87)), *left), "mark", fill=colour))


def _barred_square(colour: str) -> Shape:
    """Cut the bar by winding it against the square, so that no background colour is needed."""
    outer = polygon(((0.08, 0.08), (0.92, 0.08), (0.92, 0.92), (0.08, 0.92)), "mark", colour)
    bar = polygon(((0.22, 0.4), (0.22, 0.6), (0.78, 0.6), (0.78, 0.4)), "mark", colour)
    return replace(outer, steps=outer.steps + bar.steps)


def svg_path(steps: Sequence[Step], scale: float = 1.0) -> str:
    """Write steps as the ``d`` attribute of an SVG path, to three decimals.

    Examples
    --------
    >>> svg_path((("M", (0.0, 0.5)), ("L", (1.0, 0.5)), ("Z", ())), scale=10)
    'M0 5L10 5Z'
    """
    return "".join(
        letter + " ".join(f"{round(n * scale, 3):g}" for n in numbers) for letter, numbers in steps
    )
