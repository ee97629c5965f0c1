"""The commands that print facts: their help, their exit status, their words and their JSON."""

from __future__ import annotations

import io
import json

import pytest
from django.core.management import call_command, get_commands
from django.core.management.base import CommandError
from django.utils.timezone import now

from qa_tracker.records.models import Reading
from qa_tracker.services import devices, states
from qa_tracker.services.devices import Identity, Place
from tests import builders

pytestmark = pytest.mark.django_db
NAMES = (
    "standalone", "load_demo", "sweep", "issue_dossier", "verify_dossier", "verify_ledger", "recheck_verdicts", "judge",
)  # fmt: skip


@pytest.fixture
def ward(settings, tmp_path):
    settings.DATA_DIR, settings.MEDIA_ROOT = tmp_path, tmp_path / "files"
    ward = builders.ward()
    builders.submitted(ward.check, ward.technician, lens_grade="amber")
    return ward


def said(*words: str) -> tuple[int, str]:
    """Exit status and what the command said."""
    out = io.StringIO()
    try:
        call_command(*words, stdout=out)
    except SystemExit as end:
        return int(end.code or 0), out.getvalue()
    return 0, out.getvalue()


@pytest.mark.parametrize("name", NAMES)
def test_command_says_what_it_does_when_asked_for_help(name, capsys):
    assert get_commands()[name] == "qa_tracker.ops"
    with pytest.raises(SystemExit) as end:
        call_command(name, "--help")
    assert end.value.code == 0
    assert len(capsys.readouterr().out) > 300


def test_dossier_is_issued_and_verified_when_the_serial_is_one(ward, tmp_path):
    file = tmp_path / "dossier.pdf"
    status, line = said("issue_dossier", "--device", "C5-2207", "--out", str(file), "--json")
    assert (status, json.loads(line)["device"]) == (0, "Ostrigard C5 C5-2207")
    status, line = said("verify_dossier", str(file), "--json")
    assert (status, json.loads(line)["holds"]) == (0, True)


def test_every_flipped_byte_is_refused_when_verified(ward, tmp_path):
    file = tmp_path / "dossier.pdf"
    said("issue_dossier", "--device", "C5-2207", "--out", str(file))
    whole = file.read_bytes()
    for place in [*range(0, len(whole), len(whole) // 60), len(whole) - 1]:
        damaged = bytearray(whole)
        damaged[place] ^= 1
        file.write_bytes(bytes(damaged))
        status, text = said("verify_dossier", str(file))
        assert (status, "REFUSED" in text) == (1, True), place


def test_choices_are_listed_when_the_serial_is_ambiguous(ward, tmp_path):
    devices.register_scanner(
        identity=Identity("Quorrel", "Wren", "C5-2207"), place=Place(site=ward.site), software_version="1",
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    with pytest.raises(CommandError, match=r"--maker:\n.*Ostrigard C5 C5-2207\n.*Quorrel Wren C5-2207"):
        said("issue_dossier", "--device", "C5-2207", "--out", str(tmp_path / "x.pdf"))
    status, _ = said(
        "issue_dossier", "--device", "C5-2207", "--maker", "Quorrel", "--out", str(tmp_path / "x.pdf")
    )
    assert status == 0


@pytest.mark.parametrize(
    ("words", "what"),
    [
        (
            ("issue_dossier", "--device", "nobody", "--out", "x.pdf"),
            "No device has the serial number “nobody”",
        ),
        (("verify_dossier", "no/such/file.pdf"), "can't be read"),
        (("sweep", "--at", "tomorrow"), "is no ISO 8601 moment"),
        (("sweep", "--at", "2026-02-31T09:00:00Z"), "is no moment"),
    ],
)
def test_refusal_says_what_is_wrong_when_it_cannot_be_done(ward, words, what):
    with pytest.raises(CommandError, match=what):
        said(*words)


def test_sweep_counts_what_it_moved_when_the_moment_is_given(ward):
    after = ward.check.plan.checks.get(state="scheduled").overdue_at
    status, line = said("sweep", "--at", after.isoformat(), "--json")
    assert (status, json.loads(line)["checks"]) == (0, 1)
    assert json.loads(line)["notices"] == 2


def test_ledger_and_verdicts_agree_until_a_row_is_changed(ward):
    states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())
    for command in ("verify_ledger", "recheck_verdicts"):
        status, line = said(command, "--json")
        assert (status, json.loads(line)["agrees"]) == (0, True)
    status, text = said("verify_ledger")
    assert text.rstrip().endswith("everything agrees.")
    assert Reading.objects.exists()
