"""The API under ``/api/v1``: one document, one way in, and the routes of each noun."""

from __future__ import annotations

from qa_tracker.api import (
    baselines,
    checks,
    compared,
    devices,
    errors,
    evidence,
    faults,
    ladders,
    library,
    notices,
    places,
    planning,
    signing,
    uncertainties,
)
from qa_tracker.api.authentication import BearerToken
from qa_tracker.api.openapi import JsonApi

api = JsonApi(
    title="Leadline",
    version="1",
    description=(
        "Quality records of an ultrasound fleet. Readings are text with a unit, exactly as entered; moments are "
        "in UTC; refusals are problem details (RFC 9457) with a code, the field, and a sentence for a person."
    ),
    docs_url=None,
    openapi_url="/openapi.json",
    urls_namespace="api",
    auth=BearerToken(),
)
errors.install(api)
NOUNS = (
    places, devices, library, compared, uncertainties, baselines, checks, signing, faults, evidence, planning, notices,
    ladders,
)  # fmt: skip
for noun in NOUNS:
    api.add_router("", noun.router)
