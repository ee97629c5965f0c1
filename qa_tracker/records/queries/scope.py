"""What a person may see: the sites of their grants, what those sites hold, and what once was there."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from django.db.models import Q

from qa_tracker.core.roles import ALL, Grant, Reach, sites_for
from qa_tracker.records.models import RoleGrant
from qa_tracker.records.queries.as_of import nouns


@dataclass(frozen=True)
class Scope:
    """Sites in sight; ``ALL`` is the whole group."""

    sites: frozenset[int] | Reach

    @property
    def whole_group(self) -> bool:
        """Whether nothing is out of sight."""
        return self.sites is ALL

    def holds(self, site_id: int | None) -> bool:
        """Whether a site is in sight."""
        return self.sites is ALL or (isinstance(self.sites, frozenset) and site_id in self.sites)

    def site_ids(self) -> frozenset[int]:
        """The sites by id; empty for the whole group, which needs no list."""
        return self.sites if isinstance(self.sites, frozenset) else frozenset()


EVERYTHING = Scope(ALL)


def grants_of(person_id: int, as_of: dt.datetime | None = None) -> tuple[Grant, ...]:
    """The grants a person holds or held, as pure values."""
    return tuple(
        Grant(grant.role, grant.site_id, grant.from_on, grant.until_on)
        for grant in nouns(RoleGrant, as_of, person_id=person_id)
    )


def scope_of(person_id: int, on: dt.date, verb: str = "see") -> Scope:
    """The scope a person has on a day for a verb."""
    return Scope(sites_for(grants_of(person_id), verb, on))


def devices_in(scope: Scope, prefix: str = "") -> Q:
    """Devices held now by a site in sight, or pooled with one."""
    if scope.whole_group:
        return Q()
    ids = scope.site_ids()
    pooled = f"{prefix}pool__members__site_id__in"
    return Q(**{f"{prefix}site_id__in": ids}) | Q(**{pooled: ids})


def checks_in(scope: Scope) -> Q:
    """Checks of a site in sight at their time, or of a device now in sight."""
    if scope.whole_group:
        return Q()
    return Q(site_id__in=scope.site_ids()) | devices_in(scope, "device__")
