"""How far a device has moved from its acceptance over the epochs of a baseline, what test objects add taken out."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from qa_tracker.core.decimals import subtract

NOWHERE = Decimal(0)


@dataclass(frozen=True)
class Epoch:
    """One baseline of a series.

    Parameters
    ----------
    key
        Tells it apart from the others of its series.
    value
        In the measurand's unit.
    bound
        Whether the value is only a bound ("more than 160").
    test_object
        Key of what it was measured on; None where it is not known or nothing was needed.
    overlap_of
        Key of the epoch on another test object that it was tied to.
    overlap
        What was read on that other object at the time, in the measurand's unit; None where nothing could be read.
    """

    key: int
    value: Decimal
    bound: bool = False
    test_object: int | None = None
    overlap_of: int | None = None
    overlap: Decimal | None = None


@dataclass(frozen=True)
class Change:
    """What one epoch changed.

    Parameters
    ----------
    before
        Key of the epoch it is compared with; None for the first.
    step
        Change of the device against that epoch.
    object_step
        What the other test object adds: it is no change of the device. None on the same object, and where no
        reading on both tells.
    cumulative
        Change of the device from the first epoch.
    untold
        Whether something up to here can't be told: a change of object without an overlap, or a value that is
        only a bound.
    """

    before: int | None = None
    step: Decimal = NOWHERE
    object_step: Decimal | None = None
    cumulative: Decimal = NOWHERE
    untold: bool = False


def changes(epochs: Sequence[Epoch]) -> dict[int, Change]:
    """Sum the changes of a device over the epochs of one series.

    ``C_1 = 0``, ``C_k = C_p + s_k``, with ``s_k = v_k - v_p`` on the same test object and ``s_k = o_k - v_p`` on
    another, where p is the epoch before it on its object (or the one it is tied to), v a baseline's value and
    ``o_k`` the reading on p's object when epoch k was set. ``v_k - o_k`` is the objects' and is left out. Common
    practice, no source.

    Parameters
    ----------
    epochs
        In order, the first one being acceptance. An epoch without a test object follows the one before it,
        whatever that stands on. One on another object without an overlap counts as no step, and is untold.

    Returns
    -------
    dict of int to Change
        By key; empty for no epochs, one without a step for a single one. Values are finite.

    Examples
    --------
    >>> accepted = Epoch(1, Decimal("150"), test_object=7)
    >>> other = Epoch(2, Decimal("146"), test_object=8, overlap_of=1, overlap=Decimal("149"))
    >>> found = changes([accepted, other])[2]
    >>> found.step, found.object_step, found.cumulative
    (Decimal('-1'), Decimal('-3'), Decimal('-1'))
    """
    found: dict[int, Change] = {}
    for position, epoch in enumerate(epochs):
        found[epoch.key] = _change(epoch, epochs[:position], found)
    return found


def _change(epoch: Epoch, earlier: Sequence[Epoch], found: dict[int, Change]) -> Change:
    if not earlier:
        return Change(untold=epoch.bound)
    before, tied = _before(epoch, earlier)
    untold = found[before.key].untold or epoch.bound
    carried = found[before.key].cumulative
    if not tied and _same_object(epoch, before):
        step = subtract(epoch.value, before.value)
        return Change(before.key, step, None, _add(carried, step), untold)
    if epoch.overlap is None:
        return Change(before.key, NOWHERE, None, carried, untold=True)
    step, object_step = subtract(epoch.overlap, before.value), subtract(epoch.value, epoch.overlap)
    return Change(before.key, step, object_step, _add(carried, step), untold)


def _add(value: Decimal, step: Decimal) -> Decimal:
    return subtract(value, step.copy_negate())


def _before(epoch: Epoch, earlier: Sequence[Epoch]) -> tuple[Epoch, bool]:
    """Find the epoch it is compared with, and whether it is tied to it by an overlap."""
    if epoch.overlap_of is not None:
        tied = next((each for each in earlier if each.key == epoch.overlap_of), None)
        if tied is not None:
            return tied, True
    same = next((each for each in reversed(earlier) if _same_object(epoch, each)), None)
    return same or earlier[-1], False


def _same_object(one: Epoch, other: Epoch) -> bool:
    return None in (one.test_object, other.test_object) or one.test_object == other.test_object
