"""How the program itself is, in words: every reason says what to do."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.services.health import Health
from qa_tracker.services.wording_words import capital, moment_words

REASONS: Final = {
    "database": N_("The database does not answer. Start it, or mend the address by which it is reached."),
    "sweep_never": N_(
        "No sweep has run since the program was started, so no check moves and nobody is told. Start the worker "
        "and the beat, or run the sweep by hand: manage.py sweep."
    ),
    "sweep_late": N_(
        "The sweep last ran on %(swept)s, so no check moves and nobody is told. Start the worker and the beat "
        "again, or run the sweep by hand: manage.py sweep."
    ),
    "mail_late": N_(
        "Mail has been waiting since %(waiting)s. Check that the worker runs and that the mail server answers; it "
        "is tried again by itself."
    ),
    "mail_failed": N_(
        "Some mail was given up. An administrator finds the server's answers under Mail, mends the cause and "
        "sends it again."
    ),
}


def health_sentence(health: Health) -> str:
    """How the program is: one sentence or two for each reason that it is not well."""
    if health.status == "starting":
        return _("The program has started; the first sweep is still to come.")
    told = {
        "swept": moment_words(health.last_sweep) if health.last_sweep else _("no day yet"),
        "waiting": moment_words(health.mail_waiting_since) if health.mail_waiting_since else _("no day yet"),
    }
    if health.reasons:
        return " ".join(_(REASONS[reason]) % told for reason in health.reasons)
    return capital(_("all is well; the sweep last ran on %(swept)s.") % told)
