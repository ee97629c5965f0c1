"""The tables that no leaf covers, each with the reason. A test compares this list with the models."""

from __future__ import annotations

EXEMPT: dict[str, str] = {
    "Leaf": "the ledger itself; insert-only by its own guard",
    "LedgerHead": "the ledger's lock; recomputed from the leaves by verify_ledger",
    "Checkpoint": "signed by itself; insert-only by its own guard",
    "Credential": "changed by signing in; never part of a record",
    "ApiToken": "a credential; issuing and revoking write leaves of their own",
    "FeedToken": "a credential; issuing and revoking write leaves of their own",
    "Draft": "what is typed and not yet signed",
    "EditionDraft": "a next edition that is not yet published",
    "CheckClock": "when the sweep looks next; recomputed from the check and its plan",
    "Digest": "the state of a mail under way: claim, lease and the server's reply",
    "DigestTry": "what the mail server answered to one try",
    "NoticeMail": "which digest carries which notice",
    "NoticeSeen": "a reading mark",
    "Heartbeat": "the pulse of the sweep",
    "SweepGap": "a pause of that pulse; the notices themselves record the levels passed over",
}
