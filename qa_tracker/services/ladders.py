"""The ladder of a site: its own, or the group's, or the one the program comes with."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass
from typing import Final

from qa_tracker.core.ladder import Ladder, Rung
from qa_tracker.records.queries.ladders import rungs_in_force

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
