"""A device that goes to a site where the responsible person may not enter: someone there is named instead."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Invalid
from qa_tracker.records.models import CheckPlan
from qa_tracker.services import devices
from qa_tracker.services.devices import Place
from tests import builders


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def moved(ward, site, responsible=None):
    given = {"reason": "swap", "responsible": responsible, "actor": ward.physicist}
    devices.move(device=ward.probe.uid, place=Place(site=site), **given, at=now())
    return CheckPlan.objects.get(device=ward.probe)


def test_plan_goes_to_who_is_named_or_moves_it_where_the_person_may_not_enter(ward):
    bay = builders.site(ward.admin, "KB", "Kestrel Bay")
    with pytest.raises(Invalid) as refused:
        moved(ward, bay, ward.user)
    assert (refused.value.code, refused.value.field) == ("plan.responsible_may_not_enter", "responsible")
    assert moved(ward, bay).responsible_id == ward.physicist.pk


def test_responsible_person_stays_where_they_may_enter_at_the_new_place(ward):
    assert moved(ward, ward.site, ward.physicist).responsible_id == ward.technician.pk
