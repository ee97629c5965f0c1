"""Tables of fixtures/reference, whose first lines say where they come from."""

from __future__ import annotations

import csv
import json
from pathlib import Path

FOLDER = Path(__file__).parents[2] / "fixtures" / "reference"


def rows(name):
    lines = (FOLDER / name).read_text("utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def entries(name):
    """Worked answers by their id, each with its source, tolerance and note."""
    return json.loads((FOLDER / name).read_text("utf-8"))["entries"]
