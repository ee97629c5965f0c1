"""One leaf of the ledger as one sentence: who did what to which device."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable, Mapping
from typing import Any, Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_
from django.utils.translation import ngettext

from qa_tracker.records.queries.ledger import LeafRow
from qa_tracker.services.wording_words import (
    capital,
    day_words,
    device_state_word,
    kind_word,
    level_word,
    listed_all,
    moment_words,
    reason_word,
    role_word,
    verdict_word,
)

SENTENCES: Final = {
    "check.opened": N_("%(actor)s began the unplanned check “%(procedure)s” of %(device)s"),
    "check.submitted": N_(
        "%(actor)s signed the check “%(procedure)s”, edition %(edition)s, of %(device)s %(verdict)s "
        "(%(readings)s)%(outside)s%(satisfied)s"
    ),
    "check.countersigned": N_("%(actor)s countersigned a check of %(device)s"),
    "check.sent_back": N_("%(actor)s sent a check of %(device)s back: %(reason)s"),
    "check.not_tested": N_("%(actor)s could not test %(device)s: %(not_tested)s"),
    "check.due_moved": N_("%(actor)s moved a due day of %(device)s to %(due)s: %(reason)s"),
    "check.excused": N_("%(actor)s excused the check of %(device)s due on %(due)s: %(reason)s"),
    "device.registered": N_("%(actor)s registered the %(kind)s %(maker)s %(model)s %(serial)s"),
    "device.placed": N_("%(actor)s moved %(device)s: %(reason)s"),
    "device.edited": N_("%(actor)s changed the register fields of %(device)s: %(fields)s"),
    "device.software_recorded": N_(
        "%(actor)s recorded software %(version)s of %(device)s, since %(since)s%(review)s"
    ),
    "device.quarantined": N_("%(actor)s quarantined %(device)s: %(reason)s"),
    "device.restored": N_("%(actor)s restored %(device)s to use: %(reason)s"),
    "device.accepted": N_("%(actor)s accepted %(device)s into use"),
    "device.moved_on": N_("%(actor)s changed the state of %(device)s to %(state)s: %(note)s"),
    "condition.set": N_("%(actor)s set the condition “%(name)s” of %(device)s"),
    "baseline.set": N_("%(actor)s set %(baselines)s of %(device)s: %(reason)s"),
    "baseline.kept": N_("%(actor)s kept %(baselines)s of %(device)s, which stood under review: %(reason)s"),
    "plan.made": N_("%(actor)s planned “%(procedure)s” for %(device)s, first due on %(first_due)s"),
    "plan.ended": N_("%(actor)s ended a plan of %(device)s: %(reason)s"),
    "fault.opened": N_("%(actor)s opened a fault of the %(grade)s on %(device)s: %(seen)s"),
    "fault.acted_on": N_("%(actor)s recorded an action on a fault of %(device)s (%(kind)s): %(text)s"),
    "fault.looked_back": N_("%(actor)s stated the look-back for a fault of %(device)s: %(look_back)s"),
    "fault.dismissed": N_("%(actor)s dismissed a fault of %(device)s: %(remark)s"),
    "procedure.published": N_("%(actor)s published the procedure “%(procedure)s”, edition %(edition)s"),
    "procedure.adopted": N_(
        "%(actor)s adopted the procedure “%(procedure)s”, edition %(edition)s, for %(site)s"
    ),
    "criteria.published": N_("%(actor)s published the criteria “%(set)s”, edition %(edition)s"),
    "criteria.adopted": N_("%(actor)s adopted the criteria “%(set)s”, edition %(edition)s, for %(site)s"),
    "criteria.ended": N_(
        "%(actor)s ended the criteria “%(set)s”, edition %(edition)s, for %(site)s: %(reason)s"
    ),
    "uncertainty.stated": N_(
        "%(actor)s stated the uncertainty of %(measurand)s for %(site)s (%(kind)s): %(source)s"
    ),
    "uncertainty.ended": N_(
        "%(actor)s ended the stated uncertainty of %(measurand)s for %(site)s: %(reason)s"
    ),
    "test_object.registered": N_("%(actor)s registered the test object %(name)s, serial number %(serial)s"),
    "instrument.registered": N_("%(actor)s registered the %(kind)s %(maker)s %(model)s %(serial)s"),
    "person.first": N_("The first account was made, with the role of %(role)s"),
    "person.created": N_("%(actor)s made the account “%(username)s”"),
    "person.password_set": N_("%(actor)s set a password"),
    "person.address_set": N_("%(actor)s changed a mail address"),
    "role.granted": N_("%(actor)s gave the role of %(role)s for %(site)s, from %(from)s"),
    "role.ended": N_("%(actor)s ended a role on %(until)s"),
    "leave.taken": N_("%(actor)s recorded a leave from %(from)s to %(until)s, with a deputy"),
    "leave.cancelled": N_("%(actor)s cancelled a leave"),
    "token.issued": N_("%(actor)s issued the token “%(label)s”"),
    "token.revoked": N_("%(actor)s ended a token"),
    "feed.issued": N_("%(actor)s issued the address of their calendar"),
    "feed.revoked": N_("%(actor)s ended the address of their calendar"),
    "site.created": N_("%(actor)s made the site %(code)s, %(name)s"),
    "site.instructed": N_("%(actor)s set what a site tells people to do on a verdict"),
    "location.added": N_("%(actor)s added the room %(name)s"),
    "site.hours_set": N_("%(actor)s set the hours of a site's mail: from %(digest_hour)s:00%(quiet)s"),
    "location.hours_set": N_("%(actor)s recorded the hours of the room %(name)s: %(clock)s"),
    "ladder.set": N_("%(actor)s set who is told at which level for %(site)s: %(reason)s"),
    "ladder.dropped": N_("%(actor)s went back to the common ladder for %(site)s: %(reason)s"),
    "holidays.added": N_("%(actor)s added days off (%(days)s)"),
    "pool.created": N_("%(actor)s made the pool %(name)s of %(sites)s"),
    "dossier.frozen": N_("%(actor)s set a dossier of %(device)s, its content frozen, to be drawn"),
    "dossier.rendering": N_("%(actor)s began to draw a dossier of %(device)s"),
    "dossier.issued": N_("%(actor)s issued a sealed dossier of %(device)s"),
    "dossier.failed": N_("%(actor)s could not draw a dossier of %(device)s: %(failure)s"),
    "notices.acknowledged": N_(
        "%(actor)s acknowledged the check of %(device)s until %(until_at)s: %(reason)s"
    ),
    "notices.snoozed": N_(
        "%(actor)s put their notices of a check of %(device)s off until %(until_at)s: %(reason)s"
    ),
    "notices.hold_ended": N_("%(actor)s ended a hold of the notices of %(device)s: %(reason)s"),
    "mail.given_up": N_("%(actor)s gave a mail up and told the administrators of it (%(notices)s)"),
    "mail.sent_again": N_("%(actor)s had %(mails)s sent again after they were given up"),
    "mail.left_unsent": N_("%(actor)s decided that a mail which was given up is not sent: %(reason)s"),
    "notices.owed": N_("%(actor)s moved checks by date: %(moved)s"),
}
"""A sentence for every kind of leaf, with what it takes from the leaf's content."""

