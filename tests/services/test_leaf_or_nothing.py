"""Every command writes its rows and one leaf, or nothing at all."""

from __future__ import annotations

import datetime as dt
import hashlib
import importlib
import inspect
import itertools
import json
import pkgutil
import uuid
from collections.abc import Callable
from typing import Any

import pytest
from baseline_leaves import BASELINES, PROPOSALS
from criteria_leaves import CRITERIA
from django.apps import apps
from django.db import connection
from django.utils.timezone import now
from duty_leaves import ASKED_OF_DUTIES, DUTIES
from editor_leaves import DRAFTS, EDITOR
from feed_leaves import FEEDS
from life_leaves import ASKED_OF_LIFE, LIFE
from notice_leaves import ASKED_OF_HOLDS, HOLDS

import qa_tracker.services
from qa_tracker.core.canonical import canonical
from qa_tracker.records import ledger
from qa_tracker.records.models import ApiToken, CriteriaSet, Edition, Location, RoleGrant, StatedUncertainty
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import (
    checkpoints,
    checks,
    dossiers,
    drafts,
    faults,
    library,
    people,
    rechecking,
    states,
    uncertainties,
    upkeep,
)
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Identity, Place
from qa_tracker.services.plans import Recurrence
from qa_tracker.services.uncertainties import Statement
from qa_tracker.services.wording import leaf_sentence
from qa_tracker.services.wording_leaves import SENTENCES
from tests import builders
from tests.builders import PASSWORD, Ward

numbers = itertools.count(1)
Given = dict[str, Any]


# What the rows of the table stand on: each makes things of its own, so that all can run one after another.


def stated(ward: Ward) -> StatedUncertainty:
    statement = Statement("reverberation_depth", "expanded", "0.5", source="Certificate")
    return uncertainties.state(statement=statement, site=None, actor=ward.physicist, at=now())


def place(ward: Ward) -> Place:
    return Place(site=ward.site, location=ward.room)


def identity() -> Identity:
    return Identity("Ostrigard", "L9", f"L9-{next(numbers)}")


def probe(ward: Ward) -> uuid.UUID:
    return builders.probe(ward.physicist, place(ward), serial=f"C5-{next(numbers)}").uid


def unaccepted(ward: Ward) -> uuid.UUID:
    given = {"identity": identity(), "place": place(ward), "actor": ward.physicist, "at": now()}
    return command("devices.register_probe")(**given, **PROBE).uid


def quarantined(ward: Ward) -> uuid.UUID:
    device = probe(ward)
    states.quarantine(device=device, seen="Lens cracked", actor=ward.user, at=now())
    return device


def check(ward: Ward):
    device = builders.probe(ward.physicist, place(ward), serial=f"C5-{next(numbers)}")
    return builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist)


def done(ward: Ward):
    planned = check(ward)
    return planned, builders.submitted(planned, ward.technician, reverberation_depth="8.5")


def fault(ward: Ward) -> uuid.UUID:
    given = {"grade": "remedial", "seen": "Cable worn", "place": "strain relief"}
    return faults.open_fault(device=probe(ward), **given, actor=ward.user, at=now()).uid


def procedure(edition: int) -> Given:
    path = builders.FIXTURES / "procedures" / "user-check.json"
    return json.loads(path.read_text(encoding="utf-8")) | {"edition": edition}


def criteria(edition: str) -> Given:
    path = builders.FIXTURES / "criteria" / "dropout-2014.json"
    return json.loads(path.read_text(encoding="utf-8")) | {"edition": edition}


def signing(ward: Ward) -> Given:
    planned = check(ward)
    drafts.keep(check=planned.uid, typed={"remark": "half"}, revision=0, actor=ward.technician, at=now())
    typed = Typed(builders.answers(planned, ward.technician, lens_grade="red"), cleaned_before="Wipe")
    seen = checks.preview(check=planned.uid, typed=typed, whole=True, actor=ward.technician, at=now())
    return {
        "check": planned.uid, "form_uid": uuid.uuid4(), "typed": typed, "shown_sha256": seen.shown_sha256,
        "password": PASSWORD, "quarantine": True, "actor": ward.technician,
    }  # fmt: skip


