"""What a person may do with a device, in words; what they may not do now says why."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from django.urls import reverse
from django.utils.functional import Promise
from django.utils.translation import gettext_lazy as _

from qa_tracker.core.errors import DomainError
from qa_tracker.core.workflow import DEVICE, may_move, target
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.services import states, wording

Words = str | Promise
WHY = _("Why")


@dataclass(frozen=True)
class Move:
    """The words of a move between states."""

    button: Words
    done: Words
    asks: Words = WHY
    hint: Words = ""


MOVES = {
    "restrict": Move(
        _("Restrict its use"),
        _("Its use is restricted."),
        _("What is barred"),
        _("Say which use is barred, and which is still allowed."),
    ),
    "send_to_repair": Move(
        _("Send to repair"),
        _("It is at repair."),
        _("Why, with the decontamination certificate's number"),
        _("Nothing is sent away without a decontamination certificate."),
    ),
    "return_from_repair": Move(
        _("Return from repair"),
        _("It is back, and quarantined until a check proves it."),
        _("What was done, with the maker's job number"),
    ),
    "receive": Move(_("Receive"), _("It awaits acceptance."), _("What was received")),
    "store": Move(_("Put into store"), _("It is stored.")),
    "lose": Move(_("Record as lost"), _("It is recorded as lost."), _("Where it was looked for")),
    "find": Move(
        _("Record as found"),
        _("It is found, and quarantined until a check proves it."),
        _("Where it was found"),
    ),
    "lend_out": Move(
        _("Lend out"),
        _("It is on loan."),
        _("To whom and until when, with the decontamination certificate's number"),
        _("Nothing is lent without a decontamination certificate."),
    ),
    "return_from_loan": Move(
        _("Return from loan"), _("It is back and awaits acceptance."), _("How it came back")
    ),
    "dispose": Move(_("Dispose of"), _("It is disposed of; its records stay."), _("How and by whom")),
}


@dataclass(frozen=True)
class Offered:
    """A button: where it leads, or the sentence that says why not now."""

    button: Words
    address: str
    barred: str = ""
    first: bool = False


May = Callable[[str], bool]


def offered(device: DeviceRow, may: May, *, accepted: bool) -> tuple[Offered, ...]:
    """Buttons for what the person's role allows here; quarantine first.

    Acceptance and restoring are shown barred where the state forbids them, since people look for them; other
    moves the state forbids are left out.
    """
    found = [
        _signed(device, "restore", "device-restore", _("Restore to use"), may),
        _signed(device, "accept", "device-accept", _("Accept into use"), may),
    ]
    shown = [each for each in found if each is not None and _is_asked_for(device, each, accepted=accepted)]
    moves = [
        Offered(words.button, reverse("device-state", args=[device.uid, verb]))
        for verb, words in MOVES.items()
        if may(states.VERBS[verb]) and may_move(DEVICE, device.state, verb)
    ]
    plain = [
        Offered(button, reverse(name, args=[device.uid]))
        for name, verb, button in (
            ("device-move", "device.place", _("Move")),
            ("device-edit", "device.edit", _("Change the register")),
        )
        if may(verb)
    ]
    return (*shown, *plain, *moves)


def _signed(device: DeviceRow, verb: str, name: str, button: Words, may: May) -> Offered | None:
    if not may(f"device.{verb}"):
        return None
    address = reverse(name, args=[device.uid])
    try:
        target(DEVICE, device.state, verb)
    except DomainError as error:
        return Offered(button, address, wording.refusal(error))
    return Offered(button, address, first=True)


def _is_asked_for(device: DeviceRow, each: Offered, *, accepted: bool) -> bool:
    """Whether someone would look for the button: acceptance before there was one, restoring after."""
    is_acceptance = each.address == reverse("device-accept", args=[device.uid])
    return not each.barred or (is_acceptance != accepted and device.state not in ("in_use", "disposed"))
