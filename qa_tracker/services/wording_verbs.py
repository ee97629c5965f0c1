"""The words for verbs: what a state allows, and what a role allows."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

MOVES: Final = {
    "check": {
        "start": N_("started"),
        "submit": N_("submitted"),
        "satisfy": N_("satisfied by another check"),
        "amend": N_("amended"),
        "countersign": N_("countersigned"),
        "withdraw": N_("freed of its countersignature"),
        "send_back": N_("sent back"),
        "miss": N_("counted missed"),
        "excuse": N_("excused"),
        "void": N_("voided"),
        "could not test": N_("recorded as not tested"),
    },
    "device": {
        "receive": N_("received"),
        "accept": N_("accepted into use"),
        "accept_restricted": N_("accepted with a restriction"),
        "borrow_in": N_("taken on loan"),
        "restrict": N_("restricted"),
        "quarantine": N_("quarantined"),
        "restore": N_("restored to use"),
        "restore_restricted": N_("restored with a restriction"),
        "restore_loan": N_("restored to use as a loan"),
        "send_to_repair": N_("sent to repair"),
        "return_from_repair": N_("returned from repair"),
        "lend_out": N_("lent out"),
        "return_from_loan": N_("returned from loan"),
        "hand_back": N_("handed back"),
        "store": N_("stored"),
        "lose": N_("recorded as lost"),
        "find": N_("recorded as found"),
        "dispose": N_("disposed of"),
    },
    "fault": {
        "act": N_("acted on"),
        "await_proof": N_("put forward for proof"),
        "disprove": N_("put back to open"),
        "move": N_("moved to another part"),
        "close": N_("closed"),
        "dismiss": N_("dismissed"),
        "reopen": N_("opened again"),
    },
    "dossier": {
        "render": N_("drawn"),
        "release": N_("given back to be drawn"),
        "issue": N_("issued"),
        "fail": N_("marked as not drawn"),
    },
}
"""What each verb of ``core.workflow`` does to its noun: "it can't be ..."."""

PERMITTED: Final = {
    "see": N_("see this"),
    "check.enter_user": N_("enter user checks"),
    "check.enter": N_("enter checks of this procedure"),
    "check.countersign": N_("countersign checks"),
    "check.excuse": N_("excuse checks"),
    "check.move_due": N_("move due days"),
    "check.accept_out_of_window": N_("accept a check outside its window"),
    "check.acknowledge": N_("acknowledge checks of others"),
    "device.register": N_("register devices"),
    "device.edit": N_("change the register"),
    "device.place": N_("move devices"),
    "device.accept": N_("accept devices into use"),
    "device.quarantine": N_("quarantine devices"),
    "device.restore": N_("restore devices to use"),
    "device.repair": N_("send devices to repair or take them back"),
    "condition.set": N_("set conditions"),
    "object.register": N_("register test objects and instruments"),
    "procedure.adopt": N_("publish or adopt procedures"),
    "criteria.adopt": N_("publish or adopt criteria"),
    "baseline.set": N_("set baselines"),
    "plan.make": N_("make or end plans"),
    "ladder.set": N_("set who is told at which level"),
    "fault.open": N_("open faults"),
    "fault.act": N_("record actions on faults"),
    "fault.close": N_("close faults"),
    "dossier.issue": N_("issue dossiers"),
    "dossier.read": N_("read dossiers"),
    "ledger.read": N_("read the ledger"),
    "person.manage": N_("manage people and their roles"),
    "site.manage": N_("manage sites"),
    "mail.see": N_("see the mail that waits"),
    "mail.send_again": N_("send mail again that was given up"),
    "token.issue": N_("issue tokens"),
}
"""What each verb of ``core.roles`` lets a person do: "your role doesn't let you ..."."""