def countersigning(ward: Ward) -> Given:
    planned, submission = done(ward)
    shown = {"check": planned.uid, "shown_sha256": submission.shown_sha256}
    return {**shown, "remark": "seen", "password": PASSWORD, "actor": ward.physicist}


def adopting_edition(ward: Ward) -> Given:
    library.publish_procedure(document=procedure(8), actor=ward.physicist, at=now())
    return {"edition": Edition.objects.get(procedure__code="user-check", number=8), "site": ward.site}


def dossier(ward: Ward):
    return dossiers.request(device=ward.probe.uid, actor=ward.physicist, at=now())


def checkpointed(ward: Ward) -> uuid.UUID:
    """A dossier's checkpoint is made before it and is no part of it."""
    device = probe(ward)
    checkpoints.make(at=now())
    return device


def left_behind(ward: Ward) -> Given:
    dossiers._move(dossier(ward), "render", now() - dt.timedelta(hours=1), {})
    return {}


def token(ward: Ward) -> int:
    people.issue_token(label="Lab reader", actor=ward.technician, at=now())
    return ApiToken.objects.latest("pk").pk


def other_site(ward: Ward):
    return builders.site(ward.admin, f"S{next(numbers)}", "Kestrel Bay")


PROBE = {
    "array_kind": "linear", "contact_class": "skin", "applied_part": "BF", "apertures": [("main", 128)],
}  # fmt: skip
RULE = Recurrence("FREQ=MONTHLY", "calendar", dt.date(2031, 1, 31), before_days=7, grace_days=7)
SIGNED = {"remark": "as new", "password": PASSWORD}
LOGIN = {"name": "Ola Marchbank", "email": "ola@tarnwater.invalid", "password": PASSWORD}
TODAY = dt.date(2030, 1, 1)

