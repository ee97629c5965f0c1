"""Baselines over the API: proposed before they are set, from set-ups, under review and kept."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from tests.api.operations import PASSWORD, baseline, set_ups, unsigned


@pytest.fixture
def physicist(world):
    return world.near["physicist"]


def test_preview_says_what_would_change_and_its_hash_binds_the_signature(world, physicist):
    path = f"/devices/{world.spare.uid}/baselines"
    physicist.post(path, baseline(world))
    changed = unsigned(world)
    changed["values"][0]["text"] = "12.0"
    shown = physicist.post(f"{path}/preview", changed, 200)
    (told,) = shown["baselines"]
    assert (told["epoch"], told["step"], told["from_first"]) == (2, "-0.5", "-0.5")
    signed = changed | {"password": PASSWORD, "shown_sha256": shown["shown_sha256"]}
    (made,) = physicist.post(path, signed)
    assert (made["epoch"], made["from_first"], made["untold"]) == (2, "-0.5", False)
    assert physicist.post(path, signed, 422)["code"] == "signature.shown_differs"


def test_set_ups_give_their_figures_and_are_counted_in_the_baseline(world, physicist):
    path = f"/devices/{world.spare.uid}/baselines/set-ups"
    shown = physicist.post(f"{path}/preview", set_ups(world), 200)
    assert shown["figures"] == {
        "count": 2, "mean": "8.25", "standard_deviation": "0.354", "floor": "0.144", "factor": None,
        "half_width": None, "coverage": "95", "confidence": "95", "missing": 8, "outliers_tested": False,
        "suspects": [],
    }  # fmt: skip
    made = physicist.post(path, set_ups(world) | {"password": PASSWORD, "expires_on": "2099-01-01"})
    assert (made["entered"], made["set_ups"], made["standard_deviation"]) == ("8.25", 2, "0.354")
    assert made["expires_on"] == "2099-01-01"


def test_software_puts_baselines_under_review_until_they_are_kept(world, physicist):
    probe, scanner = world.ward.probe, world.ward.scanner
    value = {"measurand": "reverberation_depth", "text": "8.5", "aperture": probe.apertures.get().uid}
    given = {"values": [value], "reason": "Acceptance", "password": PASSWORD}
    physicist.post(f"/devices/{probe.uid}/baselines", given)
    event = {"version": "9.1", "since_on": now().date().isoformat()}
    marked = physicist.post(f"/devices/{scanner.uid}/software", event)
    (waiting,) = physicist.get(f"/devices/{scanner.uid}/baselines/under-review")
    assert (waiting["device"], waiting["baselines"]) == (str(probe.uid), marked)
    kept = {"baselines": [marked[0]["uid"]], "reason": "Same", "password": PASSWORD}
    (made,) = physicist.post(f"/devices/{probe.uid}/baselines/keep", kept)
    assert (made["console_software"], made["step"], made["under_review"]) == ("9.1", "0.0", False)
    assert physicist.get(f"/devices/{scanner.uid}/baselines/under-review") == []
