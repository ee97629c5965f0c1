"""The document: valid OpenAPI 3.1, stable names, a way in and every refusal at each operation."""

from __future__ import annotations

import pytest
from django.test import Client
from schemathesis.specs.openapi.definitions import OPENAPI_31_VALIDATOR

from tests.api.world import ROOT

DOCUMENT = f"{ROOT}/openapi.json"
PROBLEM = {"application/problem+json": {"schema": {"$ref": "#/components/schemas/Problem"}}}


@pytest.fixture(scope="module")
def document():
    return Client().get(DOCUMENT).json()


@pytest.fixture(scope="module")
def operations(document):
    return {
        told["operationId"]: (method, path, told)
        for path, methods in document["paths"].items()
        for method, told in methods.items()
    }


def references(part):
    """Every reference in a part of the document."""
    if isinstance(part, dict):
        yield from ([part["$ref"]] if "$ref" in part else [])
        part = list(part.values())
    if isinstance(part, list):
        for each in part:
            yield from references(each)


def test_document_is_valid_openapi_of_3_1(document):
    assert document["openapi"].startswith("3.1.")
    assert [error.message for error in OPENAPI_31_VALIDATOR.iter_errors(document)] == []
    assert [error.message for error in OPENAPI_31_VALIDATOR.iter_errors(document | {"paths": {"x": 7}})] != []


def test_every_reference_leads_somewhere(document):
    known = {f"#/components/schemas/{name}" for name in document["components"]["schemas"]}
    assert set(references(document["paths"])) | set(references(document["components"])) <= known


def test_every_operation_has_a_name_of_its_own(document, operations):
    assert len(operations) == sum(len(methods) for methods in document["paths"].values())


def test_every_operation_says_what_it_does_and_how_to_get_in(operations):
    lacking = [
        name
        for name, (_, _, told) in operations.items()
        if not (told.get("description") and told["security"] == [{"BearerToken": []}])
    ]
    assert lacking == []


def test_every_operation_declares_its_refusals_as_problems(operations):
    for name, (method, path, told) in operations.items():
        wanted = {"401", "403", "422"} | ({"404"} if "{" in path else set())
        wanted |= {"400", "404", "409"} if method == "post" else set()
        refused = {
            status: answer["content"] for status, answer in told["responses"].items() if status >= "400"
        }
        assert wanted <= set(refused), name
        assert all(content == PROBLEM for content in refused.values()), name


def test_every_success_declares_its_shape(operations):
    for name, (_, _, told) in operations.items():
        (success,) = (answer for status, answer in told["responses"].items() if status < "300")
        assert next(iter(success["content"].values()))["schema"], name


def test_moments_and_uids_have_their_formats(document):
    shapes = document["components"]["schemas"]
    assert shapes["DeviceOut"]["properties"]["state_since"]["format"] == "date-time"
    assert shapes["DeviceOut"]["properties"]["uid"]["format"] == "uuid"
