"""Delivering mail: claimed with a lease, sent with a fixed Message-ID, tried again, then given up in sight of all.

A crash between sending and marking repeats the mail with the same Message-ID; nothing is lost. Every try is kept
with what the server answered. Which mails there are is decided in ``digests``.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable

from django.conf import settings
from django.core.mail import EmailMessage
from django.db.models import F, Q
from django.db.models.functions import Now

from qa_tracker.core.errors import Conflict, NotFound
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import Digest, DigestTry, Notice, Person
from qa_tracker.records.queries.mail import digests_in, list_gaps
from qa_tracker.records.queries.notices import notices_in, waiting_digests
from qa_tracker.records.queries.people import holders
from qa_tracker.services import wording
from qa_tracker.services.digests import make_digests
from qa_tracker.services.guards import check_may_somewhere, required, scope
from qa_tracker.services.mail_server import NotTaken, hand_over

__all__ = [
    "RETRY_AFTER_MIN",
    "claim",
    "deliver",
    "deliver_waiting",
    "leave_unsent",
    "make_digests",
    "send_again",
    "send_all_again",
]

RETRY_AFTER_MIN = (1, 5, 15, 60)
SEND_AGAIN = "mail.send_again"
PAUSE_TOLD_FOR = dt.timedelta(days=1)
"""How long after a pause of the sweep a letter still says that there was one."""


def claim(*, digest_id: int) -> bool:
    """Take a digest to send, by compare-and-set on the database's clock; no one else has it until the lease ends."""
    free = Q(state="waiting", due_at__lte=Now()) | Q(state="claimed", lease_until__lt=Now())
    taken = Digest.objects.filter(free, pk=digest_id).update(
        state="claimed",
        lease_until=Now() + dt.timedelta(seconds=settings.MAIL_LEASE_S),
        attempts=F("attempts") + 1,
    )
    return taken == 1


def deliver(*, digest_id: int, at: dt.datetime) -> bool:
    """Claim, send and mark one digest; return whether the server took it.

    An unreachable server or a refusal for now is tried again after 1, 5, 15 and 60 minutes, then given up in red;
    a refusal for good at once. A try that was cut off stays in the list as begun and counts as none.
    """
    return _deliver(digest_id, at) == "sent"


def deliver_waiting(*, at: dt.datetime) -> int:
    """Deliver every digest that waits; return how many the server took. For the second heart and the command.

    Where the server does not answer, the rest waits for the next heart: each would only wait in vain for its turn.
    """
    sent = 0
    for digest_id in waiting_digests():
        outcome = _deliver(digest_id, at)
        sent += outcome == "sent"
        if outcome == "unreachable":
            break
    return sent


def _deliver(digest_id: int, at: dt.datetime) -> str:
    """What came of it: the outcome of the try, ``unreachable``, or empty where someone else has the digest."""
    if not claim(digest_id=digest_id):
        return ""
    digest = Digest.objects.select_related("person").get(pk=digest_id)
    attempt = DigestTry.objects.create(digest=digest, at=at, outcome="begun")
    try:
        reply = hand_over(_letter(digest), digest.person.email)
    except NotTaken as error:
        return _not_taken(digest, attempt, error, at)
    _keep(attempt, "sent", reply)
    Digest.objects.filter(pk=digest_id).update(state="sent", sent_at=at, reply=reply[:300], lease_until=None)
    return "sent"


def _not_taken(digest: Digest, attempt: DigestTry, error: NotTaken, at: dt.datetime) -> str:
    outcome = "given_up" if error.for_good or _tried_enough(digest) else "put_off"
    _keep(attempt, outcome, error.reply)
    if outcome == "put_off":
        _put_off(digest, error.reply, at)
    else:
        _give_up(digest, error.reply, at)
    return "unreachable" if error.unreachable else outcome


def _letter(digest: Digest) -> EmailMessage:
    gaps = list_gaps(since=digest.created_at - PAUSE_TOLD_FOR)
    subject, body = wording.letter(digest.person.name, notices_in(digest.pk), settings.BASE_URL, gaps)
    return EmailMessage(
        subject,
        body,
        settings.DEFAULT_FROM_EMAIL,
        [digest.person.email],
        headers={"Message-ID": digest.message_id, "Auto-Submitted": "auto-generated"},
    )


def _keep(attempt: DigestTry, outcome: str, reply: str) -> None:
    attempt.outcome, attempt.reply = outcome, reply[:300]
    attempt.save(update_fields=["outcome", "reply"])


def _tries_put_off(digest: Digest) -> int:
    """How many tries were put off since the mail was made, or sent again."""
    outcomes = list(digest.tries.order_by("id").values_list("outcome", flat=True))
    since = len(outcomes) - outcomes[::-1].index("given_up") if "given_up" in outcomes else 0
    return outcomes[since:].count("put_off")


