"""Writing the next edition in the browser: kept as typed, refused beside its field, nothing lost between windows."""

from __future__ import annotations

import re

import pytest
from django.urls import reverse

from qa_tracker.records.models import Edition, EditionDraft
from tests import builders

JSON = {"HTTP_ACCEPT": "application/json"}


def test_next_edition_when_begun_is_shown_whole(editor):
    page = editor.page()
    assert "Edition 2 of After repair, software, move or swap" in page
    assert "Depth of penetration, difference" in page
    assert "to be put right" not in page


def test_page_of_the_edition_when_a_draft_is_begun_leads_back_to_it(editor):
    address = reverse("edition", args=[Edition.objects.get().uid])
    assert "Go on writing edition 2" in editor.client.get(address).content.decode()
    assert editor.address() in editor.client.get(reverse("procedures")).content.decode()


def test_head_when_nothing_is_changed_stays_as_it_was(editor):
    before = editor.draft().writing.head.typed
    answer = editor.client.post(editor.address("head"), editor.inputs("head"))
    assert answer.headers["Location"] == editor.address() + "#head"
    assert editor.draft().writing.head.typed == before


def test_head_when_wrong_is_kept_as_typed_with_refusals_beside_and_above(editor):
    typed = editor.inputs("head", title="", minutes_probe="a few")
    page = editor.client.post(editor.address("head"), typed, follow=True).content.decode()
    assert 'value="a few"' in page
    assert 'href="#id_title"' in page
    assert 'id="refusal_minutes_probe"' in page
    assert "Title is empty." in page


def test_measurand_when_nothing_is_changed_stays_as_it_was(editor):
    for part in editor.draft().writing.measurands:
        editor.client.post(editor.address("measurand", part.key), editor.inputs(part.key))
    typed = [each.typed for each in editor.draft().writing.measurands]
    editor.client.post(editor.address("discard"))
    editor.client.post(editor.address("start"))
    assert typed == [each.typed for each in editor.draft().writing.measurands]


def test_measurand_when_wrong_is_named_in_the_draft_with_a_way_to_its_field(editor):
    key = editor.key("penetration")
    editor.client.post(editor.address("measurand", key), editor.inputs(key, resolution="half"))
    page = editor.page()
    assert f'href="{editor.address("measurand", key)}#id_resolution"' in page
    assert "Depth of penetration, read in steps of: “half” is not a number" in page


def test_code_when_no_code_is_refused_in_plain_words(editor):
    key = editor.key("penetration")
    answer = editor.client.post(
        editor.address("measurand", key), editor.inputs(key, code="Depth of it"), follow=True
    )
    assert "Use small letters, digits and underscores" in answer.content.decode()


def test_new_measurand_when_untouched_shows_no_refusals_on_its_page(editor):
    address = editor.client.post(editor.address("new-measurand")).headers["Location"]
    assert "refusal" not in editor.client.get(address).content.decode().replace(
        'refusals" role="alert" hidden', ""
    )
    assert "things to put right" in editor.page()


def test_limits_when_chosen_are_kept_in_order(editor):
    key = editor.key("vertical_distance")
    typed = editor.inputs(key) | {"limit-1": "TG128-AX", "limit-2": "TG1-VERT"}
    editor.client.post(editor.address("measurand", key), typed)
    assert editor.draft().writing.part(key).typed["criteria"] == "TG128-AX TG1-VERT"


def test_limits_offered_are_of_the_same_unit_and_medium(editor):
    page = editor.page("measurand", editor.key("vertical_distance"))
    offered = set(re.findall(r'<option value="([A-Z0-9-]+)"', page))
    assert {"TG1-VERT", "TG128-AX"} <= offered
    assert not offered & {"TG1-UNIF", "DROP", "PROBE-GRADE"}


def test_part_when_saved_in_two_windows_shows_both_and_loses_neither(editor):
    first = editor.inputs("m1", name="Why it is done")
    second = editor.inputs("m1", name="Reason")
    editor.client.post(editor.address("measurand", "m1"), first)
    answer = editor.client.post(editor.address("measurand", "m1"), second)
    page = answer.content.decode()
    assert answer.status_code == 409
    assert "Why it is done" in page
    assert 'value="Reason"' in page
    again = second | {"seen": re.search(r'name="seen" value="(\d+)"', page)[1]}
    assert editor.client.post(editor.address("measurand", "m1"), again).status_code == 302
    assert editor.draft().writing.part("m1").typed["name"] == "Reason"


def test_script_when_it_keeps_is_told_the_revision_and_what_is_wrong(editor):
    typed = editor.inputs("m1", name="")
    told = editor.client.post(editor.address("measurand", "m1"), typed, **JSON).json()
    assert told["revision"] == editor.draft().revision
    assert told["refused"] == ["name"]


def test_script_when_another_window_kept_is_told_what(editor):
    old = editor.inputs("m1", name="Reason")
    editor.client.post(editor.address("measurand", "m1"), editor.inputs("m1", name="Why"))
    answer = editor.client.post(editor.address("measurand", "m1"), old, **JSON)
    assert (answer.status_code, answer.json()["others"]) == (409, [{"label": "Name", "value": "Why"}])


@pytest.mark.parametrize(
    ("do", "texts"),
    [
        ("add", ["a", "b", "c", ""]),
        ("up-2", ["b", "a", "c"]),
        ("up-1", ["a", "b", "c"]),
        ("down-2", ["a", "c", "b"]),
        ("remove-2", ["a", "c"]),
        ("remove-9", ["a", "b", "c"]),
    ],
)
def test_steps_when_a_button_is_pressed_keep_what_is_typed(editor, do, texts):
    typed = {"step-1": "a", "step-2": "b", "step-3": "c", "seen": "1", "do": do}
    editor.client.post(editor.address("steps"), typed)
    assert list(editor.draft().writing.steps.typed.values()) == texts


def test_measurand_when_moved_and_removed(editor):
    editor.client.post(editor.address("move", "m2"), {"by": "up"})
    assert [each.key for each in editor.draft().writing.measurands][:2] == ["m2", "m1"]
    assert "Remove “Case”?" in editor.page("remove", "m2")
    editor.client.post(editor.address("remove", "m2"), {"seen": str(editor.draft().revision)})
    assert "m2" not in [each.key for each in editor.draft().writing.measurands]


def test_draft_when_discarded_is_gone_after_asking(editor):
    assert EditionDraft.objects.exists()
    assert "Discard edition 2?" in editor.page("discard")
    editor.client.post(editor.address("discard"))
    assert editor.client.get(editor.address()).status_code == 404


@pytest.mark.parametrize("role", ["technician", "lead", "engineer", "auditor", "administrator"])
def test_pages_of_a_draft_are_closed_to_who_may_not_adopt(editor, role):
    client = builders.signed_in(builders.person(editor.admin, f"a-{role}", role, None))
    names = ("", "head", "steps", "trial", "publish", "discard")
    assert {client.get(editor.address(name)).status_code for name in names} == {403}
    assert client.post(editor.address("start")).status_code == 403
    address = reverse("edition", args=[Edition.objects.get().uid])
    assert "Write the next edition" not in client.get(address).content.decode()


def test_draft_of_somebody_else_is_not_there(editor):
    other = builders.signed_in(builders.person(editor.admin, "rao", "physicist", None))
    assert other.get(editor.address()).status_code == 404
