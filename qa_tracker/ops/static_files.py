"""The pages' static files, collected again only when one of them changed."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from pathlib import Path

from django.conf import settings
from django.contrib.staticfiles.finders import get_finders
from django.core.management import call_command


def sources() -> Iterator[str]:
    """One line for each source file: its name, size and last change, and before them how they are kept."""
    yield str(settings.STORAGES["staticfiles"])
    for finder in get_finders():
        for name, storage in finder.list(None):
            status = Path(storage.path(name)).stat()
            yield f"{name} {status.st_size} {status.st_mtime_ns}"


def collect_when_stale(note: Path) -> bool:
    """Collect the static files unless ``note`` says that these very ones were; return whether it was done."""
    fingerprint = hashlib.sha256("\n".join(sources()).encode()).hexdigest()
    if (
        note.exists()
        and note.read_text(encoding="ascii") == fingerprint
        and Path(settings.STATIC_ROOT).exists()
    ):
        return False
    call_command("collectstatic", verbosity=0, interactive=False, clear=True)
    note.write_text(fingerprint, encoding="ascii")
    return True
