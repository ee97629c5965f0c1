"""``load_demo`` as it is typed: what it says, the same for the same seed, and refused a second time."""

from __future__ import annotations

import io
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from config.env import BASE_DIR

pytestmark = pytest.mark.xdist_group("load demo")
SMALL = ("--scanners", "1", "--probes", "2", "--years", "1")
OWN_PLACE = ("LEADLINE_TEST_DIR", "DATABASE_URL", "SECRET_KEY")


def run(data_dir: Path, *words: str) -> subprocess.CompletedProcess[str]:
    kept = {name: value for name, value in os.environ.items() if name not in OWN_PLACE}
    place = {**kept, "DJANGO_SETTINGS_MODULE": "config.settings", "DATA_DIR": str(data_dir)}
    command = [sys.executable, "manage.py", *words]
    return subprocess.run(command, cwd=BASE_DIR, env=place, capture_output=True, text=True, check=False)


DIGEST = """
import hashlib
from qa_tracker.records.models import Reading

found = Reading.objects.order_by("id").values_list("device__serial", "measurand__code", "entered")
print(hashlib.sha256(repr(list(found)).encode()).hexdigest())
"""


@pytest.fixture(scope="module")
def places(tmp_path_factory):
    """Two databases loaded with one seed and one with another."""
    loaded = {}
    for name, seed in (("one", "5"), ("same", "5"), ("other", "6")):
        folder = tmp_path_factory.mktemp(name)
        assert run(folder, "migrate", "-v0").returncode == 0
        said = run(folder, "load_demo", *SMALL, "--seed", seed, "--json")
        assert said.returncode == 0, said.stderr
        loaded[name] = (folder, json.load(io.StringIO(said.stdout)))
    return loaded


def test_load_demo_when_asked_for_json_says_the_sizes(places):
    said = places["one"][1]
    assert (said["scanners"], said["probes"]) == (1, 2)
    assert said["readings"] > 400


def test_load_demo_when_the_seed_is_the_same_draws_the_same_readings(places):
    digests = {name: run(folder, "shell", "-v0", "-c", DIGEST).stdout for name, (folder, _) in places.items()}
    assert len(digests["one"]) > 60
    assert digests["one"] == digests["same"] != digests["other"]


def test_load_demo_when_run_again_is_refused(places):
    again = run(places["one"][0], "load_demo")
    assert again.returncode == 1
    assert "already in this database" in again.stderr
    assert again.stdout == ""


def test_load_demo_when_the_size_is_wrong_is_refused(places):
    refused = run(places["one"][0], "load_demo", "--scanners", "0")
    assert refused.returncode == 1
    assert "at least 1" in refused.stderr
