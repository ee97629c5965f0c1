"""Every code that is raised anywhere has a sentence, and every sentence gets what it needs."""

from __future__ import annotations

import ast
import datetime as dt
import re
from collections import defaultdict
from pathlib import Path

import pytest

from qa_tracker.core import decimals
from qa_tracker.core.criteria import from_json
from qa_tracker.core.errors import Conflict, DomainError, Forbidden, Invalid, SeveralInvalid
from qa_tracker.core.roles import VERBS
from qa_tracker.core.workflow import DEVICE, WORKFLOWS, target
from qa_tracker.services.wording import refusal
from qa_tracker.services.wording_findings import REFUSED
from qa_tracker.services.wording_refusals import KNOWN, NOUNS, SENTENCES, WRONG_STATE
from qa_tracker.services.wording_verbs import MOVES, PERMITTED

ROOT = Path(__file__).parents[2] / "qa_tracker"
RAISED = {"DomainError", "Invalid", "Forbidden", "NotFound", "Conflict"}
PLACEHOLDER = re.compile(r"%\((\w+)\)s")
# Places that pass a code on, and where the codes come from that they pass.
PASSED_ON = {("decimals.py", "code"), ("guards.py", "code"), ("verify_dossier.py", "code")}
# Codes that a place makes up from a noun.
MADE = {
    "f'{workflow.noun}.wrong_state'": WRONG_STATE,
    "f'{name}.unknown'": ("test_object.unknown", "instrument.unknown"),
}
# Keywords that a raising place spreads from a mapping; the tests below raise these two for real.
SPREAD = {
    "number.unit": {"unit"},
    "criterion.bands_overlap": {"start", "below", "other_start", "other_below"},
}


def _calls():
    for path in sorted(ROOT.rglob("*.py")):
        for node in ast.walk(ast.parse(path.read_text())):
            if isinstance(node, ast.Call) and isinstance(node.func, ast.Name | ast.Attribute):
                name = node.func.id if isinstance(node.func, ast.Name) else node.func.attr
                yield path, name, node


def _raised():
    """Pairs of code and keywords for every raising place."""
    for path, name, call in _calls():
        if name == "required" and len(call.args) == 3 and isinstance(call.args[1], ast.Constant):
            yield call.args[1].value, {"field"}
        if name == "__init__" and call.args and isinstance(call.args[0], ast.Constant):
            yield call.args[0].value, {keyword.arg for keyword in call.keywords}
        if name not in RAISED or not call.args:
            continue
        given = {keyword.arg for keyword in call.keywords if keyword.arg}
        code = call.args[0]
        if isinstance(code, ast.Constant):
            yield code.value, given | SPREAD.get(code.value, set())
        elif (path.name, ast.unparse(code)) not in PASSED_ON:
            # What is neither in the source nor known here stands as a code without a sentence, and so fails.
            for made in MADE.get(ast.unparse(code), (f"{path.name}:{call.lineno} {ast.unparse(code)}",)):
                yield made, given
    for code, _pattern in decimals._REFUSALS:
        yield code, {"field", "entered"} | SPREAD.get(code, set())
    for code in REFUSED:
        yield code, set()


RAISING = defaultdict(list)
for _code, _keywords in _raised():
    RAISING[_code].append(_keywords)


def test_every_raised_code_has_a_sentence_and_every_sentence_is_raised():
    assert set(RAISING) - KNOWN == set()
    assert KNOWN - set(RAISING) == set()


@pytest.mark.parametrize("code", sorted(SENTENCES))
def test_sentence_finds_its_parameters_at_every_raising_place(code):
    wanted = set(PLACEHOLDER.findall(SENTENCES[code]))
    assert all(wanted <= given for given in RAISING[code])


@pytest.mark.parametrize("code", sorted(SENTENCES))
def test_sentence_names_its_parameters_and_ends_as_one(code):
    assert PLACEHOLDER.sub("", SENTENCES[code]).count("%") == 0
    assert SENTENCES[code].endswith(".") or code == "person.password_weak"


def test_every_verb_of_states_and_roles_is_in_words():
    assert {noun: set(workflow.verbs) for noun, workflow in WORKFLOWS.items()} == {
        noun: set(verbs) - {"could not test"} for noun, verbs in MOVES.items()
    }
    assert set(PERMITTED) == set(VERBS)
    assert set(NOUNS) == set(WORKFLOWS)
    assert len(WRONG_STATE) == len(WORKFLOWS)