ORIGINS: Final = {"demo": N_("for the demonstration"), "imported": N_("imported")}


def leaf_sentence(leaf: LeafRow) -> str:
    """Say in one sentence what a leaf records; a kind that is not known is named as it is."""
    said = leaf.said
    if leaf.kind not in SENTENCES:
        sentence = f"{leaf.kind} ({_who(leaf)})"
    else:
        sentence = _(SENTENCES[leaf.kind]) % _Told(_common(leaf, said) | _from_content(said.get("new") or {}))
    marks = [_(ORIGINS[said["origin"]])] if said.get("origin") in ORIGINS else []
    if said.get("as_if"):
        marks.append(
            _("as if on %(moment)s") % {"moment": moment_words(dt.datetime.fromisoformat(said["as_if"]))}
        )
    return capital(sentence.removesuffix(": ")) + (f" ({', '.join(marks)})" if marks else "") + "."


class _Told(dict[str, str]):
    """What a leaf tells; old leaves stay readable where they say less."""

    def __missing__(self, name: str) -> str:
        return "…"


def _who(leaf: LeafRow) -> str:
    if leaf.actor:
        return leaf.actor
    return _("the program") if leaf.actor_uid is None else _("a person on record")


def _common(leaf: LeafRow, said: Mapping[str, Any]) -> dict[str, str]:
    reason = str(said.get("reason") or "")
    return {
        "actor": _who(leaf),
        "device": leaf.device or _("a device"),
        "reason": reason.removesuffix("."),
        "not_tested": reason_word(reason),
    }


