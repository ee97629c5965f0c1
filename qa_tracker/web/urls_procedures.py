"""Addresses of writing, comparing and publishing editions of procedures, below ``criteria/procedures/``."""

from __future__ import annotations

from django.urls import path

from qa_tracker.web.views import edition_editor, edition_publishing, edition_trial, procedures

DRAFT = "drafts/<uuid:uid>/"
MEASURAND = f"{DRAFT}measurands/<slug:key>/"

urlpatterns = [
    path("compare/<uuid:old>/<uuid:new>/", procedures.compare, name="editions-compare"),
    path("from-document/", edition_publishing.from_document, name="edition-from-document"),
    path(DRAFT, edition_editor.show, name="edition-draft"),
    path(f"{DRAFT}start/", edition_editor.start, name="edition-draft-start"),
    path(f"{DRAFT}head/", edition_editor.head, name="edition-draft-head"),
    path(f"{DRAFT}steps/", edition_editor.steps, name="edition-draft-steps"),
    path(f"{DRAFT}measurands/", edition_editor.new_measurand, name="edition-draft-new-measurand"),
    path(MEASURAND, edition_editor.measurand, name="edition-draft-measurand"),
    path(f"{MEASURAND}move/", edition_editor.move, name="edition-draft-move"),
    path(f"{MEASURAND}remove/", edition_editor.remove, name="edition-draft-remove"),
    path(f"{DRAFT}trial/", edition_trial.trial, name="edition-draft-trial"),
    path(f"{DRAFT}publish/", edition_publishing.publish, name="edition-draft-publish"),
    path(f"{DRAFT}follow/", edition_editor.follow, name="edition-draft-follow"),
    path(f"{DRAFT}discard/", edition_editor.discard, name="edition-draft-discard"),
]
