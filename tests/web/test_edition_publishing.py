"""Publishing an edition: looked over beside the one before, refused as a whole, and compared afterwards."""

from __future__ import annotations

import json

from django.urls import reverse

from qa_tracker.records.models import Edition
from tests import builders


def document(**changes):
    return json.loads(Edition.objects.get(number=1).content) | changes


def paste(editor, text):
    return editor.client.post(reverse("edition-from-document"), {"document": text})


def publish(editor):
    return editor.client.post(editor.address("publish"), {"seen": str(editor.draft().revision)})


def test_draft_when_looked_over_shows_what_differs(editor):
    editor.client.post(editor.address("head"), editor.inputs("head", minutes_probe="20"))
    page = editor.page("publish")
    assert "1 other thing differs" in page
    assert "<strong>20</strong>" in page
    assert "Publish edition 2</button>" in page


def test_draft_when_published_leads_to_the_new_edition(editor):
    editor.client.post(editor.address("head"), editor.inputs("head", minutes_probe="20"))
    answer = publish(editor)
    page = editor.client.get(answer.headers["Location"]).content.decode()
    assert "Edition 2 is published. It has no force until" in page
    assert "Side by side with this one" in page


def test_draft_when_wrong_lists_everything_and_offers_no_button(editor):
    editor.client.post(editor.address("head"), editor.inputs("head", title="", when=""))
    page = editor.page("publish")
    assert "2 things are still to be put right" in page
    assert "Publish edition 2</button>" not in page
    assert publish(editor).status_code == 422
    assert Edition.objects.count() == 1


def test_draft_when_nothing_differs_offers_no_button(editor):
    assert "Nothing differs yet." in editor.page("publish")
    assert publish(editor).status_code == 422


def test_draft_when_changed_since_is_not_published(editor):
    seen = str(editor.draft().revision)
    editor.client.post(editor.address("head"), editor.inputs("head", minutes_probe="20"))
    answer = editor.client.post(editor.address("publish"), {"seen": seen})
    assert answer.status_code == 409
    assert "Look it over again" in answer.content.decode()


def test_draft_when_overtaken_says_so_and_goes_on_as_the_next(editor):
    paste(editor, json.dumps(document(edition=2, title="Quicker")))
    assert "Edition 2 was published meanwhile" in editor.page()
    editor.client.post(editor.address("follow"))
    assert "Edition 3 of" in editor.page()


def test_editions_when_compared_show_what_was_added_removed_and_changed(editor):
    newer = document(edition=2)
    newer["measurands"][0]["name"] = "Why"
    newer["measurands"].append(newer["measurands"].pop(1) | {"code": "housing_grade", "name": "Housing"})
    newer["steps"].append({"text": "Write it down."})
    paste(editor, json.dumps(newer))
    uids = list(Edition.objects.order_by("number").values_list("uid", flat=True))
    page = editor.client.get(reverse("editions-compare", args=uids)).content.decode()
    assert "1 measurand added, 1 measurand removed, 1 measurand changed, 1 step differs" in page
    assert "<strong>Why</strong>" in page
    assert "<strong>Write it down.</strong>" in page


def test_editions_of_two_procedures_are_not_compared(editor):
    builders.publish(["user-check"], ["dropout-2014"])
    uids = Edition.objects.values_list("uid", flat=True)
    assert editor.client.get(reverse("editions-compare", args=uids)).status_code == 404


def test_document_when_wrong_is_refused_with_every_place_and_kept(editor):
    wrong = document(edition=2, title="")
    wrong["measurands"][3]["kind"] = "guess"
    answer = paste(editor, json.dumps(wrong))
    page = answer.content.decode()
    assert answer.status_code == 422
    assert "title is empty" in page
    assert "measurands[3].kind can" in page
    assert "guess&quot;" in page


def test_document_when_no_json_is_refused_at_its_line(editor):
    page = paste(editor, '{"title":\n }').content.decode()
    assert "line 2, column 2" in page


def test_document_page_is_closed_to_who_may_not_adopt(editor):
    lead = builders.signed_in(builders.person(editor.admin, "priya", "lead", None))
    assert lead.get(reverse("edition-from-document")).status_code == 403


def test_comparing_is_open_to_everyone(editor):
    paste(editor, json.dumps(document(edition=2, title="Quicker")))
    uids = list(Edition.objects.order_by("number").values_list("uid", flat=True))
    user = builders.signed_in(builders.person(editor.admin, "jory", "user", None))
    assert user.get(reverse("editions-compare", args=uids)).status_code == 200
