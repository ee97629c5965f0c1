"""Disposing of a device ends its faults: no proof will come."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Fault
from qa_tracker.services import states, upkeep
from tests import builders

pytestmark = pytest.mark.django_db


def test_faults_are_closed_with_the_reason_when_their_device_is_disposed_of():
    ward = builders.ward()
    states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())
    states.move_on(
        device=ward.probe.uid, verb="dispose", note="Scrapped, DC-12", actor=ward.physicist, at=now()
    )
    fault = Fault.objects.get(device=ward.probe)
    assert (fault.state, fault.close_remark) == ("closed", "Scrapped, DC-12")
    assert upkeep.verify_ledger().problems == ()
