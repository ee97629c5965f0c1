"""The document's own words in English; a service passes them in the reader's language by the same keys.

``{n}`` and ``{m}`` in ``page`` are the page and the number of pages.
"""

from __future__ import annotations

ENGLISH = {
    "page": "Page {n} of {m}",
    "seal_reason": "Audit dossier of one device",
    "demo_key": "Sealed with a demonstration key: this document proves nothing about a real device.",
    "device": "Device",
    "site": "Site",
    "state": "State",
    "period": "Period covered",
    "as_of": "As known on",
    "frozen_at": "Content frozen",
    "document": "Document",
    "identity": "Identity",
    "how_to_read": "How to read this document",
    "line_explained": (
        "The allowance line runs from the baseline or nominal outwards, smaller values on the left. "
        "One tick is the remedial level, a double tick the suspension level; the plumb mark is the reading. "
        "The figure is the share of the first level's allowance used up. Two slanting strokes say that the "
        "reading lies beyond the end of the scale; a short arm on the plumb mark says that the reading is "
        "a bound and the truth lies on that side."
    ),
    "conforming": "conforming",
    "remedial": "remedial",
    "suspension": "suspension",
    "indeterminate": "indeterminate",
    "not_assessable": "not assessable",
    "not_seen": "not seen",
    "no_reading": "no reading",
    "no_limit": "recorded, no limit",
    "over_time": "Checks over time",
    "stroke_explained": "A bare stroke is a check without a verdict: missed, excused, void or not yet submitted.",
    "continued": "continued",
    "cautions": "Cautions",
    "placements": "Placements",
    "now": "now",
    "apertures": "Apertures",
    "software": "Software",
    "plans": "Plans and what is due",
    "due": "due",
    "measured": "measured",
    "recorded": "recorded",
    "performed_by": "performed by",
    "edition": "edition",
    "leaf": "leaf",
    "checks": "Checks",
    "no_checks": "No check is on record for this period.",
    "could_not_test": "Could not be tested",
    "signatures": "Signatures",
    "unsigned": "Not signed.",
    "faults": "Faults",
    "no_faults": "No fault is on record for this period.",
    "grade": "grade",
    "opened": "opened",
    "closed": "closed",
    "seen": "Seen",
    "actions": "Actions",
    "downtime": "Downtime",
    "look_back": "Look-back",
    "proof": "Proof of repair",
    "baselines": "Baselines",
    "epoch": "epoch",
    "set_by": "set by",
    "criteria": "Criteria used",
    "source": "Source",
    "standing": "Standing",
    "people": "People named",
    "ledger": "Ledger",
    "ledger_origin": "Log",
    "ledger_size": "Leaves",
    "ledger_root": "Root",
    "ledger_range": "Leaves cited",
    "ledger_explained": (
        "Every record above stands as a leaf in an append-only log. The root fixes all leaves up to the size "
        "given; whoever holds an earlier checkpoint of the log can prove that nothing was changed since."
    ),
}
