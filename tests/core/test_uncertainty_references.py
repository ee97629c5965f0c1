"""Uncertainty, decision rules and risks against published examples: everything the file of answers holds."""

from __future__ import annotations

import math
from decimal import Decimal

import pytest
from reference_rows import entries, rows
from scipy.special import ndtri

from qa_tracker.core.comparison import probability_within
from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json
from qa_tracker.core.decision_risks import acceptance_limits, global_risk, specific_risk, uncertainty_ratio
from qa_tracker.core.uncertainty import combined, expanded_from_standard, from_repeats

GIVEN = entries("uncertainty_and_conformity.json")
INF = math.inf


def root_of(numbers):
    return float(combined(*(Decimal(str(number)) for number in numbers)))


def tail(multiple):
    """The specific risk of a value at the acceptance limit, with U = 0.2 below a limit of 1."""
    return specific_risk(-INF, 1.0, acceptance_limits((-INF, 1.0), 0.2, multiple)[1], 0.1)


def resistors(i, risk):
    process = (i["prior_mean"], i["prior_sd"])
    return [
        getattr(global_risk(i["tolerance"], accepted, process, i["u"]), risk) for accepted in i["acceptance"]
    ]


def deaver(i, risk):
    limit, found = i["SL_sigma"], []
    for ratio, factor in zip(i["ratio_sigma_prior_to_u"], i["guard_factor"], strict=True):
        accepted = (-limit * factor, limit * factor)
        found.append(getattr(global_risk((-limit, limit), accepted, (0.0, 1.0), 1 / ratio), risk))
    return found


CALCULATED = {
    # JCGM 100:2008 (GUM), Annex H.1
    ("GUM-H1", "u_d"): lambda i: root_of(i["u_d_parts"]),
    ("GUM-H1", "u_c_nm"): lambda i: root_of(i["u_c_parts"]),
    ("GUM-H1", "k99"): lambda i: (
        from_repeats([Decimal(n % 2) for n in range(i["nu_eff"] + 1)], Decimal(99)).student_t
    ),
    ("GUM-H1", "U99_nm"): lambda i: float(expanded_from_standard(Decimal(i["u_c"]), Decimal(str(i["k99"])))),
    # JCGM 106:2012, 7.2.2, 7.4 and 7.6.3
    ("CONF-01", "p_c_full"): lambda i: 1 - specific_risk(-INF, i["T_U"], i["y"], i["u"]),
    ("CONF-02", "p_c_full"): lambda i: 1 - specific_risk(i["T_L"], i["T_U"], i["y"], i["u"]),
    ("CONF-02", "C_m"): lambda i: uncertainty_ratio(i["T_L"], i["T_U"], 2 * i["u"]),
    # ILAC-G8:09/2019, Table 1; ISO 14253-1:2017
    ("CONF-04", "r=1"): lambda _: tail(1),
    ("CONF-04", "r=0.83"): lambda _: tail(0.83),
    ("CONF-04", "r=1.5"): lambda _: tail(1.5),
    ("CONF-04", "r=3"): lambda _: tail(3),
    # ILAC-G8:09/2019, 4.2.1 to 4.2.3
    ("CONF-05", "acceptance_limit_w=U"): lambda i: acceptance_limits(i["tolerance"], i["U"])[1],
    # JCGM 106:2012, 9.5
    ("RISK-02", "prior_conformance"): lambda i: probability_within(
        *i["tolerance"], i["prior_mean"], i["prior_sd"]
    ),
    ("RISK-02", "R_C"): lambda i: resistors(i, "consumer"),
    ("RISK-02", "R_P"): lambda i: resistors(i, "producer"),
    # D. Deaver, How to maintain confidence in a world of declining test uncertainty ratios, pp. 7 and 10
    ("RISK-04", "PFA"): lambda i: deaver(i, "consumer"),
    ("RISK-04", "PFR"): lambda i: deaver(i, "producer"),
}
JUDGED = {
    ("CONF-05", "simple"): ("simple", {"pass": "conforming", "fail": "remedial"}),
    ("CONF-05", "binary_guarded"): ("guarded", {"pass": "conforming", "fail": "remedial"}),
    ("CONF-05", "nonbinary"): (
        "zones",
        {
            "pass": "conforming",
            "conditional pass": "indeterminate",
            "conditional fail": "indeterminate",
            "fail": "remedial",
        },
    ),
}


@pytest.mark.parametrize(("name", "key"), CALCULATED)
def test_calculation_agrees_with_its_source(name, key):
    given = GIVEN[name]
    found = CALCULATED[name, key](given["inputs"])
    assert found == pytest.approx(given["expected"][key], abs=given["tolerance"][key], rel=0)


# ILAC-G8:09/2019, 4.2.1 to 4.2.3; the source's words beside our verdicts.
@pytest.mark.parametrize(("name", "key"), JUDGED)
def test_decisions_agree_with_ilac_g8(name, key):
    rule, words = JUDGED[name, key]
    inputs, expected = GIVEN[name]["inputs"], GIVEN[name]["expected"][key]
    limit = from_json(
        {"basis": "nominal", "direction": "either", "remedial": {"absolute": str(inputs["tolerance"][1])}}
    )
    known = {"kind": "number", "nominal": "0", "uncertainty": str(inputs["U"]), "rule": rule}
    for sign in ("", "-"):
        found = [judge(limit, value=f"{sign}{value}", **known).verdict for value in inputs["deviations"]]
        assert found == [words[word] for word in expected]


def test_every_answer_of_the_file_is_worked_out():
    in_files = {("CONF-04", "file"), ("RISK-03", "rows")}
    held = {(name, key) for name, given in GIVEN.items() for key in given["expected"]}
    assert held - in_files == set(CALCULATED) | set(JUDGED)


def test_specific_risk_at_the_acceptance_limit_is_that_of_the_guard_band():
    # ILAC-G8:09/2019, Table 1: w = r U; the exact tails computed, no published value
    for row in rows(GIVEN["CONF-04"]["file"]):
        assert tail(float(row["r"])) == pytest.approx(float(row["exact_tail"]), rel=1e-9, abs=0)


def test_global_risk_agrees_with_rp_19():
    # NCSLI RP-19 (draft), table: TUR 4, tolerance +-1, prior spread from the in-tolerance probability
    given = GIVEN["RISK-03"]
    table = rows(given["file"])
    assert len(table) == given["expected"]["rows"]
    for row in table:
        spread = 1 / float(ndtri((1 + float(row["in_tolerance_probability"])) / 2))
        found = global_risk((-1.0, 1.0), (-1.0, 1.0), (0.0, spread), spread / 4)
        for share, key in ((found.consumer, "UFAR_percent"), (found.consumer_of_accepted, "CFAR_percent")):
            assert 100 * share == pytest.approx(float(row[key]), abs=given["tolerance"][key], rel=0)
