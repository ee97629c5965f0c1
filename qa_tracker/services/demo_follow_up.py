"""The demo group's own procedure: penetration followed between annual surveys.

Depth drifts over months and a yearly survey sees it late, so the group's physicists follow chosen probes each
month on one preset. It is written down as a procedure of the group, adopted like the shipped ones. Depth is read
to 0.1 mm, as the mean of three frames, and the object is weighed first.
"""

from __future__ import annotations

from typing import Any

from qa_tracker.services.shipped import documents

CODE = "penetration-follow-up"
FROM_SURVEY = ("reverberation_depth", "uniformity", "penetration", "vertical_distance")


def follow_up_document() -> dict[str, Any]:
    """The procedure as a document to publish, made of the shipped measurands."""
    shipped = {each["procedure"]: each for each in documents("procedures")}
    survey, care = shipped["annual-survey"], shipped["test-object-care"]
    weight = [each for each in care["measurands"] if each["code"] == "test_object_weight"]
    taken = [each for each in survey["measurands"] if each["code"] in FROM_SURVEY]
    own = {
        "procedure": CODE,
        "title": "Penetration follow-up",
        "standing": "local: Tarnwater Hospitals Group",
        "performed_by": ["physicist"],
        "minutes": {"scanner": 0, "probe": 8},
        "when": "Monthly, for chosen probes",
        "applies_to": {"kinds": ["probe"], "array_kinds": None, "contact_classes": None},
        "recurrence": {"rule": "FREQ=MONTHLY", "before_days": 7, "grace_days": 7},
        "note": "Depth is the mean of three frames. Weigh the object first: a drying object looks like many "
        "probes losing penetration at once.",
        "steps": [
            {"text": "Weigh the test object."},
            {"text": "Recall the preset; confirm the settings are unchanged."},
            {
                "text": "Read reverberation in air, then uniformity, depth and the 100 mm distance on the object."
            },
        ],
        "measurands": weight + [_finer(each) for each in taken],
    }
    return survey | own


def _finer(measurand: dict[str, Any]) -> dict[str, Any]:
    required = {"required": measurand["code"] in ("penetration", "reverberation_depth")}
    finer = {"resolution": "0.1"} if measurand["code"] == "penetration" else {}
    return measurand | required | finer
