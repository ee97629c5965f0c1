"""Issue the sealed dossier of one device to a file."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.ops.facts import add_json, print_facts
from qa_tracker.records.queries.devices import by_serial
from qa_tracker.records.queries.dossiers import list_dossiers
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import dossiers, files, wording


class Command(BaseCommand):
    """Freeze, draw, seal and write a device's dossier."""

    help = "Issue the sealed audit dossier of the device with this serial number and write it to a file."

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--device", required=True, metavar="SERIAL")
        parser.add_argument("--maker", help="where several makers use the same serial number")
        parser.add_argument("--out", required=True, metavar="FILE")
        add_json(parser)

    def handle(self, *args: Any, **options: Any) -> None:
        found = [
            device
            for device in by_serial(EVERYTHING, options["device"])
            if options["maker"] in (None, device.maker)
        ]
        if not found:
            raise CommandError(
                f"No device has the serial number “{options['device']}”. Check it in the Register."
            )
        if len(found) > 1:
            choices = "\n".join(f"  {device.label}" for device in found)
            raise CommandError(
                f"{len(found)} devices have the serial number “{options['device']}”; "
                f"name the maker with --maker:\n{choices}"
            )
        self._issue(found[0].uid, Path(options["out"]), as_json=options["json"])

    def _issue(self, device_uid: Any, out: Path, *, as_json: bool) -> None:
        try:
            asked = dossiers.request_at_console(device=device_uid, at=now())
            dossiers.render(dossier_id=asked.pk, at=now())
        except DomainError as error:
            raise CommandError(wording.refusal(error)) from error
        row = list_dossiers(EVERYTHING, uid=asked.uid)[0]
        if row.state != "issued":
            raise CommandError(f"The dossier could not be issued: {row.failure}")
        out.write_bytes(files.read(row.file_sha256))
        facts = {
            "dossier": str(row.uid),
            "device": row.device_label,
            "file": str(out),
            "sha256": row.file_sha256,
            "pages": row.pages,
            "ledger_size": row.ledger_size,
        }
        line = f"{row.device_label}: {row.pages} page(s) written to {out}, SHA-256 {row.file_sha256}."
        print_facts(self.stdout, facts, [line], as_json=as_json)