TABLE: dict[str, Callable[[Ward], Given]] = {
    "sweep.sweep": lambda w: {"as_if": w.check.due_at + dt.timedelta(hours=1)},
    "sites.create": lambda w: {
        "code": "KB", "name": "Kestrel Bay", "time_zone": "Europe/Paris", "actor": w.admin,
    },
    "sites.instruct": lambda w: {
        "site": other_site(w), "remedial_instruction": "Label it.", "suspension_instruction": "Stop.",
        "actor": w.admin,
    },
    "sites.add_location": lambda w: {"site": w.site, "name": "Clinic", "position": 9, "actor": w.admin},
    "sites.add_holidays": lambda w: {"site": w.site, "days": {TODAY: "New Year"}, "actor": w.admin},
    "sites.create_pool": lambda w: {"name": "Bank", "sites": [w.site, other_site(w)], "actor": w.admin},
    "people.create": lambda w: {"username": "marchbank", **LOGIN, "site": w.site, "actor": w.admin},
    "people.grant_role": lambda w: {
        "person": w.user.uid, "role": "auditor", "site": w.site, "from_on": TODAY,
        "until_on": TODAY + dt.timedelta(days=30), "actor": w.admin,
    },
    "people.end_role": lambda w: {
        "grant": RoleGrant.objects.get(person=w.user, role="user").uid, "until_on": dt.date(2040, 1, 1),
        "reason": "leaves", "actor": w.admin,
    },
    "people.set_password": lambda w: {"person": w.user.uid, "password": f"{PASSWORD} new", "actor": w.admin},
    "people.issue_token": lambda w: {"label": "Reader", "actor": w.technician},
    "people.revoke_token": lambda w: {"token_id": token(w), "actor": w.technician},
    "library.publish_procedure": lambda w: {"document": procedure(7), "actor": w.physicist},
    "library.publish_criteria": lambda w: {"document": criteria("2099"), "actor": w.physicist},
    "library.adopt_edition": lambda w: {**adopting_edition(w), "remark": "", "actor": w.physicist},
    "library.adopt_criteria": lambda w: {
        "criteria_set": CriteriaSet.objects.first(), "site": w.site, "remark": "ours", "actor": w.physicist,
    },
    **CRITERIA,
    **EDITOR,
    **HOLDS,
    **DUTIES,
    **LIFE,
    **FEEDS,
    "uncertainties.state": lambda w: {
        "statement": Statement("reverberation_depth", "standard", "0.3", source="Repeats of March"),
        "site": w.site, "actor": w.physicist,
    },
    "uncertainties.end": lambda w: {
        "statement": stated(w).uid, "reason": "The object was replaced", "actor": w.physicist,
    },
    "objects.register_test_object": lambda w: {
        "site": w.site, "name": "Phantom", "serial": "TM-1", "material": "hydrogel",
        "nominals": {"vertical_distance": "80.0"}, "actor": w.physicist,
    },
    "objects.register_instrument": lambda w: {
        "site": w.site, "kind": "leakage_tester", "maker": "Ostrigard", "model": "E2", "serial": "7",
        "calibration_due_on": None, "actor": w.physicist,
    },
    "devices.register_scanner": lambda w: {
        "identity": identity(), "place": place(w), "software_version": "1", "actor": w.physicist,
    },
    "devices.register_probe": lambda w: {
        "identity": identity(), "place": place(w), **PROBE, "actor": w.physicist,
    },
    "devices.move": lambda w: {
        "device": probe(w), "place": Place(site=other_site(w)), "reason": "swap", "actor": w.physicist,
    },
    "devices.edit": lambda w: {
        "device": w.probe.uid, "changes": {"keeper": "Room 2"}, "actor": w.physicist,
    },
    "devices.record_software": lambda w: {
        "scanner": w.scanner.uid, "version": "4.3", "options": "", "since_on": TODAY, "actor": w.physicist,
    },
    "devices.set_condition": lambda w: {
        "device": probe(w), "name": "In air", "test_frequency_mhz": "3.5", "sound_speed_m_s": "",
        "settings": {"gain": "full"}, "actor": w.physicist,
    },
    "states.accept": lambda w: {"device": unaccepted(w), **SIGNED, "actor": w.physicist},
    "states.quarantine": lambda w: {"device": probe(w), "seen": "Lens cracked", "actor": w.user},
    "states.restore": lambda w: {
        "device": restorable(w), "proving_check": None, **SIGNED, "actor": w.physicist,
    },
    "states.move_on": lambda w: {
        "device": probe(w), "verb": "lose", "note": "not on the ward", "actor": w.physicist,
    },
    "plans.make": lambda w: {
        "device": probe(w), "procedure": builders.MONTHLY, "recurrence": RULE, "responsible": w.technician,
        "actor": w.physicist,
    },
    "plans.end": lambda w: {"plan": check(w).plan.uid, "reason": "sold", "actor": w.physicist},
    **BASELINES,
    "checks.submit": signing,
    "checks.countersign": countersigning,
    "checks.send_back": countersigning,
    "checks.could_not_test": lambda w: {
        "check": check(w).uid, "reason": "in_theatre", "remark": "", "actor": w.user,
    },
    "checks.open_unplanned": lambda w: {
        "device": probe(w), "procedure": builders.MONTHLY, "actor": w.technician,
    },
    "excuses.excuse": lambda w: {"check": check(w).uid, "reason": "ward closed", "actor": w.physicist},
    "faults.open_fault": lambda w: {
        "device": probe(w), "grade": "remedial", "seen": "Cable worn", "place": "", "actor": w.user,
    },
    "faults.act_on": lambda w: {
        "fault": fault(w), "kind": "told", "text": "Phoned the maker", "job_number": "J-1",
        "actor": w.technician,
    },
    "faults.look_back": lambda w: {"fault": fault(w), "statement": "No scans since.", "actor": w.physicist},
    "faults.dismiss": lambda w: {"fault": fault(w), "remark": "Only dirt.", "actor": w.physicist},
    "dossiers.request": lambda w: {"device": checkpointed(w), "actor": w.physicist},
    "dossiers.request_at_console": lambda w: {"device": checkpointed(w)},
    "dossiers.render": lambda w: {"dossier_id": dossier(w).pk},
    "dossiers.release_stuck": left_behind,
}  # fmt: skip

LEAVES = {"dossiers.render": 2}  # it says that it begins, then outside any transaction draws and seals