SAID = [
    (
        "a number with a unit",
        Invalid("number.unit", field="depth", entered="15 cm", unit="cm"),
        "“15 cm” holds a unit (cm). Enter the number alone, in the unit shown beside the field.",
    ),
    (
        "a day",
        Invalid("grant.ends_before_start", from_on=dt.date(2025, 3, 5), until_on=dt.date(2025, 3, 1)),
        "The role would end on 1 March 2025, before it starts on 5 March 2025. Correct one of the days.",
    ),
    (
        "a moment as text",
        Conflict("check.not_yet_open", opens_at="2025-03-01T00:00:00+00:00"),
        "This check opens on 1 March 2025 at 00:00 UTC. Measure it then, or record an unplanned check now.",
    ),
    (
        "a kind",
        Invalid("check.instrument_missing", kind="leakage_tester"),
        "This procedure needs a leakage tester. Name the one that was used.",
    ),
    (
        "a unit by its symbol",
        Invalid("reading.unit_wrong", unit="mA", wanted="uA"),
        "This is read in µA, not in mA. Enter it in µA.",
    ),
    (
        "a level",
        Conflict("baseline.beyond_limit", value="4.4", criterion="TG1-UNIF", level="remedial"),
        "4.4 is itself beyond the remedial level of TG1-UNIF, and no baseline may hide a fault. Mend the fault "
        "and measure again.",
    ),
    (
        "a role that may",
        Forbidden("role.not_allowed", verb="device.restore"),
        "Your role here doesn't let you restore devices to use. Ask someone who may: Clinical engineer or physicist.",
    ),
    (
        "a state with nothing to be done",
        Conflict("check.wrong_state", state="missed", verb="submit", allowed=()),
        "This check is missed, so it can't be submitted now. Nothing can be changed in it any more.",
    ),
    (
        "a state without more",
        Conflict("check.wrong_state", state="excused", verb="could not test"),
        "This check is excused, so it can't be recorded as not tested now. Look at it again: someone else may "
        "have changed it meanwhile.",
    ),
    (
        "a dossier's state",
        Conflict("dossier.not_issued", state="rendering"),
        "This dossier is being drawn, so there is no file yet. Look again in a minute, or issue it anew.",
    ),
    (
        "a code nobody knows",
        DomainError("moon.blue"),
        "This was refused (moon.blue). Tell the administrator what you were doing.",
    ),
]


@pytest.mark.parametrize(("error", "sentence"), [row[1:] for row in SAID], ids=[row[0] for row in SAID])
def test_refusal_reads(error, sentence):
    assert refusal(error) == sentence


def test_wrong_state_says_what_can_be_done():
    with pytest.raises(Conflict) as refused:
        target(DEVICE, "at_repair", "lend_out")
    assert refusal(refused.value) == (
        "This device is at repair, so it can't be lent out now. From here it can be quarantined, returned from "
        "repair, recorded as lost or disposed of."
    )


def test_several_refusals_say_each_sentence_once():
    missing = Invalid("reading.missing", field="a")
    both = SeveralInvalid(
        (missing, Invalid("reading.missing", field="b"), Invalid("reading.both", field="c"))
    )
    assert refusal(both) == f"{refusal(missing)} {refusal(Invalid('reading.both'))}"


def test_number_with_a_unit_is_refused_with_the_unit():
    with pytest.raises(Invalid) as refused:
        decimals.parse("152 mm")
    assert "(mm)" in refusal(refused.value)


def test_overlapping_bands_are_refused_with_both_ends():
    bands = [
        {"from": "0", "below": "5", "remedial": {"absolute": "1"}},
        {"from": "3", "remedial": {"absolute": "1"}},
    ]
    with pytest.raises(Invalid) as refused:
        from_json({"basis": "none", "direction": "above", "bands": bands, "banded_by": "depth_mm"})
    assert refusal(refused.value).startswith(
        "criterion.bands: the band from 0 to below 5 overlaps the one from 3"
    )


def test_refusal_without_its_parameters_is_still_a_sentence():
    assert (
        refusal(Invalid("number.loss")) == "… can't be kept exactly with … decimal places. Use more places."
    )
