"""Sentences for refused values: numbers, units, readings, schedules, criteria and published documents."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

NUMBERS: Final = {
    "number.empty": N_("There is no number. Enter one, or say why it could not be tested."),
    "number.not_a_number": N_(
        "“%(entered)s” is not a number. Use digits, with a comma or a point for decimals."
    ),
    "number.not_finite": N_("“%(entered)s” is not a finite number. Enter the value that was read."),
    "number.qualifier": N_(
        "“%(entered)s” holds a sign of comparison. Enter the number alone and choose “more than” or “less than” "
        "beside it."
    ),
    "number.exponent": N_("“%(entered)s” is written with an exponent. Write the number out in full."),
    "number.unit": N_(
        "“%(entered)s” holds a unit (%(unit)s). Enter the number alone, in the unit shown beside the field."
    ),
    "number.digits": N_("“%(entered)s” holds signs that are not digits. Use the digits 0 to 9."),
    "number.separators": N_(
        "“%(entered)s” holds more than one sign or separator. Use one comma or point for decimals and nothing "
        "between thousands."
    ),
    "number.out_of_range": N_(
        "“%(entered)s” is longer than the %(digits)s digits that can be kept. Check the number."
    ),
    "number.too_many_places": N_(
        "“%(entered)s” has more than %(places)s decimal places, the most that can be kept. Round it."
    ),
    "number.resolution": N_(
        "“%(entered)s” is finer than this is read to: steps of %(resolution)s. Enter a whole number of steps."
    ),
    "number.loss": N_("%(entered)s can't be kept exactly with %(places)s decimal places. Use more places."),
    "number.step": N_("A step of %(step)s can't be counted in. Give a step above zero."),
    "unit.unknown": N_("The unit “%(unit)s” is not known. Use one of: %(known)s."),
}
READINGS: Final = {
    "reading.kind": N_("A measurand can't be of the kind “%(kind)s”. Use one of: %(known)s."),
    "reading.qualifier": N_("“%(qualifier)s” is no qualifier. Use one of: %(known)s."),
    "reading.not_asked": N_(
        "This check doesn't ask for “%(key)s”. Open the check again: its procedure or the device may have changed."
    ),
    "reading.condition_unconfirmed": N_(
        "Nothing is said of the condition “%(condition)s”. Confirm that it is unchanged, or enter what differs."
    ),
    "reading.both": N_("There is a value and also a reason for not testing. Keep one of the two."),
    "reading.seen_and_not_seen": N_("There is a value and also “not seen”. Keep one of the two."),
    "reading.reason_unknown": N_("“%(reason)s” is no reason for not testing. Choose one of those listed."),
    "reading.qualifier_not_allowed": N_(
        "“%(qualifier)s” can't be said of this measurand. It takes one of: %(allowed)s."
    ),
    "reading.unit_wrong": N_("This is read in %(wanted)s, not in %(unit)s. Enter it in %(wanted)s."),
    "reading.grade_unknown": N_("“%(grade)s” is no grade of this item. Choose one of: %(known)s."),
    "reading.text_too_long": N_("The text is longer than %(most)s characters. Shorten it."),
    "reading.missing": N_(
        "This is still to be answered. Enter what was read, or say why it could not be tested."
    ),
    "reading.confirm_tenfold": N_(
        "%(value)s is near ten times or a tenth of the last value, %(last)s. Check the unit, then correct or "
        "confirm it."
    ),
    "reading.confirm_outside": N_(
        "%(value)s is far outside what is usual, %(low)s to %(high)s. Check it, then correct or confirm it."
    ),
    "rule.unknown": N_("“%(rule)s” is no decision rule. Use one of: %(known)s."),
    "uncertainty.negative": N_("The uncertainty %(uncertainty)s is below zero. Give it as zero or more."),
}
SCHEDULES: Final = {
    "schedule.days_out_of_range": N_(
        "%(days)s days is not a window this can keep. Use between 0 and %(most)s days."
    ),
    "schedule.unknown_roll": N_(
        "“%(roll)s” says nothing about days off. Use “none”, “forward”, “backward” or “nearest”."
    ),
    "schedule.never_due": N_(
        "By this rule (%(rule)s), counted from %(anchor_on)s, nothing is ever due. Choose other days."
    ),
    "schedule.unknown_basis": N_(
        "“%(basis)s” is nothing to count from. Count by the calendar or from the last check."
    ),
    "schedule.basis_needs_plain_rule": N_(
        "A rule with named days (%(rule)s) can't be counted from the last check. Count it by the calendar, or "
        "name no days."
    ),
    "schedule.no_working_day": N_(
        "There is no working day within %(days)s days of %(on)s. Check the site's weekend and days off."
    ),
    "schedule.unknown_zone": N_("“%(zone)s” is no time zone. Use a name such as Europe/London."),
    "schedule.beyond_calendar": N_(
        "%(months)s months from %(on)s is beyond the calendar. Choose a shorter interval."
    ),
    "schedule.part_value": N_("%(part)s can't be “%(value)s” in a recurrence rule. Correct that part."),
    "schedule.part_needs_bymonth": N_("A yearly rule with %(part)s needs BYMONTH too. Name the month."),
    "schedule.part_not_taken": N_(
        "A rule of the frequency %(frequency)s takes no %(part)s here. Leave that part out."
    ),
    "schedule.rule_malformed": N_(
        "“%(text)s” is no recurrence rule; it goes wrong at “%(part)s”. Write it as FREQ=MONTHLY;INTERVAL=1."
    ),
}
CRITERIA: Final = {
    "criterion.unknown_word": N_("%(field)s can't be “%(word)s”. Use one of: %(known)s."),
    "criterion.not_object": N_("%(field)s has to be an object with keys. Correct the criterion."),
    "criterion.missing_key": N_("%(field)s is missing. Add it to the criterion."),
    "criterion.unknown_key": N_("%(field)s is not a key of a criterion. Use only: %(known)s."),
    "criterion.not_decimal": N_(
        "%(field)s is “%(value)s”. Write it as a decimal in quotation marks, with a point."
    ),
    "criterion.empty_limit": N_("%(field)s names no limit. Give it an absolute value, a percentage or both."),
    "criterion.percent_without_reference": N_(
        "%(field)s is a percentage of nothing, for the criterion has no nominal or baseline. Use an absolute value."
    ),
    "criterion.absolute_with_ratio": N_(
        "%(field)s can't be used: a ratio is judged in percent. Give a percentage."
    ),
    "baseline.below_zero": N_(
        "%(value)s is below zero, and this quantity never is. Look for a stray sign, and enter the value again."
    ),
    "criterion.negative": N_("%(field)s is %(value)s. A limit on a change or share has to be zero or more."),
    "criterion.negative_either_way": N_(
        "%(field)s is %(value)s. A limit that holds either way is compared with the size of the reading, so every "
        "reading would be beyond it. Enter zero or more, or say which way is worse."
    ),
    "criterion.own_spread_place": N_(
        "%(field)s is a limit of the device's own spread. It belongs to a baseline's remedial level only."
    ),
    "criterion.own_spread_beside": N_(
        "%(field)s has %(keys)s beside coverage and confidence. Give the one or the other."
    ),
    "criterion.own_spread_share": N_(
        "%(field)s is “%(value)s”. Coverage and confidence are both needed, more than 0 and less than 100 percent."
    ),
    "criterion.no_level": N_("%(field)s has no level. Give a remedial level, a suspension level or both."),
    "criterion.not_list": N_("%(field)s has to be a list. Correct the criterion."),
    "criterion.bands_and_quantity": N_(
        "%(field)s has to be given together with the bands. Give both, or neither."
    ),
    "criterion.banding_name": N_(
        "%(field)s can't be “%(name)s”. Use a plain name such as test_frequency_mhz."
    ),
    "criterion.levels_beside_bands": N_(
        "%(field)s can't stand beside levels that hold everywhere. Put the levels into the bands."
    ),
    "criterion.band_reversed": N_(
        "%(field)s runs from %(start)s to below %(below)s, which holds nothing. Give it a start below its end."
    ),
    "criterion.bands_overlap": N_(
        "%(field)s: the band from %(start)s to below %(below)s overlaps the one from %(other_start)s to below "
        "%(other_below)s. Let each begin where the last one ends."
    ),
    "criterion.grades_beside_limits": N_(
        "%(field)s can't stand beside %(keys)s. A criterion has grades or limits, not both."
    ),
    "criterion.not_beyond": N_(
        "%(field)s: the suspension level (%(suspension)s) doesn't lie beyond the remedial level (%(remedial)s). "
        "Correct one of them."
    ),
}
DOCUMENTS: Final = {
    "library.missing": N_("%(field)s is missing. Add it to the document."),
    "library.unknown_key": N_("%(field)s is not a key of this document. Take it out or correct its name."),
    "library.not_a_text": N_("%(field)s has to be a text. Put it in quotation marks."),
    "library.not_a_flag": N_("%(field)s is “%(value)s”. Write true or false."),
    "library.not_an_object": N_("%(field)s has to be an object with keys. Correct the document."),
    "library.not_a_list": N_("%(field)s has to be a list. Correct the document."),
    "library.empty": N_("%(field)s is empty. Fill it in, or leave it out where that is allowed."),
    "library.not_allowed": N_("%(field)s can't be “%(value)s”. It takes: %(allowed)s."),
    "library.not_whole": N_("%(field)s is “%(value)s”. Write a whole number from %(low)s."),
    "library.repeated": N_("%(field)s: “%(value)s” is there more than once. Keep one of them."),
    "library.kind_does_not_fit": N_(
        "%(field)s doesn't fit a measurand of the kind %(kind)s. Correct the kind, or take it out."
    ),
    "library.unknown_measurand": N_("%(field)s names “%(measurand)s”, which this document doesn't ask for."),
    "library.unit_differs": N_(
        "%(field)s: the criterion %(criterion)s is in %(unit)s, not in the measurand's unit. Use the same unit."
    ),
    "library.medium_differs": N_(
        "%(field)s: the criterion %(criterion)s holds for the medium “%(medium)s” only. Choose another criterion."
    ),
    "library.unknown_criterion": N_(
        "%(field)s names the criterion %(criterion)s, which no published set has. Publish its set first."
    ),
    "library.measurand_differs": N_(
        "%(field)s: “%(measurand)s” already stands for something else. Use another code, or the same content."
    ),
    "library.unknown_caution": N_(
        "%(field)s names the caution “%(caution)s”, which there is not. Correct it."
    ),
    "library.no_standing": N_(
        "%(field)s says nothing of the %(level)s. Say whether its number is confirmed, from memory, common practice or "
        "a local decision."
    ),
    "library.source_of_another_number": N_(
        "A number was changed, and this is the source of the number before. Say where the new one comes from: a "
        "document, or who decided it here and why."
    ),
    "library.no_such_level": N_(
        "%(field)s speaks of the %(level)s, which the criterion doesn't have. Take it out."
    ),
}
INNER: Final = {
    "canonical.too_deep": N_("The content is nested deeper than %(most)s levels. Flatten it."),
    "canonical.binary_fraction": N_("%(value)s came as a binary fraction. Send decimals as text."),
    "canonical.integer_too_large": N_(
        "%(value)s is beyond %(most)s, the largest whole number that is exact everywhere. Send it as text."
    ),
    "canonical.not_json": N_("The content can't be written as JSON: %(what)s. Correct it."),
    "kernel.no_level": N_("The criterion has no level to judge by. Give it one."),
    "kernel.index": N_("A reading points outside its %(count)s criteria. Tell the administrator."),
    "kernel.own_spread": N_(
        "A limit of the device's own spread was to be judged without its set-ups. Tell the administrator."
    ),
    "kernel.numbers": N_("Readings came as %(kinds)s instead of whole numbers. Tell the administrator."),
    "ledger.checkpoint_contradicted": N_(
        "The first %(size)s leaves of the ledger no longer give the root of their checkpoint: something was changed "
        "or lost. Sign nothing more, and compare with a backup."
    ),
    "merkle.no_such_leaf": N_("There is no leaf %(index)s in a ledger of %(size)s. Use a smaller number."),
    "merkle.sizes_reversed": N_(
        "A ledger of %(old_size)s leaves can't be the beginning of one of %(new_size)s. Give the smaller size first."
    ),
    "merkle.frontier_malformed": N_(
        "The ledger's head says %(size)s leaves and holds %(subtrees)s subtrees, which don't belong together. "
        "Stop, and restore from a backup."
    ),
}
FORMS: Final = {
    "form.day_wrong": N_("“%(entered)s” is no day. Choose one in the calendar, or write it as 2025-03-05."),
    "form.unanswered": N_("Nothing stands here yet. Fill it in."),
    "form.whole_wrong": N_("“%(entered)s” is no whole number from 0 to %(most)s. Use digits only."),
    "form.choice_missing": N_("Nothing was chosen. Choose one of those offered."),
    "form.line_wrong": N_(
        "The line “%(line)s” can't be read. Write one on each line, a name, a colon and a value, each name once."
    ),
    "form.aperture_wrong": N_(
        "The line “%(line)s” can't be read. Write each aperture's name, a comma and its number of elements."
    ),
    "form.too_long": N_("This is %(length)s signs long, and at most %(most)s can be kept. Shorten it."),
    "form.passwords_differ": N_("The two passwords differ. Type the new one twice, the same."),
    "form.file_missing": N_("There is no file. Choose the dossier's file on this computer."),
}
VALUES: Final = FORMS | NUMBERS | READINGS | SCHEDULES | CRITERIA | DOCUMENTS | INNER