WITHOUT_A_WARD = {
    "people.create_first_administrator": "needs a database without people; see test_people_first",
    "demo.load": "many commands through the bulk door, into a database without people",
    "shipped.publish_shipped": "many commands, each of them in the table",
}
WITHOUT_A_LEAF = {
    **PROPOSALS,
    **DRAFTS,
    **ASKED_OF_HOLDS,
    **ASKED_OF_DUTIES,
    **ASKED_OF_LIFE,
    "checks.sheet": "reads",
    "checks.preview": "reads",
    "checks.check_may_enter": "asks",
    "checks.may_enter": "asks",
    "checks.check_may_countersign": "asks",
    "checks.may_countersign": "asks",
    "excuses.may_excuse": "asks",
    "outside.may_accept": "asks",
    "outside.asks_reason": "asks",
    "outside.check_window": "asks",
    "dossiers.file_bytes": "reads",
    "dossiers.verify": "reads",
    "dossier_content.device_content": "reads",
    "health.health": "reads",
    "drafts.find": "reads",
    "drafts.keep": "a draft is no record",
    "drafts.drop": "a draft is no record",
    "owed.mark_seen": "a reading mark is no record",
    "checkpoints.make": "a checkpoint signs what the leaves are and is none of them",
    "keys.seal_key": "makes a key, outside the database",
}
BULK_DOORS = ("history", "demo_")  # their leaves are appended together, by the door they come through


def restorable(ward: Ward) -> uuid.UUID:
    device = probe(ward)
    states.move_on(device=device, verb="restrict", note="left half only", actor=ward.physicist, at=now())
    return device


def command(name: str) -> Callable[..., Any]:
    module, _, function = name.partition(".")
    return getattr(importlib.import_module(f"qa_tracker.services.{module}"), function)


def found() -> set[str]:
    """Every public function of the services that takes a moment by name."""
    names = set()
    for module in pkgutil.iter_modules(qa_tracker.services.__path__):
        loaded = importlib.import_module(f"qa_tracker.services.{module.name}")
        for name, function in inspect.getmembers(loaded, inspect.isfunction):
            at = inspect.signature(function).parameters.get("at")
            own = function.__module__ == loaded.__name__ and not name.startswith("_")
            if own and at is not None and at.kind is at.KEYWORD_ONLY:
                names.add(f"{module.name}.{name}")
    return {name for name in names if not name.startswith(BULK_DOORS)}


def everything() -> dict[str, tuple[int, str]]:
    """Number of rows and hash of the content of every table."""
    told = {}
    for model in apps.get_app_config("leadline").get_models():
        rows = list(model._base_manager.order_by("pk").values_list())
        told[model.__name__] = len(rows), hashlib.sha256(repr(rows).encode()).hexdigest()
    return told


def test_every_command_is_in_the_table_or_said_to_be_without_a_leaf():
    known = [*TABLE, *WITHOUT_A_LEAF, *WITHOUT_A_WARD]
    assert len(known) == len(set(known))
    assert set(known) == found()


@pytest.mark.parametrize("name", TABLE)
def test_command_writes_one_leaf_that_is_canonical_and_can_be_said(shared_ward, name):
    given = TABLE[name](shared_ward)
    size, _ = ledger.state()
    command(name)(**given, at=now())
    connection.check_constraints()
    wanted = LEAVES.get(name, 1)
    assert ledger.state()[0] == size + wanted
    for leaf in list_leaves(EVERYTHING, most=wanted):
        assert canonical(json.loads(leaf.content)) == leaf.content.encode()
        assert leaf.kind in SENTENCES
        assert leaf.actor_uid == getattr(given.get("actor"), "uid", None)
        assert "…" not in leaf_sentence(leaf)


class LeafFailed(Exception):
    """What the ledger raises here instead of appending."""


@pytest.mark.parametrize("name", TABLE)
def test_command_writes_nothing_when_its_leaf_can_not_be_written(shared_ward, monkeypatch, name):
    def fail(acts):
        raise LeafFailed([act.kind for act in acts])

    given, before = TABLE[name](shared_ward), everything()
    monkeypatch.setattr(ledger, "append", fail)
    with pytest.raises(LeafFailed):
        command(name)(**given, at=now())
    assert everything() == before


def test_ledger_covers_every_row_when_all_commands_have_run(shared_ward):
    for name, make in TABLE.items():
        command(name)(**make(shared_ward), at=now())
    connection.check_constraints()
    assert upkeep.verify_ledger().problems == ()
    assert rechecking.recheck_verdicts().problems == ()
    assert Location.objects.filter(name="Clinic").exists()
