"""Sentences for refused commands: on checks, devices, faults, people, sites, plans, signatures and dossiers."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

CHECKS: Final = {
    "check.unknown": N_("There is no such check in your sight. Go back to Due and choose it there."),
    "draft.someone_else": N_(
        "Since this page was opened someone else has signed in here, so nothing was kept. Open the check again."
    ),
    "draft.kept_meanwhile": N_(
        "Another page has kept something else for this check since you opened it here. Look at what it kept, then "
        "go on with one of the two."
    ),
    "check.no_edition": N_(
        "No edition of this procedure is adopted here, so there is nothing to check by. Ask a physicist to adopt one."
    ),
    "check.own_work": N_(
        "Nobody countersigns their own work. Ask another physicist to countersign this check."
    ),
    "check.form_used": N_(
        "This form was already used for another check or by another person. Open the check again and begin anew."
    ),
    "check.cleaned_before_missing": N_(
        "This procedure asks how the device was cleaned before. Say how, and by whom."
    ),
    "check.test_object_missing": N_("This procedure needs a test object. Name the one that was used."),
    "check.instrument_missing": N_("This procedure needs a %(kind)s. Name the one that was used."),
    "check.measured_at_wrong": N_(
        "“%(entered)s” is no date and time. Write it as 2025-03-05 14:30, in the site's own time."
    ),
    "check.measured_in_future": N_(
        "The time of measurement lies in the future. Correct the day or the time."
    ),
    "check.not_yet_open": N_(
        "This check opens on %(opens_at)s. Measure it then, or record an unplanned check now."
    ),
    "check.procedure_not_for_kind": N_(
        "This procedure is not meant for a %(kind)s. Choose another procedure."
    ),
    "check.send_back_remark_missing": N_(
        "A check is sent back with a remark. Say what is to be done before it can be countersigned."
    ),
    "check.excuse_missing": N_("A check is excused with a reason. Say why it is not done this time."),
}
DEVICES: Final = {
    "device.unknown": N_(
        "There is no such device in your sight. Go back to the Register and choose it there."
    ),
    "device.maker_missing": N_("The maker is missing. Enter it as it stands on the type plate."),
    "device.model_missing": N_("The model is missing. Enter it as it stands on the type plate."),
    "device.serial_missing": N_(
        "The serial number is missing. Enter it as it stands on the type plate: the history follows it."
    ),
    "device.serial_taken": N_(
        "%(maker)s %(model)s %(serial)s is already in the register. Look it up, or correct the serial number."
    ),
    "device.unknown_word": N_("“%(value)s” can't be used here. Choose one of: %(known)s."),
    "device.already_there": N_("The device is already in this place. Choose another, or leave it as it is."),
    "device.field_fixed": N_(
        "“%(name)s” can't be changed in this way. Identity stays as registered; place and state have their own steps."
    ),
    "device.not_a_scanner": N_("Software versions are kept for scanners only. Choose the scanner."),
    "device.software_missing": N_("The software version is missing. Enter it as the scanner shows it."),
    "device.note_missing": N_("Say why the device changes its state: whoever looks for it will read this."),
    "probe.aperture_missing": N_("A probe has at least one aperture. Enter its name and number of elements."),
    "probe.aperture_twice": N_("Two apertures are called “%(name)s”. Give each a name of its own."),
    "device.place_mixed": N_(
        "That room or scanner is not at this site, or is no scanner. Choose one of the site the device goes to."
    ),
    "condition.name_missing": N_(
        "The condition has no name. Name it as the preset is called on the scanner."
    ),
    "baseline.values_missing": N_("There is no number here to become a baseline. Give at least one value."),
    "baseline.measurand_unknown": N_(
        "“%(measurand)s” is not a number that a procedure adopted here asks for. Choose one that is."
    ),
    "baseline.part_unknown": N_("This device has no such aperture or condition. Choose one of its own."),
    "baseline.part_wrong": N_(
        "“%(measurand)s” isn't read there. Name the aperture and condition at which checks of this device ask for it."
    ),
    "baseline.reason_missing": N_("A baseline is set with a reason. Say why it is set now."),
    "baseline.beyond_limit": N_(
        "%(value)s is itself beyond the %(level)s of %(criterion)s, and no baseline may hide a fault. Mend the "
        "fault and measure again."
    ),
}
FAULTS: Final = {
    "fault.unknown": N_("There is no such fault in your sight. Go back to Faults and choose it there."),
    "fault.seen_missing": N_("Say what was seen: whoever looks at the device next needs it."),
    "fault.grade_unknown": N_("“%(grade)s” is no grade of a fault. Choose remedial or suspension."),
    "fault.action_unknown": N_("“%(kind)s” is no kind of action. Choose one of: %(known)s."),
    "fault.action_text_missing": N_("The action has no text. Say what was done."),
    "fault.look_back_missing": N_(
        "The look-back is empty. State whether patients examined since the last conforming check need review."
    ),
    "fault.close_by_restoring": N_(
        "A suspension fault closes when its device is restored to use. Restore the device with its proving check."
    ),
    "fault.remark_missing": N_("A fault is dismissed with a remark. Say why it is none."),
    "restore.remark_missing": N_(
        "A device is restored with a remark. Say what was wrong and what shows it is mended."
    ),
    "restore.not_accepted": N_(
        "This device was never accepted into use. Accept it first, with its acceptance check."
    ),
    "restore.proof_missing": N_(
        "A suspension fault is open on this device. Name the check that proves the repair."
    ),
    "restore.proof_unknown": N_(
        "That check is not of this device, or is not submitted. Choose a submitted check of this device."
    ),
    "restore.proof_suspends": N_(
        "That check itself gives suspension, so it proves no repair. Mend the fault and measure again."
    ),
    "restore.proof_unread": N_(
        "Nothing was read in that check, so it proves no repair. Measure, then restore the device."
    ),
    "restore.proof_too_old": N_(
        "That check was measured before the fault was opened, so it proves nothing about it. Measure again."
    ),
}
PEOPLE: Final = {
    "demo.loaded": N_(
        "The demo is already in this database, so nothing was loaded. Use it, or load it into an empty database."
    ),
    "demo.others": N_(
        "There are people in this database who are not the demo's, so nothing was loaded: invented records must not "
        "stand among real ones. Load the demo into an empty database."
    ),
    "demo.size": N_("%(number)s is no size for a fleet. Ask for at least 1 and at most %(most)s."),
    "person.unknown": N_("There is no such person. Choose one from the list."),
    "person.not_first": N_(
        "There are already accounts, so this is not the first. Ask an administrator for yours."
    ),
    "person.username_missing": N_("The sign-in name is missing. Enter one."),
    "person.username_taken": N_("The sign-in name “%(username)s” is taken. Choose another."),
    "person.name_missing": N_("The name is missing. Enter it as it should stand under signatures."),
    "person.email_wrong": N_("This is no mail address. Check it for missing signs."),
    "person.password_weak": N_("The password is too weak. %(why)s"),
    "grant.unknown": N_("There is no such role to end. Look at the person's roles again."),
    "grant.unknown_role": N_("“%(role)s” is no role. Choose one from the list."),
    "grant.ends_before_start": N_(
        "The role would end on %(until_on)s, before it starts on %(from_on)s. Correct one of the days."
    ),
    "grant.auditor_needs_end": N_("An auditor's role needs a last day. Enter it."),
    "token.unknown": N_("You have no such token in force. Look at your tokens again."),
    "token.label_missing": N_("The token has no label. Say what it is for, so that it can be ended later."),
    "signature.password_missing": N_("A signature needs your password. Enter it."),
    "signature.password_wrong": N_("This is not your password, so nothing was signed. Enter it again."),
    "signature.shown_differs": N_(
        "What would be signed is not what you were shown: something changed meanwhile. Look at it again, then sign."
    ),
}
SITES: Final = {
    "site.unknown": N_("There is no such site in your sight. Choose one of yours."),
    "site.code_missing": N_("The site has no code. Enter a short one, such as AG."),
    "site.no_working_day": N_("A site works on at least one day of the week. Leave one day unticked."),
    "site.digest_hour_wrong": N_("%(hour)s is no hour of the day. Give a whole number from 0 to 23."),
    "site.code_taken": N_("The code %(taken)s belongs to another site. Choose another."),
    "site.name_missing": N_("The site has no name. Enter it."),
    "site.time_zone_unknown": N_("“%(zone)s” is no time zone. Use a name such as Europe/London."),
    "location.unknown": N_("There is no such room at this site. Choose one from the list."),
    "location.name_missing": N_("The room has no name. Enter it."),
    "location.name_taken": N_("There is already a room called “%(name)s” at this site. Choose another name."),
    "holiday.all_known": N_("All these days off are already there, so nothing was added. Choose other days."),
    "leaf.unknown": N_("There is no such leaf in your sight. Go back to the Ledger and choose it there."),
    "pool.unknown": N_("There is no such pool in your sight. Choose one of those offered."),
    "pool.needs_two_sites": N_("A pool is shared by at least two sites. Name them."),
    "pool.name_missing": N_("The pool has no name. Enter it."),
    "test_object.unknown": N_("There is no such test object in your sight. Choose one from the list."),
    "test_object.name_missing": N_("The test object has no name. Enter it."),
    "test_object.serial_missing": N_(
        "The test object has no serial number. Enter it as it stands on the object."
    ),
    "test_object.serial_taken": N_(
        "A test object with the serial number %(serial)s is already registered. Look it up, or correct the number."
    ),
    "instrument.unknown": N_("There is no such instrument in your sight. Choose one from the list."),
    "instrument.serial_missing": N_("The instrument has no serial number. Enter it as it stands on it."),
    "instrument.serial_taken": N_(
        "An instrument with the serial number %(serial)s is already registered. Look it up, or correct the number."
    ),
}
PLANS: Final = {
    "plan.unknown": N_("There is no such plan in force. Look at the device's plans again."),
    "plan.exists": N_("This device already has a plan for this procedure. End that one first."),
    "plan.procedure_not_adopted": N_(
        "The procedure “%(procedure)s” is not adopted here. Ask a physicist to adopt it first."
    ),
    "plan.responsible_may_not_enter": N_(
        "The person named may not enter checks there. Choose another, or give them a role at the site."
    ),
    "edition.unknown": N_("There is no such edition of a procedure. Choose one from the list."),
    "edition.number_taken": N_(
        "Edition %(number)s is published with other content and stays as it is. Give the new content the next number."
    ),
    "record.changed_meanwhile": N_(
        "Someone else changed this meanwhile, so nothing was saved. Look at it again, then repeat your change."
    ),
}
SETS: Final = {
    "criteria_set.unknown": N_("There is no such set of criteria. Choose one from the list."),
    "criteria_set.edition_taken": N_(
        "Edition %(number)s of this set is published and stays as it is. Give the next edition another name."
    ),
    "criteria_set.nothing_changed": N_(
        "Nothing differs from the edition it follows, so there is nothing to publish. Change what is to be different."
    ),
    "adoption.exists": N_("This is already adopted here, so nothing was changed."),
    "adoption.unknown": N_("There is no such adoption in force. Look at the set's adoptions again."),
    "adoption.reason_missing": N_("Say why the limits are no longer to be used here. The reason is kept."),
    "what_if.too_many": N_(
        "More than %(most)s stored readings would have to be judged for this. Choose a shorter period, or one site."
    ),
    "what_if.device_unknown": N_(
        "No device in your sight has the serial number “%(serial)s”. Look it up in the register."
    ),
}
DOSSIERS: Final = {
    "dossier.unknown": N_("There is no such dossier in your sight. Go back to Dossiers and choose it there."),
    "dossier.not_issued": N_(
        "This dossier is %(state)s, so there is no file yet. Look again in a minute, or issue it anew."
    ),
    "dossier.amount_unreadable": N_(
        "The frozen content holds “%(amount)s” where an amount should be. Freeze it anew."
    ),
    "dossier.day_unreadable": N_("The frozen content holds “%(day)s” where a day should be. Freeze it anew."),
    "dossier.label_missing": N_("Words are missing for the dossier: %(labels)s. Tell the administrator."),
    "dossier.verdict_unknown": N_("The frozen content holds unknown verdicts: %(verdicts)s. Freeze it anew."),
    "dossier.schema_unknown": N_(
        "The frozen content is of the form “%(schema)s”, and only %(known)s can be drawn. Use a newer program."
    ),
    "dossier.content_unreadable": N_("The frozen content can't be read: %(problem)s. Freeze it anew."),
    "file.missing": N_(
        "The file with the hash %(sha256)s is no longer where it was kept. Bring it back from a backup."
    ),
    "file.changed": N_(
        "The file with the hash %(sha256)s was changed since it was kept, so it is not shown. Bring it back from a "
        "backup."
    ),
    "seal.key_unreadable": N_("The sealing key can't be read. Check its file and its password."),
    "seal.already_signed": N_("This document is already sealed. Issue a new one to seal again."),
    "seal.timestamp_unavailable": N_(
        "The timestamp authority gave no timestamp: %(problem)s. Try again later, or check its address."
    ),
    "seal.cannot_sign": N_("The document could not be sealed: %(problem)s. Tell the administrator."),
    "seal.timestamp_address": N_(
        "“%(url)s” is no address of a timestamp authority. Use one that begins with http:// or https://."
    ),
    "note.key_unreadable": N_("The ledger's key can't be read. Check that it was copied whole."),
    "note.name_unusable": N_("“%(name)s” can't name a key. Use a name without spaces and plus signs."),
    "note.malformed": N_("This is no signed checkpoint. Check that it was copied whole."),
    "note.not_signed_by_key": N_(
        "The checkpoint carries no signature of the key %(name)s. Use the ledger's own key."
    ),
    "note.signature_invalid": N_(
        "The signature of the key %(name)s doesn't fit this checkpoint: one of them was changed. Don't rely on it."
    ),
}
RECORDS: Final = CHECKS | DEVICES | FAULTS | PEOPLE | SITES | PLANS | SETS | DOSSIERS
