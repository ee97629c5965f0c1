"""Whose turn it is: a rota of fixed turns, and who stands in for someone away."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from datetime import date, timedelta

from qa_tracker.core.errors import Invalid

LONGEST_TURN_WEEKS = 26


def turn_of(members: Sequence[int], weeks: int, from_on: date, on: date) -> int:
    """Member whose turn it is on a day.

    Parameters
    ----------
    members
        Keys in the order of their turns; at least one.
    weeks
        Length of one turn, 1 to 26.
    from_on
        Day on which a turn of the first member begins. Turns are counted backwards from it too, so a rota has
        somebody on every day.
    on
        Day asked about.

    Raises
    ------
    Invalid
        ``rota.weeks``, ``rota.nobody``.

    Examples
    --------
    >>> [turn_of((7, 8), 1, date(2026, 3, 2), date(2026, 3, day)) for day in (1, 2, 8, 9)]
    [8, 7, 7, 8]
    """
    if not 1 <= weeks <= LONGEST_TURN_WEEKS:
        raise Invalid("rota.weeks", field="rota_weeks", weeks=weeks, most=LONGEST_TURN_WEEKS)
    if not members:
        raise Invalid("rota.nobody", field="members")
    return members[(on - from_on).days // (7 * weeks) % len(members)]


def turns(
    members: Sequence[int], weeks: int, from_on: date, since: date, until: date
) -> list[tuple[date, date, int]]:
    """Turns that touch a span of days: first day, last day and member of each, in order.

    Examples
    --------
    >>> [who for *_days, who in turns((7, 8), 1, date(2026, 3, 2), date(2026, 3, 4), date(2026, 3, 17))]
    [7, 8, 7]
    """
    length = timedelta(weeks=weeks)
    first = from_on + (since - from_on) // length * length
    found = []
    while first <= until:
        found.append((first, first + length - timedelta(days=1), turn_of(members, weeks, from_on, first)))
        first += length
    return found


def stand_in(person: int, deputies: Mapping[int, int], present: frozenset[int]) -> int | None:
    """Who does a person's duties: themself, or along the chain of deputies the first who is not away.

    Parameters
    ----------
    person
        Key of who is responsible.
    deputies
        Deputy of each person who is away; whoever is not in it is at work.
    present
        People who still belong to the group.

    Returns
    -------
    int or None
        A chain that leads back to someone already met, or to someone gone, ends with the person themself;
        ``None`` where they are gone too.

    Examples
    --------
    >>> everyone = frozenset({1, 2, 3})
    >>> stand_in(1, {1: 2, 2: 3}, everyone), stand_in(1, {1: 2, 2: 1}, everyone), stand_in(9, {}, everyone)
    (3, 1, None)
    """
    met, now = {person}, person
    while now in deputies:
        now = deputies[now]
        if now in met or now not in present:
            return person if person in present else None
        met.add(now)
    return now if now in present else None
