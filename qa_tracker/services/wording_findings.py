"""What a verification found, in words: of a dossier's seal, and of the ledger."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.services.wording_words import capital

HOLDS: Final = {
    "readable": N_("The file can be read as a PDF."),
    "has_signature": N_("The file carries a seal."),
    "one_signature": N_("The file carries one seal and no more."),
    "intact": N_("The sealed content is as it was when it was sealed."),
    "valid": N_("The seal was made with the key of its certificate."),
    "whole_file": N_("The seal covers the whole file."),
    "profile": N_("The seal is of the PAdES kind."),
    "certificate_in_date": N_("The certificate is in date."),
    "certificate_trusted": N_("The certificate is one that is trusted here."),
    "timestamp": N_("The timestamp holds."),
    "bottom_line": N_("Every further rule for seals is kept."),
    "file_in_ledger": N_("The file's hash is in the ledger."),
}
REFUSED: Final = {
    "seal.unreadable": N_("The file can't be read as a PDF. Check that it was copied whole."),
    "seal.unsigned": N_("The file carries no seal, so nothing in it is proven. Ask for the sealed file."),
    "seal.several_signatures": N_(
        "The file carries more than one seal, and a dossier has one. Ask for the original."
    ),
    "seal.digest_differs": N_("The content was changed after it was sealed. Don't rely on it."),
    "seal.signature_invalid": N_("The seal wasn't made with the key of its certificate. Don't rely on it."),
    "seal.not_whole_file": N_(
        "Something stands in the file outside the seal. Don't rely on it; ask for the original."
    ),
    "seal.profile_unknown": N_("The seal is of another kind than a dossier's. Ask for the original."),
    "seal.certificate_out_of_date": N_(
        "The certificate is not in date now. Look at the day it was sealed on."
    ),
    "seal.certificate_not_trusted": N_(
        "The certificate is none that is trusted here, so it isn't known whose seal this is. Compare it with the "
        "certificate the institution gave you."
    ),
    "seal.timestamp_invalid": N_("The timestamp doesn't hold, so it isn't proven when the seal was made."),
    "seal.refused": N_("A further rule for seals is broken. Don't rely on it; ask for the original."),
    "dossier.hash_unknown": N_(
        "The file's hash is not in this ledger: it was changed, or issued elsewhere. Ask for the original."
    ),
}
PROBLEMS: Final = {
    "leaf_missing": N_("a leaf is missing"),
    "leaf_changed": N_("the leaf no longer has its hash"),
    "leaf_columns_differ": N_("the leaf's columns differ from its content"),
    "head_differs": N_("the ledger's head doesn't fit its leaves"),
    "row_added": N_("a row is there that the leaf doesn't cover"),
    "rows_differ": N_("rows differ from what the leaf covers"),
    "row_without_leaf": N_("a row belongs to no leaf of the ledger"),
    "current_row_missing": N_("a row is gone whose versions are there"),
    "current_row_differs": N_("a row differs from its newest version"),
    "verdict_differs": N_("a verdict differs from what judging its parts again gives"),
    "checkpoint_differs": N_("a checkpoint doesn't fit the leaves"),
    "checkpoint_beyond": N_("a checkpoint tells of more leaves than there are"),
    "checkpoint_unsigned": N_("a checkpoint has no good signature"),
    "checkpoint_outside_differs": N_("a copy of a checkpoint kept outside doesn't fit"),
}


def seal_sentence(name: str, code: str, *, holds: bool) -> str:
    """What one item of a verification found: that it holds, or what is wrong and what to do."""
    if holds:
        return _(HOLDS[name]) if name in HOLDS else capital(name.replace("_", " ")) + "."
    return _(REFUSED[code]) if code in REFUSED else _("This does not hold (%(code)s).") % {"code": code}


def problem_sentence(seq: int | None, what: str, where: str) -> str:
    """What is wrong with the ledger or its rows, and where."""
    told = {
        "what": _(PROBLEMS[what]) if what in PROBLEMS else what.replace("_", " "),
        "where": where,
        "seq": seq,
    }
    if seq is None:
        sentence = _("%(what)s: %(where)s.") if where else _("%(what)s.")
    else:
        sentence = _("Leaf %(seq)s: %(what)s (%(where)s).") if where else _("Leaf %(seq)s: %(what)s.")
    return capital(sentence % told)
