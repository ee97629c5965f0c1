"""Every address asks who you are, but for a written list."""

from __future__ import annotations

import re
import uuid

import pytest
from django.conf import settings
from django.test import Client
from django.urls import URLPattern, URLResolver, get_resolver, reverse

OPEN = {
    "sign-in": "where one signs in",
    "first-administrator": "nobody has an account yet; refused once somebody has",
    "calendar-feed": "a calendar program can't sign in; a secret in the address says whose it is, any other is not there",
    "health": "asked by what watches over the program; it names no record",
}
OPEN_IN_API = {
    "openapi-json": "the document of the API; the same in every hospital",
    "api-root": "answers that nothing is here",
    "api/v1/<path:rest>": "answers that nothing is here",
}
SAMPLES = {
    "uuid": str(uuid.UUID(int=7)),
    "uuidstr": str(uuid.UUID(int=7)),
    "int": "7",
    "slug": "x",
    "str": "x",
    "path": "x",
}
PARAMETER = re.compile(r"<(?:(?P<kind>\w+):)?\w+>")
METHODS = ("get", "post", "put", "patch", "delete")


def leaves(resolver, before=""):
    """Each address with its name, its parameters filled in with samples."""
    for entry in resolver.url_patterns:
        route = before + str(entry.pattern)
        if isinstance(entry, URLResolver):
            yield from leaves(entry, route)
        elif isinstance(entry, URLPattern):
            filled = PARAMETER.sub(lambda found: SAMPLES[found["kind"] or "str"], route)
            yield entry.name or route, "/" + filled.lstrip("^").rstrip("$")


@pytest.fixture
def addresses():
    return list(leaves(get_resolver()))


def asks_who_you_are(response):
    """Sent to sign in, told to bring a token, or refused before anybody looked at what was asked."""
    to_sign_in = response.status_code == 302 and response.url.startswith(reverse(settings.LOGIN_URL))
    return to_sign_in or response.status_code in {401, 405}


def test_addresses_are_found(addresses):
    assert len([address for _, address in addresses if not address.startswith("/api/")]) >= 10
    assert len([address for _, address in addresses if address.startswith("/api/")]) >= 3


@pytest.mark.parametrize("method", METHODS)
def test_every_address_asks_who_you_are(db, addresses, method):
    client = Client()
    for name, address in addresses:
        if name not in OPEN | OPEN_IN_API:
            assert asks_who_you_are(getattr(client, method)(address)), f"{method} {name} {address}"


def test_every_address_is_asked_by_a_method_it_knows(db, addresses):
    client = Client()
    for name, address in addresses:
        if name not in OPEN | OPEN_IN_API:
            said = {getattr(client, method)(address).status_code for method in METHODS}
            assert said & {302, 401}, f"{name} {address}"


@pytest.mark.parametrize("name", OPEN | OPEN_IN_API)
def test_open_address_is_still_there(addresses, name):
    assert name in {each for each, _ in addresses}
