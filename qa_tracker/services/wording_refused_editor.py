"""Sentences of what is refused while an edition of a procedure is written and published."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

EDITOR: Final = {
    "edition_draft.unknown": N_(
        "You are not writing an edition of this procedure: it was published or discarded meanwhile. Begin the next "
        "one on the procedure's page."
    ),
    "edition_draft.no_such_part": N_(
        "That part of the edition is not there: it was removed meanwhile. Go back to the edition you are writing."
    ),
    "edition_draft.kept_meanwhile": N_(
        "Another window of yours kept something else here since this page was opened, so nothing was written over. "
        "Compare the two below; saving now keeps what stands in the fields."
    ),
    "edition_draft.looked_at_another": N_(
        "The edition was changed in another window since you looked it over, so it was not published. "
        "Look it over again."
    ),
    "edition_draft.overtaken": N_(
        "Edition %(number)s was published by someone else meanwhile. Compare yours with it, then go on as the "
        "edition after it."
    ),
    "edition_draft.nothing_changed": N_(
        "Nothing differs from edition %(number)s, so there is nothing to publish. Change what is to be different."
    ),
    "edition_draft.band_reversed": N_(
        "%(field)s: %(low)s to %(high)s holds nothing. Give the plausible band a low end below its high end."
    ),
    "edition_draft.measurand_known": N_(
        "%(field)s: “%(measurand)s” already stands for a measurand of the kind %(kind)s, in %(unit)s, and one code "
        "means one quantity everywhere. Keep its kind and unit, or use another code."
    ),
    "edition_draft.too_long": N_(
        "%(field)s is %(length)s signs long, and at most %(most)s can be kept. Shorten it."
    ),
    "edition_draft.too_many": N_("%(field)s is %(count)s, and %(most)s is the most there can be. Lower it."),
    "edition_draft.not_a_code": N_(
        "%(field)s can't be “%(value)s”. Use small letters, digits and underscores, and begin with a letter."
    ),
    "edition_draft.not_a_rule": N_(
        "“%(value)s” is no recurrence. Give a whole number, or a rule such as FREQ=MONTHLY;BYDAY=1MO."
    ),
    "edition_draft.kind_lacks": N_(
        "%(field)s is empty, which a measurand of the kind %(kind)s can't do without. Fill it in, or choose another "
        "kind."
    ),
    "edition_draft.empty": N_("%(field)s is empty. Fill it in."),
    "edition_draft.no_step": N_("There is no step. Write what is to be done, a step at a time."),
    "edition_draft.no_measurand": N_("Nothing is measured. Add a measurand."),
    "edition_draft.no_document": N_("There is no document. Paste the whole edition as JSON."),
    "edition_draft.not_json": N_(
        "The document can't be read: line %(line)s, column %(column)s. Correct the JSON there."
    ),
}
