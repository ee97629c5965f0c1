"""The demo group's own limits and uncertainties, all invented: what its physicists state beside what is published."""

from __future__ import annotations

from typing import Any

from qa_tracker.records.models import Measurand, StatedUncertainty
from qa_tracker.services.demo_world import World

SET = "tarnwater-toe"
SOURCE = "Tarnwater Hospitals Group, local; invented"


def local_limits() -> dict[str, Any]:
    """Transoesophageal leakage by the maker's absolute value and by a step, beside the published ratio."""
    return {
        "set": SET,
        "edition": "1",
        "title": "Transoesophageal leakage, local",
        "source": SOURCE,
        "note": "Judged beside the ratio to chassis leakage; whichever trips first decides.",
        "cautions": ["toe-never-alone", "electrical-trained-staff"],
        "criteria": [
            _limit("TOE-MAKER", "Probe leakage, absolute", "E", {"basis": "none", "absolute": "150"}),
            _limit("TOE-STEP", "Probe leakage, step", "B", {"basis": "baseline", "absolute": "60"}),
        ],
    }


def _limit(code: str, name: str, shape: str, given: dict[str, str]) -> dict[str, Any]:
    return {
        "id": code,
        "name": name,
        "shape": shape,
        "unit": "uA",
        "medium": "electrical",
        "methods": ["soak"],
        "source": SOURCE,
        "standing": {"suspension": "practice"},
        "own_words": {},
        "not_for_array_kinds": [],
        "electrical": True,
        "criterion": {
            "basis": given["basis"],
            "direction": "above",
            "suspension": {"absolute": given["absolute"]},
        },
        "note": "",
        "measurands": ["toe_probe_leakage"],
    }


STATED = (
    (
        "equipment_leakage_class_i",
        "expanded",
        "12",
        "2",
        "",
        "Calibration certificate of the leakage testers",
    ),
    (
        "equipment_leakage_class_ii",
        "expanded",
        "4",
        "2",
        "",
        "Calibration certificate of the leakage testers",
    ),
    ("toe_probe_leakage", "expanded", "3", "2", "", "Calibration certificate of the leakage testers"),
    ("penetration", "standard", "1.8", "", "simple", "Twelve set-ups of one probe by three readers"),
    ("ring_down", "expanded", "0.5", "2", "zones", "Read by eye to half a millimetre"),
)
"""Measurand, kind, value, coverage factor, rule and source."""


def state_uncertainties(world: World) -> None:
    """The lead physicist states how well some measurands are measured, and by which rule they are judged."""
    oduya, _ = world.person("oduya")
    measurands = {row.code: row for row in Measurand.objects.all()}
    for code, kind, entered, factor, rule, source in STATED:
        act = world.past.act("uncertainty.stated", oduya, world.begun_at, source)
        columns = {
            "kind": kind,
            "entered": entered,
            "coverage_factor": factor,
            "rule": rule,
            "source": source,
        }
        row = StatedUncertainty(
            measurand=measurands[code], stated_by=oduya, stated_at=world.begun_at, repeats="", **columns
        )
        act.about(act.insert(row))
        act.tell({"measurand": code, "unit": measurands[code].unit, "site": None, "repeats": [], **columns})
