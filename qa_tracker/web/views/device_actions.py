"""What can be done with a device: quarantine, move, accept, restore, send on its way, name its conditions."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import NotFound
from qa_tracker.core.workflow import CHECK_DONE
from qa_tracker.records.queries import checks, devices, faults, people
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.devices import ConditionRow, DeviceRow
from qa_tracker.services import cautions, finding, guards, states, wording
from qa_tracker.services import devices as registering
from qa_tracker.web import sight
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.places import chosen_place, place_field
from qa_tracker.web.forms.registering import reason
from qa_tracker.web.forms.typed import LONGEST_REASON, Typed
from qa_tracker.web.marks import local_time
from qa_tracker.web.presenters.device_actions import MOVES


def back_to(row: DeviceRow) -> str:
    """The device's page."""
    return reverse("device", args=[row.uid])


def quarantine(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The second tap: what was seen, and the device is out of use."""
    at = now()
    row = sight.device_to(request, uid, "device.quarantine", at)
    asked = Asked(
        _("Quarantine %(device)s") % {"device": row.label},
        _("Quarantine now"),
        back_to(row),
        row.label,
        (
            Field("seen", _("What was seen"), "area", focus=True),
            Field(
                "place",
                _("Where on it"),
                hint=_("Lens, case, strain relief, cable, connector or pins."),
                required=False,
            ),
        ),
        lead=_("It is out of use at once, at every scanner, and a fault is opened."),
    )

    def act(typed: Typed) -> Done:
        made = states.quarantine(
            device=uid,
            seen=typed.text("seen", LONGEST_REASON),
            place=typed.text("place", 60),
            actor=request.user,
            at=at,
        )
        return Done(
            _("%(device)s is quarantined and the fault is open.") % {"device": row.label},
            reverse("fault", args=[made.uid]),
        )

    return ask(request, asked, act)


def move(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """End the placement and begin the next."""
    at = now()
    row = sight.device_to(request, uid, "device.place", at)
    asked = Asked(
        _("Move %(device)s") % {"device": row.label},
        _("Move"),
        back_to(row),
        row.label,
        (
            place_field(guards.scope(request.user, at), row.kind),
            Field("reason", _("Why"), "area", required=False),
            Field(
                "responsible",
                _("Responsible there for what is planned"),
                "select",
                _(
                    "Only where those responsible now may not enter checks at the new site; left open, it is you."
                ),
                (("", _("as now")), *_people(request, at)),
                required=False,
            ),
        ),
        lead=_("It is now at %(place)s.") % {"place": where_words(row)},
        notes=(_("The site it leaves keeps sight of it up to the move. Its whole history goes with it."),),
    )

    def act(typed: Typed) -> Done:
        place = chosen_place(request, typed, at)
        registering.move(
            device=uid,
            place=place,
            reason=reason(typed),
            responsible=_named(typed),
            actor=request.user,
            at=at,
        )
        seen = devices.find_device(guards.scope(request.user, at), uid)
        says = _("%(device)s is moved.") % {"device": row.label}
        return Done(says, back_to(row) if seen else reverse("register"))

    return ask(request, asked, act)


def _people(request: HttpRequest, at: dt.datetime) -> list[tuple[str, str]]:
    """Active people in sight, to choose one from."""
    seen = people.list_people(guards.scope(request.user, at))
    return [(str(each.uid), each.name) for each in seen if each.active]


def _named(typed: Typed) -> Any:
    uid = typed.choice_or_none("responsible")
    return finding.person(uid) if uid else None


def where_words(row: DeviceRow) -> str:
    """Site or pool, room and scanner."""
    parts = (row.site_name or row.pool_name, row.location, row.scanner_label)
    return ", ".join(part for part in parts if part) or _("no place that is known")


def accept(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Accept into use, signed."""
    at = now()
    row = sight.device_to(request, uid, "device.accept", at)
    asked = Asked(
        _("Accept %(device)s into use") % {"device": row.label},
        _("Accept and sign"),
        back_to(row),
        row.label,
        (
            Field("remark", _("Remark"), "area", required=False),
            Field("password", _("Your password, as your signature"), "password"),
        ),
        lead=_("You sign that it may be used on patients from now."),
        notes=(
            _(
                "Serial, order and software agree; electrical safety and the acceptance check are done; presets "
                "and manuals are filed."
            ),
        ),
        cautions=cautions.texts(["return-to-use"]),
    )

    def act(typed: Typed) -> Done:
        states.accept(
            device=uid,
            remark=typed.words("remark"),
            password=typed.raw("password"),
            actor=request.user,
            at=at,
        )
        return Done(_("%(device)s is accepted and in use.") % {"device": row.label}, asked.back)

    return ask(request, asked, act)


def restore(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Restore to use, signed, on a proving check."""
    at = now()
    row = sight.device_to(request, uid, "device.restore", at)
    open_faults = [each for each in faults.faults_of_device(row.id) if each.state != "closed"]
    proofs = _proofs(row, sight.zone_of_site(row.site_id))
    asked = Asked(
        _("Restore %(device)s to use") % {"device": row.label},
        _("Restore and sign"),
        back_to(row),
        row.label,
        (
            Field(
                "proving_check",
                _("Proving check"),
                "radio",
                _("A check submitted after the fault was opened, and not itself at the suspension level."),
                proofs,
                values=(proofs[0][0],),
            ),
            Field("remark", _("Why it may return to use"), "area"),
            Field("password", _("Your password, as your signature"), "password"),
        ),
        lead=_("You sign that it may be used on patients again."),
        cautions=cautions.texts(["return-to-use", "conforming-not-safe"]),
    )

    def act(typed: Typed) -> Done:
        states.restore(
            device=uid,
            proving_check=typed.choice_or_none("proving_check"),
            remark=typed.words("remark"),
            password=typed.raw("password"),
            actor=request.user,
            at=at,
        )
        return Done(_("%(device)s is restored to use.") % {"device": row.label}, asked.back)

    return ask(request, asked, act, "restore.html", faults=open_faults)


def _proofs(row: DeviceRow, zone: str) -> tuple[Option, ...]:
    recent = checks.checks_of_device(row.id, most=20)
    done = [each for each in recent if each.state in CHECK_DONE and not each.satisfied_by]
    return (*((str(each.uid), _proof_words(each, zone)) for each in done), ("", _("none of these")))


def _proof_words(check: CheckRow, zone: str) -> str:
    return _("%(procedure)s, %(moment)s: %(verdict)s") % {
        "procedure": check.procedure,
        "moment": local_time(check.submitted_at, zone),
        "verdict": wording.verdict_word(check.verdict) if check.verdict else _("no limit applies"),
    }


def change_state(request: HttpRequest, uid: uuid.UUID, verb: str) -> HttpResponse:
    """One of the other moves of the table of states: repair, loan, store, lost, found, disposed of."""
    at = now()
    if verb not in states.VERBS:
        raise NotFound("device.unknown")
    row = sight.device_to(request, uid, states.VERBS[verb], at)
    words = MOVES[verb]
    asked = Asked(
        _("%(move)s: %(device)s") % {"move": words.button, "device": row.label},
        words.button,
        back_to(row),
        row.label,
        (Field("note", words.asks, "area", words.hint, focus=True),),
        lead=_("It is %(state)s now.") % {"state": wording.device_state_word(row.state)},
    )

    def act(typed: Typed) -> Done:
        note = typed.text("note", LONGEST_REASON)
        states.move_on(device=uid, verb=verb, note=note, actor=request.user, at=at)
        return Done(words.done, asked.back)

    return ask(request, asked, act)


def condition(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Name a condition with its settings, new or changed."""
    at = now()
    row = sight.device_to(request, uid, "condition.set", at)
    known = devices.conditions_of(row.id)
    chosen = next((each for each in known if each.name == request.GET.get("name", "")), None)
    asked = Asked(
        _("Condition of %(device)s") % {"device": row.label},
        _("Keep"),
        back_to(row),
        row.label,
        condition_fields(chosen),
        lead=_("A named preset with the settings that have to be the same each time."),
    )

    def act(typed: Typed) -> Done:
        _set_condition(request, uid, typed, at)
        return Done(_("The condition is kept; what it said before is kept too."), asked.back)

    return ask(request, asked, act)


def condition_fields(known: ConditionRow | None) -> tuple[Field, ...]:
    """What a condition is asked for, with what is known of it."""
    settings = json.loads(known.settings) if known else {}
    lines = "\n".join(f"{name}: {value}" for name, value in settings.items())
    return (
        Field("name", _("Name"), hint=_("Such as “abdomen, 3.5 MHz”.")).starting(known.name if known else ""),
        Field(
            "test_frequency_mhz",
            _("Test frequency in MHz"),
            "decimal",
            _("Limits that go by frequency take their band from it."),
            required=False,
        ).starting(known.test_frequency_mhz if known else ""),
        Field(
            "sound_speed_m_s",
            _("The console's sound-speed setting in m/s"),
            "decimal",
            _("Usually 1540."),
            required=False,
        ).starting(known.sound_speed_m_s if known else ""),
        Field(
            "settings",
            _("Settings"),
            "area",
            _(
                "One on each line, a name, a colon and a value: depth, focus, gain, TGC, power, dynamic range, "
                "harmonics, compounding, speckle reduction, persistence, port."
            ),
            required=False,
        ).starting(lines),
    )


def _set_condition(request: HttpRequest, uid: uuid.UUID, typed: Typed, at: dt.datetime) -> None:
    registering.set_condition(
        device=uid,
        name=typed.text("name", 80),
        test_frequency_mhz=typed.text("test_frequency_mhz", 10),
        sound_speed_m_s=typed.text("sound_speed_m_s", 10),
        settings=typed.pairs("settings"),
        actor=request.user,
        at=at,
    )
