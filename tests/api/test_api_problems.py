"""Refusals have one shape, whatever refused: RFC 9457 with code, field and a sentence."""

from __future__ import annotations

import uuid

import pytest
from django.test import Client

from tests.api.world import ROOT

MEMBERS = {"type", "title", "status", "detail", "code", "field", "errors"}


def raw(caller, method, path, body=""):
    sent = {"data": body, "content_type": "application/json"} if method == "post" else {}
    told = {"authorization": f"Bearer {caller.token}"}
    return getattr(caller.client, method)(f"{ROOT}{path}", headers=told, **sent)


@pytest.mark.parametrize(
    ("method", "path", "body", "status", "code"),
    [
        pytest.param("get", "/sights", "", 404, "request.address_unknown", id="no such address"),
        pytest.param("get", "/", "", 404, "request.address_unknown", id="the root"),
        pytest.param("post", "/sites", "{}", 405, "request.method_wrong", id="wrong method"),
        pytest.param("post", "/faults", "{", 400, "request.not_json", id="no JSON"),
        pytest.param("post", "/faults", "{}", 422, "several", id="several missing"),
        pytest.param("get", f"/checks/{uuid.UUID(int=7)}", "", 404, "check.unknown", id="out of sight"),
        pytest.param("get", "/checks/seven", "", 404, "request.address_unknown", id="no uid"),
        pytest.param("get", "/people", "", 403, "role.not_allowed", id="role"),
        pytest.param("get", "/devices?limit=201", "", 422, "several", id="page too long"),
        pytest.param("get", f"/devices?after={2**64}", "", 422, "several", id="no cursor"),
    ],
)
def test_refusal_has_the_one_shape_whatever_refused(world, method, path, body, status, code):
    answer = raw(world.near["technician"], method, path, body)
    told = answer.json()
    assert (answer.status_code, answer["Content-Type"]) == (status, "application/problem+json")
    assert (told["status"], told["code"]) == (status, code)
    assert set(told) == MEMBERS
    assert all(set(each) == {"code", "field", "detail"} for each in told["errors"])
    assert "Tell the administrator what you were doing" not in told["detail"]


def test_each_missing_input_is_named_when_several_are(world):
    told = world.near["technician"].post("/faults", {"place": "Room 2"}, 422)
    assert {each["field"] for each in told["errors"]} == {"device", "grade", "seen"}


@pytest.mark.parametrize(
    ("change", "field"),
    [
        pytest.param({"sen": "x"}, "sen", id="a name it does not know"),
        pytest.param({"seen": 7}, "seen", id="a number for text"),
        pytest.param({"seen": "a\u0000b"}, "seen", id="a NUL"),
        pytest.param({"seen": "\ud800"}, "seen", id="half a character"),
        pytest.param({"place": "x" * 61}, "place", id="too long for its column"),
    ],
)
def test_body_is_refused_beside_its_field_when_it_can_not_be_kept(world, change, field):
    body = {"device": world.ward.probe.uid, "grade": "remedial", "seen": "Scuffed"} | change
    told = world.near["technician"].post("/faults", body, 422)
    assert [each["field"] for each in told["errors"]] == [field]


def test_command_refused_by_its_own_rule_names_code_and_field(world):
    body = {"device": world.ward.probe.uid, "grade": "dreadful", "seen": "Scuffed"}
    told = world.near["technician"].post("/faults", body, 422)
    assert (told["code"], told["field"]) == ("fault.grade_unknown", "grade")


def test_wrong_method_names_those_it_takes(world):
    assert raw(world.near["technician"], "post", "/sites", "{}")["Allow"] == "GET"


@pytest.mark.django_db
def test_document_is_public_and_the_docs_page_is_off():
    assert Client().get(f"{ROOT}/openapi.json").status_code == 200
    assert Client().get(f"{ROOT}/docs").status_code == 404
