"""Another program's reading of a document: poppler's command-line tools."""

from __future__ import annotations

import os
import shutil
import subprocess

import pytest


def require(tool: str) -> None:
    if shutil.which(tool) is None:
        if os.environ.get("CI") == "true":
            pytest.fail(f"{tool} is missing: install poppler-utils")
        pytest.skip(f"{tool} is missing: install poppler-utils to check documents with another program")


@pytest.fixture
def poppler(tmp_path):
    """Run one of poppler's tools on a PDF and give what it prints; options come before the file."""

    def printed(tool: str, pdf: bytes, *options: str) -> str:
        require(tool)
        path = tmp_path / "file.pdf"
        path.write_bytes(pdf)
        command = [tool, *options, str(path), *(["-"] if tool == "pdftotext" else [])]
        plainly = {**os.environ, "TZ": "UTC", "LC_ALL": "C.UTF-8"}
        result = subprocess.run(command, capture_output=True, check=False, env=plainly)
        return (result.stdout + result.stderr).decode()

    return printed
