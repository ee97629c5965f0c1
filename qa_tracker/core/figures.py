"""Geometry of the allowance line, drawn by a page and by a PDF from the same shapes.

Shapes, colours and verdict marks live in ``core/shapes.py`` and can be imported from here as well.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import ROUND_HALF_EVEN, Decimal

from qa_tracker.core.shapes import (
    BORDER,
    INK,
    PAPER,
    RULE,
    TEAL,
    VERDICT_COLOURS,
    Shape,
    Step,
    circle_steps,
    polygon,
    svg_path,
    verdict_mark,
)

__all__ = [
    "BORDER",
    "INK",
    "PAPER",
    "RULE",
    "TEAL",
    "VERDICT_COLOURS",
    "AllowanceLine",
    "Judged",
    "Pen",
    "Shape",
    "Step",
    "allowance_line",
    "allowance_shapes",
    "circle_steps",
    "departure",
    "polygon",
    "share_text",
    "svg_path",
    "verdict_mark",
]

# The outermost level stands at 80 % of its side of the scale, so a reading just beyond it is still on it.
OUTERMOST_LEVEL_AT = Decimal("0.8")
# A one-sided scale keeps this much of its width for readings on the better side.
BETTER_SIDE = Decimal("0.15")
TENTH = Decimal("0.1")


@dataclass(frozen=True)
class Judged:
    """What the allowance line needs to know of a judged reading; all in the reading's unit.

    Parameters
    ----------
    origin
        Baseline or nominal; zero for an absolute upper level; None for an absolute lower level, whose
        ``remedial`` and ``suspension`` are then positions and not distances.
    value
        The reading, None where there is none.
    remedial, suspension
        Allowance: how far from the origin the level lies (never negative), None where there is no level.
    direction
        Which departures count: ``"either"``, ``"above"`` or ``"below"``.
    strict
        True where exactly the level still conforms ("> x").
    qualifier
        ``"="``, ``">"``, ``"<"`` or ``"not_seen"``.
    ranks
        True where the numbers are ranks of grades (0 conforming, 1 remedial, 2 suspension): their places
        mean something, a share does not.
    """

    origin: Decimal | None
    value: Decimal | None
    remedial: Decimal | None = None
    suspension: Decimal | None = None
    direction: str = "either"
    strict: bool = True
    qualifier: str = "="
    ranks: bool = False


@dataclass(frozen=True)
class AllowanceLine:
    """Positions along a scale from 0 (left, smaller values) to 1 (right, larger values).

    ``origin`` is None where nothing is measured from; ``plumb`` is None without a reading. ``off_scale``
    says the plumb was moved to the nearer end. ``share_percent`` is how much of the first level's
    allowance is used up, to a tenth, half-even, but never 100.0 unless it is exactly that. ``bound`` is ``"<="`` or ``">="`` where the reading is only
    known to one side. ``reached`` is the worst level the reading itself is beyond, or ``""``.
    """

    origin: float | None
    remedial: tuple[float, ...] = ()
    suspension: tuple[float, ...] = ()
    plumb: float | None = None
    off_scale: bool = False
    share_percent: Decimal | None = None
    bound: str = ""
    reached: str = ""
    better: bool = False
    open_towards: int = 0


def departure(judged: Judged) -> Decimal | None:
    r"""Give how far the reading lies from its origin in the direction that counts.

    .. math:: d = |v - o|, \quad v - o, \quad o - v

    for either, above and below. Negative means the better side of a one-sided criterion. None without a
    reading or an origin.

    Examples
    --------
    >>> departure(Judged(Decimal("152"), Decimal("145.4"), Decimal("6"), direction="below"))
    Decimal('6.6')
    """
    if judged.value is None or judged.origin is None or judged.qualifier == "not_seen":
        return None
    difference = judged.value - judged.origin
    if judged.direction == "either":
        return abs(difference)
    return difference if judged.direction == "above" else -difference


def allowance_line(judged: Judged) -> AllowanceLine:
    """Place origin, levels and reading on a scale of unit length.

    The scale keeps the order of numbers, smaller on the left. A criterion in either direction has its
    origin in the middle; a one-sided one has it near the better end. The outermost level stands at 80 %
    of the way out; a reading beyond the end is placed at the end with ``off_scale`` set.

    Degenerate cases: no reading, or "not seen", gives no plumb; no level gives a bare scale with the
    origin alone; a level of zero gives no share.

    Examples
    --------
    >>> line = allowance_line(Judged(Decimal("100"), Decimal("101"), Decimal("2"), Decimal("4")))
    >>> line.origin, line.remedial, line.suspension, line.plumb, line.share_percent
    (0.5, (0.3, 0.7), (0.1, 0.9), 0.6, Decimal('50.0'))
    """
    if judged.origin is None:
        return _lower_limit_line(judged)
    levels = [level for level in (judged.remedial, judged.suspension) if level is not None]
    if not levels:
        return AllowanceLine(origin=float(_origin_at(judged.direction)))
    reach = max(levels) / OUTERMOST_LEVEL_AT or Decimal(1)
    line = AllowanceLine(
        origin=float(_origin_at(judged.direction)),
        remedial=_level_positions(judged, judged.remedial, reach),
        suspension=_level_positions(judged, judged.suspension, reach),
    )
    away = departure(judged)
    if away is None or judged.value is None:
        return line
    position, off_scale = _clamped(_position(judged, judged.value - judged.origin, reach))
    return replace(
        line,
        plumb=position,
        off_scale=off_scale,
        share_percent=None if judged.ranks else _share(away, levels[0]),
        bound=_bound(judged, judged.value - judged.origin),
        reached=_reached(judged, away),
        better=away < 0,
        open_towards={">": 1, "<": -1}.get(judged.qualifier, 0),
    )


def _lower_limit_line(judged: Judged) -> AllowanceLine:
    """Draw an absolute lower level: zero on the left end, the levels in the middle, no origin mark."""
    levels = [level for level in (judged.remedial, judged.suspension) if level is not None]
    if not levels or max(levels) <= 0:
        return AllowanceLine(origin=None)
    reach = 2 * max(levels)
    line = AllowanceLine(
        origin=None,
        remedial=() if judged.remedial is None else (float(judged.remedial / reach),),
        suspension=() if judged.suspension is None else (float(judged.suspension / reach),),
    )
    if judged.value is None or judged.qualifier == "not_seen":
        return line
    position, off_scale = _clamped(judged.value / reach)
    below = replace(judged, origin=Decimal(0), direction="below")
    share = _share(levels[0], judged.value) if judged.value > 0 else None
    return replace(
        line,
        plumb=position,
        off_scale=off_scale,
        share_percent=share,
        bound=_bound(below, judged.value),
        reached=_reached_lower(judged),
        open_towards={">": 1, "<": -1}.get(judged.qualifier, 0),
    )


def _origin_at(direction: str) -> Decimal:
    return {"above": BETTER_SIDE, "below": 1 - BETTER_SIDE}.get(direction, Decimal("0.5"))


def _position(judged: Judged, difference: Decimal, reach: Decimal) -> Decimal:
    room = Decimal("0.5") if judged.direction == "either" else 1 - BETTER_SIDE
    return _origin_at(judged.direction) + difference / reach * room


def _level_positions(judged: Judged, allowance: Decimal | None, reach: Decimal) -> tuple[float, ...]:
    if allowance is None:
        return ()
    signs = {"above": (1,), "below": (-1,)}.get(judged.direction, (-1, 1))
    return tuple(float(_position(judged, sign * allowance, reach)) for sign in signs)


def _clamped(position: Decimal) -> tuple[float, bool]:
    inside = min(max(position, Decimal(0)), Decimal(1))
    return float(inside), inside != position


def _share(away: Decimal, allowance: Decimal) -> Decimal | None:
    """Count the better side as nothing used; a hair beside the level stays beside it after rounding."""
    if allowance <= 0:
        return None
    share = max(away, Decimal(0)) * 100 / allowance
    rounded = share.quantize(TENTH, ROUND_HALF_EVEN)
    if rounded != 100 or share == 100:
        return rounded
    return rounded + (TENTH if share > 100 else -TENTH)


def _bound(judged: Judged, difference: Decimal) -> str:
    """Say on which side of the share the truth lies, where the reading is only a bound."""
    if judged.qualifier not in ("<", ">"):
        return ""
    outwards = {"above": 1, "below": -1}.get(judged.direction, 1 if difference >= 0 else -1)
    open_towards = 1 if judged.qualifier == ">" else -1
    return ">=" if outwards == open_towards else "<="


def _reached(judged: Judged, away: Decimal) -> str:
    for name, level in (("suspension", judged.suspension), ("remedial", judged.remedial)):
        if level is not None and (away > level or (away == level and not judged.strict)):
            return name
    return ""


def _reached_lower(judged: Judged) -> str:
    mirrored = replace(
        judged,
        remedial=None if judged.remedial is None else -judged.remedial,
        suspension=None if judged.suspension is None else -judged.suspension,
    )
    return _reached(mirrored, -judged.value) if judged.value is not None else ""


def share_text(line: AllowanceLine) -> str:
    """Write the share as a figure, the same in every language.

    Examples
    --------
    >>> share_text(AllowanceLine(origin=0.5, plumb=0.6, share_percent=Decimal("50.0")))
    '50 %'
    >>> share_text(AllowanceLine(origin=0.5, plumb=0.6, share_percent=Decimal("33.3"), bound="<="))
    '≤ 33.3 %'
    """
    if line.share_percent is None:
        return ""
    sign = {"<=": "≤ ", ">=": "≥ "}.get(line.bound, "") if line.share_percent else ""
    return f"{sign}{str(line.share_percent).removesuffix('.0')} %"


def allowance_shapes(line: AllowanceLine, width: float, height: float) -> tuple[Shape, ...]:
    """Draw the line into a box: scale, origin, ticks, then the plumb mark on top.

    Parameters
    ----------
    line
        From :func:`allowance_line`.
    width, height
        Of the box, in the caller's unit (px or points). Half the bob's width is kept free at each end so
        that nothing leaves the box.
    """
    pen = Pen(width, height)
    level_y = height * 0.62
    shapes = [pen.stroke("scale", (0.0, level_y), (1.0, level_y), BORDER, 0.045)]
    if line.origin is not None:
        shapes.append(
            pen.stroke("origin", (line.origin, height * 0.34), (line.origin, height * 0.9), INK, 0.08)
        )
    for at in line.remedial:
        colour = VERDICT_COLOURS["remedial"]
        shapes.append(pen.stroke("remedial", (at, height * 0.42), (at, height * 0.82), colour, 0.08))
    for at in line.suspension:
        colour = VERDICT_COLOURS["suspension"]
        for side in (-0.06, 0.06):
            shapes.append(
                pen.stroke("suspension", (at, height * 0.34), (at, height * 0.9), colour, 0.06, side)
            )
    if line.plumb is not None:
        shapes.extend(_plumb(line, line.plumb, pen, level_y))
    return tuple(shapes)


@dataclass(frozen=True)
class Pen:
    """A box with its bob margin: positions of 0..1 along it, thickness in parts of its height."""

    width: float
    height: float

    def x(self, position: float) -> float:
        """Give the abscissa of a position on the scale."""
        margin = self.height * 0.2
        return margin + position * (self.width - 2 * margin)

    def stroke(
        self,
        role: str,
        start: tuple[float, float],
        end: tuple[float, float],
        colour: str,
        weight: float,
        aside: float = 0.0,
    ) -> Shape:
        """Draw one straight stroke; ``aside`` shifts it sideways in parts of the height."""
        shift = aside * self.height
        steps = (("M", (self.x(start[0]) + shift, start[1])), ("L", (self.x(end[0]) + shift, end[1])))
        return Shape(steps, role, stroke=colour, stroke_width=weight * self.height)


def _plumb(line: AllowanceLine, at: float, pen: Pen, level_y: float) -> tuple[Shape, ...]:
    """Draw a thread hanging to the scale with a pointed bob, and what is open or cut off beside it."""
    x, h = pen.x(at), pen.height
    thread = Shape(
        (("M", (x, 0.0)), ("L", (x, level_y))), role="plumb", stroke=INK, stroke_width=max(0.055 * h, 0.5)
    )
    bob = polygon(
        (
            (x - 0.13 * h, 0.04 * h),
            (x + 0.13 * h, 0.04 * h),
            (x + 0.13 * h, 0.2 * h),
            (x, 0.46 * h),
            (x - 0.13 * h, 0.2 * h),
        ),
        role="plumb",
        fill=INK,
    )
    extra: list[Shape] = []
    if line.open_towards:
        end = min(max(x + line.open_towards * 0.7 * h, 0.0), pen.width)
        steps: tuple[Step, ...] = (("M", (x, 0.12 * h)), ("L", (end, 0.12 * h)))
        extra.append(Shape(steps, role="bound", stroke=INK, stroke_width=0.055 * h))
    if line.off_scale:
        inwards = 1 if at < 0.5 else -1
        extra.extend(_break(x + inwards * gap * h, level_y, h) for gap in (0.32, 0.5))
    return (thread, bob, *extra)


def _break(x: float, y: float, height: float) -> Shape:
    """Draw one of the two slanted strokes that say the scale is cut here."""
    steps = (("M", (x - 0.06 * height, y + 0.16 * height)), ("L", (x + 0.06 * height, y - 0.16 * height)))
    return Shape(steps, role="off_scale", stroke=INK, stroke_width=0.055 * height)
