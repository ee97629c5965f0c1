"""Who may do what, where and when: roles, the permission table, and grants of a role at a site.

The table is common practice of hospital groups, with no published source, save that restoring equipment to use
belongs to physicists and clinical engineers, and that an administrator changes no record.
"""

from __future__ import annotations

import enum
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import date
from types import MappingProxyType
from typing import Final

from qa_tracker.core.errors import Invalid

ROLES: Final = ("user", "technician", "lead", "engineer", "physicist", "auditor", "administrator")

# A service asks further questions where a role alone can't answer: nobody countersigns their own work, and a
# token carries only what the person it acts for may do.
_TABLE: Final = """
verb                       user technician lead engineer physicist auditor administrator
see                        yes  yes        yes  yes      yes       yes     yes
check.enter_user           yes  yes        yes  yes      yes       no      no
check.enter                no   yes        yes  yes      yes       no      no
check.countersign          no   no         no   no       yes       no      no
check.excuse               no   no         yes  no       yes       no      no
check.move_due             no   no         yes  no       yes       no      no
check.accept_out_of_window no   no         no   no       yes       no      no
check.acknowledge          no   no         yes  no       yes       no      no
device.register            no   no         yes  yes      yes       no      no
device.edit                no   no         yes  yes      yes       no      no
device.place               no   yes        yes  yes      yes       no      no
device.accept              no   no         no   yes      yes       no      no
device.quarantine          yes  yes        yes  yes      yes       no      no
device.restore             no   no         no   yes      yes       no      no
device.repair              no   no         no   yes      yes       no      no
condition.set              no   no         yes  no       yes       no      no
object.register            no   no         yes  yes      yes       no      no
procedure.adopt            no   no         no   no       yes       no      no
criteria.adopt             no   no         no   no       yes       no      no
baseline.set               no   no         no   no       yes       no      no
plan.make                  no   no         yes  no       yes       no      no
ladder.set                 no   no         yes  no       yes       no      no
fault.open                 yes  yes        yes  yes      yes       no      no
fault.act                  no   yes        yes  yes      yes       no      no
fault.close                no   no         no   yes      yes       no      no
dossier.issue              no   no         yes  yes      yes       yes     no
dossier.read               no   yes        yes  yes      yes       yes     yes
ledger.read                no   yes        yes  yes      yes       yes     yes
person.manage              no   no         no   no       no        no      yes
site.manage                no   no         no   no       no        no      yes
mail.see                   no   no         no   no       no        no      yes
mail.send_again            no   no         no   no       no        no      yes
token.issue                no   yes        yes  yes      yes       yes     yes
"""
_CELLS: Final = {"yes": True, "no": False}


def _read(table: str) -> Mapping[str, Mapping[str, bool]]:
    heading, *rows = (line.split() for line in table.strip().splitlines())
    if tuple(heading[1:]) != ROLES:
        raise ValueError("the table's heading names the roles in their order")
    return MappingProxyType(
        {
            verb: MappingProxyType({role: _CELLS[cell] for role, cell in zip(ROLES, cells, strict=True)})
            for verb, *cells in rows
        }
    )


PERMISSIONS: Final = _read(_TABLE)
"""Verb, then role, to whether the role may do it. Every cell is there."""

VERBS: Final = tuple(PERMISSIONS)


class Reach(enum.Enum):
    """How far grants reach when they are bound to no site."""

    ALL = "all"


ALL: Final = Reach.ALL
"""The whole group: every site, and what belongs to no site."""


@dataclass(frozen=True)
class Grant:
    """A role held by a person.

    Parameters
    ----------
    role
        One of ``ROLES``.
    site_id
        The site it holds at; ``None`` is the whole group.
    from_on, until_on
        First and last local day it holds, both included; ``None`` has no end.
    """

    role: str
    site_id: int | None
    from_on: date
    until_on: date | None = None

    def holds_on(self, day: date) -> bool:
        """Tell whether the grant is in force on a day."""
        return self.from_on <= day and (self.until_on is None or day <= self.until_on)


def check_grant(grant: Grant) -> None:
    """Refuse a grant that can't be made: an unknown role, an end before its start, an auditor without an end."""
    if grant.role not in ROLES:
        raise Invalid("grant.unknown_role", field="role", role=grant.role)
    if grant.until_on is not None and grant.until_on < grant.from_on:
        raise Invalid(
            "grant.ends_before_start", field="until_on", from_on=grant.from_on, until_on=grant.until_on
        )
    if grant.role == "auditor" and grant.until_on is None:
        raise Invalid("grant.auditor_needs_end", field="until_on")


def grants_on(grants: Iterable[Grant], day: date) -> tuple[Grant, ...]:
    """Grants in force on a day, in the order given."""
    return tuple(grant for grant in grants if grant.holds_on(day))


def sites_for(grants: Iterable[Grant], verb: str, day: date) -> frozenset[int] | Reach:
    """Sites at which a person may do something on a day.

    Returns
    -------
    frozenset of int, or ``ALL``
        ``ALL`` as soon as one grant without a site allows it; an empty set where nothing does. A verb that is
        not in the table is a mistake in the program and raises ``KeyError``.

    Examples
    --------
    >>> first = date(2025, 1, 1)
    >>> sites_for([Grant("technician", 3, first), Grant("user", None, first)], "check.enter", first)
    frozenset({3})
    """
    allowed = PERMISSIONS[verb]
    site_ids = {grant.site_id for grant in grants_on(grants, day) if allowed[grant.role]}
    return ALL if None in site_ids else frozenset(site_id for site_id in site_ids if site_id is not None)


def may(grants: Iterable[Grant], verb: str, site_id: int | None, day: date) -> bool:
    """Tell whether a person may do something at a site on a day.

    A ``site_id`` of ``None`` asks about what belongs to the whole group, such as a procedure: only a grant
    without a site allows it.
    """
    sites = sites_for(grants, verb, day)
    return sites is ALL or site_id in sites


def may_somewhere(grants: Iterable[Grant], verb: str, day: date) -> bool:
    """Tell whether there is any site at which a person may do something on a day."""
    sites = sites_for(grants, verb, day)
    return sites is ALL or bool(sites)