def _tried_enough(digest: Digest) -> bool:
    return _tries_put_off(digest) >= len(RETRY_AFTER_MIN)


def _mine(digest: Digest) -> Q:
    """The claim this delivery holds; another's, taken after the lease ended, is left alone."""
    return Q(pk=digest.pk, state="claimed", attempts=digest.attempts)


def _put_off(digest: Digest, reply: str, at: dt.datetime) -> None:
    minutes = RETRY_AFTER_MIN[_tries_put_off(digest) - 1]
    Digest.objects.filter(_mine(digest)).update(
        state="waiting", due_at=at + dt.timedelta(minutes=minutes), reply=reply[:300], lease_until=None
    )


def _give_up(digest: Digest, reply: str, at: dt.datetime) -> None:
    """Mark it failed and tell the administrators here, once about one mail. Leaf ``mail.given_up``."""
    with ledger.sweeping("mail.given_up", at=at, as_if=None) as act:
        failed = Digest.objects.filter(_mine(digest))
        if not failed.update(state="failed", reply=reply[:300], lease_until=None):
            return
        site = digest.person.duties_site
        told = set(Notice.objects.filter(about=digest.key).values_list("person_id", flat=True))
        to_tell = holders("administrator", digest.person.duties_site_id, at.date())
        keys = [_tell(act, digest, person_id) for person_id in to_tell if person_id not in told]
        act.about(digest.person, site=site)
        # The server's words may name the person, and a leaf is for ever: only its code stands there.
        answer = reply[:3] if reply[:3].isdecimal() else ""
        act.tell({"mail": digest.key, "answer": answer, "notices": sorted(keys)})


def _tell(act: ledger.Act, digest: Digest, person_id: int) -> str:
    notice = Notice(
        uid=uuid7(),
        about=digest.key,
        recipient="administrator",
        person_id=person_id,
        level="mail_failed",
        channel="in_app",
        at=act.at,
    )
    act.insert(notice)
    return f"{digest.key}/mail_failed/{person_id}/in_app"


def send_again(*, digest_id: int, actor: Person, at: dt.datetime) -> None:
    """Send a mail again that was given up, with the same Message-ID. Leaf ``mail.sent_again``.

    Refused: role, a mail of another site, one that was not given up.
    """
    digest = _given_up(digest_id, actor, at)
    with ledger.command("mail.sent_again", actor=actor, at=at) as act:
        _wait_again([digest.pk], at)
        act.about(digest.person, site=digest.person.duties_site)
        act.tell({"mails": [digest.key]})


def send_all_again(*, actor: Person, at: dt.datetime) -> int:
    """Send all mails again that were given up, after the cause is mended; return how many. Leaf ``mail.sent_again``.

    Refused: role, nothing that was given up.
    """
    check_may_somewhere(actor, SEND_AGAIN, at)
    with ledger.command("mail.sent_again", actor=actor, at=at) as act:
        found = digests_in(scope(actor, at, SEND_AGAIN)).filter(state="failed").order_by("id")
        keys = dict(found.values_list("id", "key"))
        _wait_again(keys, at)
        act.tell({"mails": list(keys.values())})
    return len(keys)


def leave_unsent(*, digest_id: int, reason: str, actor: Person, at: dt.datetime) -> None:
    """Decide that a mail that was given up is not sent any more. Leaf ``mail.left_unsent``.

    Its notices stay as they are, in the program. Refused: as :func:`send_again`, and without a reason.
    """
    digest = _given_up(digest_id, actor, at)
    reason = required(reason, "mail.reason_missing", "reason")
    with ledger.command("mail.left_unsent", actor=actor, at=at, reason=reason) as act:
        if not Digest.objects.filter(pk=digest.pk, state="failed").update(state="unsent"):
            raise Conflict("mail.not_given_up")
        act.about(digest.person, site=digest.person.duties_site)
        act.tell({"mail": digest.key})


def _given_up(digest_id: int, actor: Person, at: dt.datetime) -> Digest:
    check_may_somewhere(actor, SEND_AGAIN, at)
    mine = digests_in(scope(actor, at, SEND_AGAIN)).filter(pk=digest_id)
    digest = mine.select_related("person__duties_site").first()
    if digest is None:
        raise NotFound("mail.unknown")
    if digest.state != "failed":
        raise Conflict("mail.not_given_up")
    return digest


def _wait_again(digest_ids: Iterable[int], at: dt.datetime) -> None:
    """Let given-up mails wait anew, their tries counted from here on."""
    given_up = Digest.objects.filter(pk__in=list(digest_ids), state="failed")
    if not given_up.update(state="waiting", due_at=at, attempts=0):
        raise Conflict("mail.not_given_up")
