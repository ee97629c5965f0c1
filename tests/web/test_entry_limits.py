"""Every limit that judges a reading is told beside its field before it is typed, not only its procedure's own."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.services import library
from tests import builders

pytestmark = pytest.mark.django_db


def limit(name, absolute):
    return {
        "id": name, "name": name, "shape": "E", "unit": "mm", "medium": "any", "methods": ["eye", "image"],
        "source": "The group's own", "standing": {"remedial": "practice"}, "own_words": {},
        "not_for_array_kinds": [], "electrical": False, "note": "", "measurands": ["reverberation_depth"],
        "criterion": {"basis": "none", "direction": "above", "remedial": {"absolute": absolute}},
    }  # fmt: skip


LOCAL = {
    "set": "local", "edition": "1", "title": "Local limits", "source": "The group's own", "note": "",
    "cautions": [], "criteria": [limit("LOCAL-3", "3.1"), limit("LOCAL-5", "5.2")],
}  # fmt: skip


def test_every_limit_of_a_reading_is_told_beside_its_field():
    ward = builders.ward()
    row = library.publish_criteria(document=LOCAL, actor=ward.physicist, at=now())
    library.adopt_criteria(criteria_set=row, site=None, remark="", actor=ward.physicist, at=now())
    page = (
        builders.signed_in(ward.technician)
        .get(f"/checks/{ward.check.uid}/enter/")
        .content.decode()
        .replace("\xa0", " ")
    )
    assert "more than 3.1 mm remedial" in page
    assert "more than 5.2 mm remedial" in page
