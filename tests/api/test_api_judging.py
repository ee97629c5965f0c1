"""What judging answers over the API: who decided, every limit, editions compared, what another would have said."""

from __future__ import annotations

import uuid

import pytest

from qa_tracker.records.models import CriteriaSet
from tests.api.operations import entries


@pytest.fixture
def mine(world):
    return world.near["technician"]


def test_judged_check_names_the_item_that_decided(world, mine):
    given = entries(world)
    lens = next(key for key in given["entries"] if key.startswith("lens_grade"))
    given["entries"][lens]["text"] = "amber"
    said = mine.post(f"/checks/{world.waiting.uid}/judge", given, 200)
    assert (said["verdict"], said["decided_by"]) == ("remedial", lens)


def test_items_name_every_limit_that_judges_them(world, mine):
    for item in mine.get(f"/checks/{world.waiting.uid}/items")["items"]:
        codes = [each["code"] for each in item["criteria"]]
        assert codes[:1] == ([item["criterion"]["code"]] if item["criterion"] else [])


def test_statement_is_listed_where_it_holds_and_not_elsewhere(world):
    given = {"measurand": "reverberation_depth", "kind": "expanded", "entered": "1", "coverage_factor": "2"}
    here = {"source": "Certificate", "site": world.ward.site.uid}
    made = world.near["physicist"].post("/uncertainties", given | here)
    assert (made["site_code"], made["entered"], made["ended_at"]) == ("AG", "1", None)
    assert made["uid"] in [each["uid"] for each in world.near["auditor"].get("/uncertainties")]
    assert made["uid"] not in [each["uid"] for each in world.far["auditor"].get("/uncertainties")]


def test_statement_that_cannot_be_read_is_refused_field_by_field(world):
    given = {
        "measurand": "reverberation_depth",
        "kind": "standard",
        "entered": "-1",
        "source": " ",
        "site": world.ward.site.uid,
    }
    refused = world.near["physicist"].post("/uncertainties", given, 422)
    assert {each["field"] for each in refused["errors"]} == {"entered", "source"}


def test_edition_differs_in_nothing_from_itself(mine):
    uid = CriteriaSet.objects.first().uid
    told = mine.get(f"/criteria-sets/differences?old={uid}&new={uid}")
    assert {each["state"] for each in told} == {"same"}


def test_two_sets_tell_what_only_one_has(mine):
    one, other = CriteriaSet.objects.order_by("id")[:2]
    told = mine.get(f"/criteria-sets/differences?old={one.uid}&new={other.uid}")
    assert {each["state"] for each in told} & {"added", "removed"}
    assert all(each["old_code"] or each["new_code"] for each in told)


def test_edition_in_force_would_have_said_what_was_said(world, mine):
    judged = [
        mine.get(f"/criteria-sets/what-if?criteria_set={each.uid}")
        for each in CriteriaSet.objects.order_by("id")
    ]
    assert sum(each["readings"] for each in judged) > 0
    assert {each["changed"] for each in judged} == {0}


def test_other_sites_readings_are_not_asked(world):
    uid = CriteriaSet.objects.get(code="dropout").uid
    address = f"/criteria-sets/what-if?criteria_set={uid}"
    assert world.near["physicist"].get(address)["readings"] > 0
    assert world.far["physicist"].get(address)["readings"] == 0
    world.far["physicist"].get(f"{address}&site={world.ward.site.uid}", 404)


def test_set_that_is_not_there_is_not_found(mine):
    mine.get(f"/criteria-sets/what-if?criteria_set={uuid.uuid4()}", 404)
    mine.get(f"/criteria-sets/differences?old={uuid.uuid4()}&new={uuid.uuid4()}", 404)
