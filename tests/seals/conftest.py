"""A plain PDF, a demonstration key, and poppler's own reading of a seal."""

from __future__ import annotations

import io
import os
import shutil
import subprocess
from datetime import UTC, datetime

import pytest
from reportlab.pdfgen.canvas import Canvas

from qa_tracker.seals.keys import load_key, make_demo_key
from qa_tracker.seals.pades import sign_pdf

SEALED_AT = datetime(2026, 3, 14, 9, 31, tzinfo=UTC)


@pytest.fixture(scope="session")
def plain_pdf():
    """One page that says 1540 m/s, uncompressed so that a test can find its bytes."""
    buffer = io.BytesIO()
    canvas = Canvas(buffer, invariant=1, pageCompression=0)
    canvas.drawString(72, 700, "Sound speed 1540 m/s")
    canvas.showPage()
    canvas.save()
    return buffer.getvalue()


@pytest.fixture(scope="session")
def key():
    return load_key(make_demo_key("Tarnwater Hospitals Group", "tarn", SEALED_AT), "tarn")


@pytest.fixture(scope="session")
def sealed_pdf(plain_pdf, key):
    return sign_pdf(
        plain_pdf, key, moment=SEALED_AT, reason="Device dossier", name="Tarnwater Hospitals Group"
    )


@pytest.fixture
def pdfsig(tmp_path):
    """What poppler's pdfsig prints about a file; its exit status is 0 on a bad digest, so it is not used."""
    if shutil.which("pdfsig") is None:
        if os.environ.get("CI") == "true":
            pytest.fail("pdfsig is missing: install poppler-utils")
        pytest.skip("pdfsig is missing: install poppler-utils to check seals with another program")

    def printed(pdf: bytes) -> str:
        path = tmp_path / "file.pdf"
        path.write_bytes(pdf)
        plainly = {**os.environ, "TZ": "UTC", "LC_ALL": "C"}
        command = ["pdfsig", "-nocert", path]
        result = subprocess.run(command, capture_output=True, text=True, check=False, env=plainly)
        return result.stdout + result.stderr

    return printed
