"""Registering test objects and instruments."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping

from qa_tracker.core import decimals
from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import Invalid
from qa_tracker.core.library_shapes import INSTRUMENTS
from qa_tracker.records import ledger
from qa_tracker.records.models import Instrument, Person, Site, TestObject
from qa_tracker.services.guards import check_may, required


def register_test_object(
    *,
    site: Site,
    name: str,
    serial: str,
    material: str,
    nominals: Mapping[str, str],
    actor: Person,
    at: dt.datetime,
    **facts: object,
) -> TestObject:
    """Enter a test object with its true values. Writes TestObject; leaf ``test_object.registered``.

    ``facts`` are further columns by name. Refused: role, a nominal that is no number, a serial already there.
    """
    check_may(actor, "object.register", site.id, at)
    for code, text in nominals.items():
        decimals.parse(text, field=code)
    columns = {"maker": "", "model": "", **facts}
    if TestObject.objects.filter(maker=columns["maker"], model=columns["model"], serial=serial).exists():
        raise Invalid("test_object.serial_taken", field="serial", serial=serial)
    with ledger.command("test_object.registered", actor=actor, at=at) as act:
        row = act.insert(
            TestObject(
                site=site,
                name=required(name, "test_object.name_missing", "name"),
                serial=required(serial, "test_object.serial_missing", "serial"),
                material=material,
                nominals=canonical(dict(nominals)).decode(),
                **columns,
            )
        )
        act.about(row, site=site)
        act.tell({"name": name, "serial": serial, "material": material, "nominals": dict(nominals)})
    return row


def register_instrument(
    *,
    site: Site,
    kind: str,
    maker: str,
    model: str,
    serial: str,
    calibration_due_on: dt.date | None,
    actor: Person,
    at: dt.datetime,
) -> Instrument:
    """Enter an instrument with its calibration date. Writes Instrument; leaf ``instrument.registered``."""
    check_may(actor, "object.register", site.id, at)
    if kind not in INSTRUMENTS:
        raise Invalid("device.unknown_word", field="kind", value=kind, known=", ".join(INSTRUMENTS))
    if Instrument.objects.filter(maker=maker, model=model, serial=serial).exists():
        raise Invalid("instrument.serial_taken", field="serial", serial=serial)
    with ledger.command("instrument.registered", actor=actor, at=at) as act:
        row = act.insert(
            Instrument(
                site=site,
                kind=kind,
                maker=required(maker, "device.maker_missing", "maker"),
                model=model,
                serial=required(serial, "instrument.serial_missing", "serial"),
                calibration_due_on=calibration_due_on,
            )
        )
        act.about(row, site=site)
        act.tell({"kind": kind, "maker": maker, "model": model, "serial": serial})
    return row
