"""The ladder of a site: its own, or the group's, or the one the program comes with."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

from qa_tracker.core.errors import Conflict
from qa_tracker.core.ladder import Ladder, Rung
from qa_tracker.records import ledger
from qa_tracker.records.models import LadderRung, Person, Site
from qa_tracker.records.queries.ladders import rungs_in_force
from qa_tracker.services import clocks
from qa_tracker.services.guards import check_may, may, required

# Common practice, no source: whoever does the check hears of it first, then who answers for the room, and a
# physicist once it has stood undone for one and for two weeks.
DEFAULT: Final = Ladder(
    (
        Rung("upcoming", "responsible"),
        Rung("due", "responsible"),
        Rung("late", "responsible"),
        Rung("overdue", "responsible"),
        Rung("overdue", "lead"),
        Rung("t1", "lead", 7),
        Rung("t1", "physicist", 7),
        Rung("t2", "physicist", 14),
    )
)


@dataclass(frozen=True)
class Ladders:
    """Every ladder in force: by site, and the group's for sites that have none of their own."""

    group: Ladder
    own: dict[int, Ladder]
    group_is_default: bool = True

    def of(self, site_id: int | None) -> Ladder:
        """The ladder of a site; a device at no site goes by the group's."""
        return self.group if site_id is None else self.own.get(site_id, self.group)

    def origin(self, site_id: int | None) -> str:
        """Whose ladder a site goes by: ``site``, ``group`` or ``default``."""
        if site_id is not None and site_id in self.own:
            return "site"
        return "default" if self.group_is_default else "group"


def in_force(as_of: dt.datetime | None = None) -> Ladders:
    """Read every ladder, with one query."""
    rungs: dict[int | None, list[Rung]] = {}
    for row in rungs_in_force(as_of):
        rungs.setdefault(row.site_id, []).append(row.rung)
    made = {site_id: Ladder(tuple(each)) for site_id, each in rungs.items()}
    own = {site_id: each for site_id, each in made.items() if site_id is not None}
    return Ladders(made.get(None, DEFAULT), own, None not in made)


def set_ladder(
    *, site: Site | None, rungs: Sequence[Rung], reason: str, actor: Person, at: dt.datetime
) -> Ladder:
    """Give a site, or the group, a ladder of its own. Writes LadderRung; leaf ``ladder.set``.

    Levels that passed are not owed again by it. Refused: role, no reason, rungs that make no ladder
    (``core.ladder``), those it has already.
    """
    check_may(actor, "ladder.set", site.id if site else None, at)
    reason = required(reason, "ladder.reason_missing", "reason")
    ladder = Ladder(tuple(rungs))
    before = _rows(site)
    if {(row.level, row.recipient, row.after_days) for row in before} == set(ladder.rungs):
        raise Conflict("ladder.same", field="rungs")
    with ledger.command("ladder.set", actor=actor, at=at, reason=reason) as act:
        for row in before:
            act.change(row, ended_at=at)
        for rung in ladder.rungs:
            act.insert(LadderRung(site=site, **rung._asdict()))
        clocks.climb_anew(site, ladder, at)
        act.about(site, site=site)
        act.tell(_told(site, ladder), {"rungs": [_words(_rung(row)) for row in before]})
    return ladder


def drop_ladder(*, site: Site | None, reason: str, actor: Person, at: dt.datetime) -> Ladder:
    """Go back to the group's ladder, or the group to the program's. Writes LadderRung; leaf ``ladder.dropped``.

    Refused: role, no reason, a site that has none of its own.
    """
    check_may(actor, "ladder.set", site.id if site else None, at)
    reason = required(reason, "ladder.reason_missing", "reason")
    before = _rows(site)
    if not before:
        raise Conflict("ladder.none_of_its_own")
    with ledger.command("ladder.dropped", actor=actor, at=at, reason=reason) as act:
        for row in before:
            act.change(row, ended_at=at)
        ladder = in_force().of(site.id if site else None)
        clocks.climb_anew(site, ladder, at)
        act.about(site, site=site)
        act.tell(_told(site, ladder), {"rungs": [_words(_rung(row)) for row in before]})
    return ladder


def may_set(site_id: int | None, *, actor: Person, at: dt.datetime) -> bool:
    """Whether the actor may set the ladder of a site, or (None) of the group."""
    return may(actor, "ladder.set", site_id, at)


def _rows(site: Site | None) -> list[LadderRung]:
    return list(LadderRung.objects.filter(site=site, ended_at=None).order_by("id"))


def _rung(row: LadderRung) -> Rung:
    return Rung(row.level, row.recipient, row.after_days)


def _told(site: Site | None, ladder: Ladder) -> dict[str, object]:
    return {"site": site.code if site else None, "rungs": [_words(rung) for rung in ladder.rungs]}


def _words(rung: Rung) -> str:
    return (
        f"{rung.level}+{rung.after_days}/{rung.recipient}"
        if rung.after_days
        else f"{rung.level}/{rung.recipient}"
    )
