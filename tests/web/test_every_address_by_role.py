"""Every address, every role, a second site: what belongs to another site answers exactly as what isn't there."""

from __future__ import annotations

import re
import uuid

import pytest
from django.urls import URLPattern, URLResolver, get_resolver
from django.utils.timezone import now

from qa_tracker.core.roles import ROLES
from qa_tracker.services import dossiers, states
from tests import builders

pytestmark = pytest.mark.django_db
TOKEN = re.compile(r'name="csrfmiddlewaretoken" value="[^"]+"')
# Procedures and limits belong to the group, so everyone sees them.
OF_THE_GROUP = ("criteria/",)


def addresses(resolver=None, before=""):
    """Each page's route that names one thing by uid."""
    for entry in (resolver or get_resolver()).url_patterns:
        route = before + str(entry.pattern)
        if isinstance(entry, URLResolver):
            yield from addresses(entry, route)
        elif isinstance(entry, URLPattern) and "<uuid:uid>" in route and not route.startswith("api/"):
            yield route


ROUTES = [route for route in addresses() if not route.startswith(OF_THE_GROUP)]


@pytest.fixture
def theirs(settings, tmp_path):
    """Aldermoor's things by the first word of their addresses, and a second site's people, one of each role."""
    settings.DATA_DIR, settings.MEDIA_ROOT = tmp_path, tmp_path / "files"
    ward = builders.ward()
    fault = states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())
    dossier = dossiers.request(device=ward.probe.uid, actor=ward.physicist, at=now())
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    people = {role: builders.person(ward.admin, f"kb-{role}", role, other) for role in ROLES}
    things = {
        "devices": ward.probe.uid,
        "checks": ward.check.uid,
        "faults": fault.uid,
        "dossiers": dossier.uid,
        "people": ward.technician.uid,
        "sites": ward.site.uid,
    }
    return things, people


def filled(route, uid):
    """The address with this uid, and something that is not there for every other parameter."""
    address = "/" + route.replace("<uuid:uid>", str(uid))
    address = re.sub(r"<uuid:\w+>", str(uuid.UUID(int=9)), address)
    return re.sub(r"<(slug|str):\w+>", "restrict", address)


def answer(browser, method, route, uid):
    response = getattr(browser, method)(filled(route, uid))
    body = b"".join(response) if response.streaming else response.content
    text = TOKEN.sub("", body.decode()).replace(str(uid), "UID")
    place = response.headers.get("Location", "").replace(str(uid), "UID")
    return response.status_code, place, text


def test_routes_are_found():
    assert len(ROUTES) > 25
    assert {route.split("/")[0] for route in ROUTES} == {
        "devices", "checks", "faults", "dossiers", "people", "sites",
    }  # fmt: skip


def test_another_sites_thing_answers_as_one_that_is_not_there(theirs):
    things, people = theirs
    differing = []
    for role, person in people.items():
        browser = builders.signed_in(person)
        for route in ROUTES:
            for method in ("get", "post"):
                real = answer(browser, method, route, things[route.split("/")[0]])
                absent = answer(browser, method, route, uuid.UUID(int=7))
                if real != absent or real[0] not in {403, 404, 405}:
                    differing.append((role, method, route, real[0], absent[0]))
    assert differing == []


def test_lists_name_nothing_of_another_site(theirs):
    _, people = theirs
    shown = []
    for role, person in people.items():
        browser = builders.signed_in(person)
        for address in (
            "/",
            "/register/",
            "/checks/",
            "/faults/",
            "/dossiers/",
            "/ledger/",
            "/people/",
            "/sites/",
        ):
            text = browser.get(address).content.decode()
            shown += [
                (role, address, word) for word in ("C5-2207", "Castellane", "Aldermoor") if word in text
            ]
    assert shown == []
