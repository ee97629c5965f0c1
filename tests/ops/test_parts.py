"""What the parts of the standalone program are told, and what is prepared for them."""

from __future__ import annotations

import os
import socket
from contextlib import ExitStack
from pathlib import Path

import pytest

from qa_tracker.ops.parts import environment, host_header, listen_for_mail
from qa_tracker.ops.people_table import people_table
from qa_tracker.ops.serving import listened
from qa_tracker.ops.static_files import collect_when_stale

ADDRESS = "http://127.0.0.1:8000"


def test_children_are_not_told_the_owner_of_the_tables_when_one_is_set(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.setenv("MIGRATE_DATABASE_URL", "postgresql://owner@127.0.0.1/leadline")

    assert "MIGRATE_DATABASE_URL" not in environment("redis+socket:///b", ADDRESS, None)


@pytest.mark.parametrize(
    ("given", "told"),
    [
        pytest.param("", ADDRESS, id="not set"),
        pytest.param("https://leadline.example", "https://leadline.example", id="set"),
    ],
)
def test_children_are_told_the_address_of_the_pages_when_none_is_given(
    monkeypatch: pytest.MonkeyPatch, given: str, told: str
) -> None:
    monkeypatch.setenv("BASE_URL", given)

    assert environment("redis+socket:///b", ADDRESS, None)["BASE_URL"] == told


def test_children_are_told_the_port_of_the_mail_catcher_when_it_runs() -> None:
    with socket.create_server(("127.0.0.1", 0)) as mail:
        assert environment("redis+socket:///b", ADDRESS, mail)["EMAIL_PORT"] == str(listened(mail).port)


def test_mail_catcher_takes_a_free_port_when_its_own_is_busy(settings) -> None:
    with socket.create_server(("127.0.0.1", 0)) as other, ExitStack() as stack:
        settings.DEMO_MAILBOX, settings.EMAIL_PORT = True, other.getsockname()[1]
        mail = listen_for_mail(stack, demo=True)

        assert listened(mail).port not in (0, settings.EMAIL_PORT)


@pytest.mark.parametrize(
    ("demo", "no_server"), [(False, True), (True, False)], ids=["not a demo", "mail server"]
)
def test_mail_catcher_does_not_listen_when_mail_is_real(settings, demo: bool, no_server: bool) -> None:
    settings.DEMO_MAILBOX = no_server

    with ExitStack() as stack:
        assert listen_for_mail(stack, demo) is None


@pytest.mark.parametrize(
    ("allowed", "asked"),
    [(["*"], "127.0.0.1"), ([".example", "leadline.example"], "leadline.example")],
    ids=["any", "named"],
)
def test_own_question_uses_a_host_that_is_allowed_when_asked(
    settings, allowed: list[str], asked: str
) -> None:
    settings.ALLOWED_HOSTS = allowed

    assert host_header() == asked


def test_static_files_are_collected_again_only_when_one_changed(settings, tmp_path: Path) -> None:
    source = tmp_path / "source"
    source.mkdir()
    (source / "line.css").write_text("a{}")
    settings.STATICFILES_DIRS, settings.STATIC_ROOT = [source], tmp_path / "static"
    note = tmp_path / "note"

    assert collect_when_stale(note)
    assert not collect_when_stale(note)
    os.utime(source / "line.css", ns=(1, 1))
    assert collect_when_stale(note)
    assert (tmp_path / "static" / "line.css").read_text() == "a{}"


def test_people_stand_in_columns_when_printed() -> None:
    keys = ("name", "username", "password", "role", "site")
    rows = [("Jory Penhallow", "jory", "tide over stone", "technician", "KB")]

    assert people_table([dict(zip(keys, row, strict=True)) for row in rows]).splitlines() == [
        "name            username  password         role        site",
        "Jory Penhallow  jory      tide over stone  technician  KB",
    ]
    assert people_table([]) == ""
