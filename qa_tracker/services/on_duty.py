"""Who is on duty on a day: the person responsible or the team, its rota, and deputies of those on leave."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from dataclasses import dataclass

from django.db.models import Q

from qa_tracker.core.rota import stand_in, turn_of
from qa_tracker.records.models import Leave, Person, Team, TeamMember


@dataclass(frozen=True)
class Duties:
    """Who is on duty on one day; read once, asked any number of times.

    ``teams`` are those whose turn it is by team, before leave; ``deputies`` those who stand in for whom.
    """

    present: frozenset[int]
    teams: Mapping[int, tuple[int, ...]]
    deputies: Mapping[int, int]

    def of(self, responsible_id: int | None, team_id: int | None) -> tuple[int, ...]:
        """Keys of the people on duty; nobody twice, none of those who have gone."""
        asked = self.teams.get(team_id, ()) if team_id is not None else ()
        if responsible_id is not None:
            asked = (responsible_id, *asked)
        found = (stand_in(person, self.deputies, self.present) for person in asked)
        return tuple(dict.fromkeys(person for person in found if person is not None))


def load(on: dt.date) -> Duties:
    """Read the duties of a day, in four queries however many plans there are."""
    present = frozenset(Person.objects.filter(is_active=True).values_list("id", flat=True))
    away = Leave.objects.filter(from_on__lte=on, until_on__gte=on, cancelled_at=None).order_by("id")
    deputies = dict(away.values_list("person_id", "deputy_id"))
    return Duties(present, _teams(on, present), deputies)


def _teams(on: dt.date, present: frozenset[int]) -> dict[int, tuple[int, ...]]:
    standing = Q(team__ended_at=None) & Q(from_on__lte=on) & (Q(until_on=None) | Q(until_on__gte=on))
    members: dict[int, list[int]] = {}
    for team, person in (
        TeamMember.objects.filter(standing)
        .order_by("team_id", "position", "id")
        .values_list("team_id", "person_id")
    ):
        if person in present:
            members.setdefault(team, []).append(person)
    rotas = {team.id: team for team in Team.objects.filter(id__in=members, rota_weeks__gt=0)}
    return {key: _with_the_turn(rotas.get(key), people, on) for key, people in members.items()}


def _with_the_turn(rota: Team | None, people: list[int], on: dt.date) -> tuple[int, ...]:
    if rota is None or rota.rota_from_on is None:
        return tuple(dict.fromkeys(people))
    return (turn_of(people, rota.rota_weeks, rota.rota_from_on, on),)
