"""What a verdict is by definition, worked in ``fractions.Fraction``, with no word from the kernel.

A reading's departure is an interval of real numbers. A level is in doubt where some of it is beyond what is allowed,
and proven where all of it is.
"""

from __future__ import annotations

from fractions import Fraction
from math import inf

RANK = {("conforming", None): 0, ("indeterminate", "remedial"): 1, ("not_assessable", None): 2}
RANK |= {("remedial", "remedial"): 3, ("indeterminate", "suspension"): 4, ("suspension", "suspension"): 5}
# By how many U the bounds move under which nothing, and beyond which all, is beyond (DESIGN, the decision rules).
MOVES = {"simple": (0, 0), "guarded": (-1, -1), "zones": (-1, 1)}


def interval(criterion, change, qualifier):
    """The departure as an interval of real numbers: low, high, whether its finite end is left out."""
    low, high = {"=": (change, change), ">": (change, inf), "<": (-inf, change)}[qualifier]
    if criterion.direction == "below":
        low, high = -high, -low
    if criterion.direction == "either":
        if low < 0 < high:
            return 0, inf, False
        low, high = sorted((abs(low), abs(high)))
    return low, high, qualifier != "="


def allowed(criterion, limit, reference):
    """How far a level lets the departure from this reference go."""
    parts = [] if limit.absolute is None else [Fraction(limit.absolute)]
    if limit.percent is not None and has_size(criterion, reference):
        parts.append(Fraction(limit.percent) * abs(Fraction(reference)) / 100)
    size = max(parts) if limit.governs == "larger" else min(parts)
    return -size if criterion.direction == "below" and criterion.basis in ("none", "ratio") else size


def bounds(criterion, reference, uncertainty, rule):
    """Each level with the bounds under which nothing, and beyond which all, of a departure is beyond it."""
    moved = [move * Fraction(uncertainty) for move in MOVES[rule]]
    for level, limit in criterion.levels():
        if limit.absolute is None and not has_size(criterion, reference):
            continue
        at = allowed(criterion, limit, reference)
        yield level, at + moved[0], at + moved[1]


def worst(criterion, departure, within):
    """The verdict on a departure, an ``interval``, by the ``bounds`` it is compared with."""
    low, high, left_out = departure
    found = [("conforming", None)]
    for level, clear, beyond in within:
        some_beyond = high > clear or (high == clear and not criterion.strict and not left_out)
        all_beyond = low > beyond or (low == beyond and (left_out or not criterion.strict))
        found += [("indeterminate", level)] * some_beyond + [(level, level)] * all_beyond
    return max(found, key=RANK.__getitem__)


def has_size(criterion, reference):
    """Whether a share of this reference means something."""
    return reference > 0 if criterion.basis == "ratio" else reference != 0


def without_size(criterion, reference):
    """Whether a share of this reference means nothing and yet may decide a level, which is then never cleared."""
    alone = any(
        limit.percent is not None and (limit.absolute is None or limit.governs != "larger")
        for _, limit in criterion.levels()
    )
    return alone and not has_size(criterion, reference)