def _from_content(new: Mapping[str, Any]) -> dict[str, str]:
    told = {name: str(value).removesuffix(".") for name, value in new.items() if isinstance(value, str | int)}
    told |= {name: make(new[name]) for name, make in WORDS.items() if new.get(name)}
    told.setdefault("site", _("the whole group"))
    told["quiet"] = _quiet(new)
    told["clock"] = _("round the clock") if new.get("round_the_clock") else _("not round the clock")
    told["fields"] = listed_all(name.replace("_", " ") for name in sorted(new))
    told["moved"] = _moved(new)
    told["review"] = _review(len(new.get("under_review") or ()))
    told["satisfied"] = _satisfied(len(new.get("satisfied") or ()))
    told["outside"] = _outside(new.get("outside_window") or {})
    if isinstance(new.get("edition"), dict):
        told |= {"procedure": new["edition"]["procedure"], "edition": str(new["edition"]["number"])}
    if "readings" in new:
        told["verdict"] = _verdict(str(new.get("verdict") or ""))
    return told


def _verdict(verdict: str) -> str:
    if not verdict:
        return _("without a verdict")
    return _("with the verdict %(verdict)s") % {"verdict": verdict_word(verdict)}


def _readings(readings: list[Mapping[str, Any]]) -> str:
    count = sum(1 for each in readings if each.get("entered") or each.get("qualifier") == "not_seen")
    return ngettext("%(count)d reading", "%(count)d readings", count) % {"count": count}


def _baselines(baselines: list[Mapping[str, Any]]) -> str:
    count = len(baselines)
    return ngettext("%(count)d baseline", "%(count)d baselines", count) % {"count": count}


def _notices(keys: list[str]) -> str:
    return ngettext("%(count)d notice", "%(count)d notices", len(keys)) % {"count": len(keys)}


def _mails(keys: list[str]) -> str:
    return ngettext("%(count)d mail", "%(count)d mails", len(keys)) % {"count": len(keys)}


def _review(count: int) -> str:
    """What a software event put under review; nothing where it put none."""
    if not count:
        return ""
    return ngettext(
        "; %(count)d baseline is under review", "; %(count)d baselines are under review", count
    ) % {"count": count}


def _satisfied(count: int) -> str:
    """How many other checks a submission satisfied besides its own; nothing where there were none."""
    if not count:
        return ""
    return ngettext(
        "; %(count)d other check is satisfied by it", "; %(count)d other checks are satisfied by it", count
    ) % {"count": count}


def _outside(told: Mapping[str, str]) -> str:
    """Why a check was accepted outside its window, and what that moved; nothing of one that was not."""
    if not told:
        return ""
    return _("; accepted outside the window: %(reason)s; next due on %(next_due)s") % {
        "reason": told["reason"].removesuffix("."),
        "next_due": _day(told["next_due"]),
    }


def _quiet(new: Mapping[str, Any]) -> str:
    """Between which hours a site is quiet; nothing where it never is."""
    if new.get("quiet_from_hour") is None:
        return ""
    return _(", quiet from %(from)s:00 to %(until)s:00") % {
        "from": new["quiet_from_hour"],
        "until": new["quiet_until_hour"],
    }


def _moved(new: Mapping[str, Any]) -> str:
    """What a sweep did, in numbers; nothing of what it didn't."""
    counts = {
        name: len(new.get(name) or ()) for name in ("notices", "missed", "excused", "opened", "plans_ended")
    }
    words = {
        "notices": ngettext("%(n)d notice owed", "%(n)d notices owed", counts["notices"]),
        "missed": ngettext("%(n)d check missed", "%(n)d checks missed", counts["missed"]),
        "excused": ngettext("%(n)d check excused", "%(n)d checks excused", counts["excused"]),
        "opened": ngettext("%(n)d check opened", "%(n)d checks opened", counts["opened"]),
        "plans_ended": ngettext("%(n)d plan ended", "%(n)d plans ended", counts["plans_ended"]),
    }
    told = [words[name] % {"n": count} for name, count in counts.items() if count]
    return listed_all(told) if told else _("nothing to tell")


def _day(text: str) -> str:
    return day_words(dt.date.fromisoformat(text))


WORDS: Final[dict[str, Callable[[Any], str]]] = {
    "kind": kind_word,
    "role": role_word,
    "state": device_state_word,
    "grade": level_word,
    "readings": _readings,
    "baselines": _baselines,
    "days": lambda days: listed_all(_day(day) for day in sorted(days)),
    **dict.fromkeys(("due", "since", "first_due", "from", "until"), _day),
    "sites": listed_all,
    "notices": _notices,
    "mails": _mails,
    "until_at": lambda moment: moment_words(dt.datetime.fromisoformat(moment)),
}
