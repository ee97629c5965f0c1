"""A formula while it is written: what it may name, what it gives on sample values, and where it goes wrong."""

from __future__ import annotations

import pytest

JSON = {"HTTP_ACCEPT": "application/json"}
BEFORE, AFTER = "sample.penetration_before", "sample.penetration"


@pytest.fixture
def key(editor):
    return editor.key("penetration_difference")


def told(editor, key, **typed):
    """What a script is told of the formula."""
    answer = editor.client.post(editor.address("measurand", key), editor.inputs(key) | typed, **JSON)
    return answer.json()["parts"]


def test_names_are_listed_with_their_units(editor, key):
    page = editor.page("measurand", key)
    assert "<dt><code>penetration_before</code></dt><dd>Depth of penetration before, <span" in page
    assert "nominals.vertical_distance" in page
    assert "standard_deviation( )" in page


def test_result_when_samples_are_typed_is_rounded_with_unit_and_arithmetic(editor, key):
    parts = told(editor, key, **{AFTER: "146,4", BEFORE: "152.0"})
    assert "146.4 - 152.0" in parts["formula-result"]
    assert "= -6\N{NO-BREAK SPACE}mm" in parts["formula-result"]


def test_result_without_scripts_is_worked_out_by_the_button(editor, key):
    typed = editor.inputs(key) | {AFTER: "146", BEFORE: "152", "then": "stay-formula"}
    answer = editor.client.post(editor.address("measurand", key), typed)
    assert answer.headers["Location"].endswith("#id_formula")
    assert "= -6\N{NO-BREAK SPACE}mm" in editor.page("measurand", key)


def test_samples_when_missing_are_asked_for(editor, key):
    parts = told(editor, key)
    assert f'name="{AFTER}"' in parts["formula-samples"]
    assert "Type sample values" in parts["formula-result"]


def test_sample_when_no_number_is_refused_beside_it(editor, key):
    parts = told(editor, key, **{AFTER: "146 mm", BEFORE: "152"})
    assert "holds a unit (mm)" in parts["formula-samples"]


@pytest.mark.parametrize(
    ("formula", "marked", "says"),
    [
        pytest.param("penetration - depht", "              ^^^^^", "depht", id="unknown name"),
        pytest.param("2 * penetration", "^", "Write 2.0", id="whole number"),
        pytest.param("penetration + uniformity", "            ^", "joins mm and dB", id="units that clash"),
        pytest.param("penetration -", "             ^", "ends too early", id="unfinished"),
        pytest.param(
            "penetration * penetration", "^^^^^^^^^^^^^^^^^^^^^^^^^", "gives mm2", id="another unit"
        ),
    ],
)
def test_formula_when_wrong_is_marked_at_the_place(editor, key, formula, marked, says):
    parts = told(editor, key, formula=formula)
    assert f"\n{marked}</pre>" in parts["formula-result"]
    assert says in parts["formula-result"]


def test_long_formula_when_wrong_is_cut_around_the_place(editor, key):
    formula = "penetration - penetration_before + 0.0 * penetration + 0.0 * penetration + depht"
    line, under = (
        told(editor, key, formula=formula)["formula-result"].split('aria-hidden="true">')[1].split("\n")[:2]
    )
    assert len(line) <= 36
    assert line[under.index("^") :].startswith("depht")


def test_circle_of_formulas_is_refused_with_its_names(editor, key):
    other = editor.key("vertical_distance_difference")
    told(editor, other, formula="penetration_difference * 1.0")
    parts = told(editor, key, formula="vertical_distance_difference * 1.0")
    assert "could never be worked out" in parts["formula-result"]


def test_list_when_named_takes_several_samples(editor, key):
    page_of = editor.inputs(key) | {"formula": "mean(penetration)", "per": "device", "by_condition": ""}
    parts = editor.client.post(
        editor.address("measurand", key), page_of | {AFTER: "150 151 154"}, **JSON
    ).json()["parts"]
    assert "mean([150, 151, 154])" in parts["formula-result"]
    assert "= 152" in parts["formula-result"]


def test_ready_formula_when_put_in_replaces_the_formula(editor, key):
    typed = editor.inputs(key) | {
        "put": "distance_error",
        "ready-distance_error-reading": "vertical_distance",
    }
    editor.client.post(editor.address("measurand", key), typed)
    assert (
        editor.draft().writing.part(key).typed["formula"] == "vertical_distance - nominals.vertical_distance"
    )


def test_ready_formula_when_nothing_fits_is_not_offered(editor, key):
    page = editor.page("measurand", key)
    assert "ready-distance_error-reading" in page
    assert "ready-range_of_repeats-reading" not in page


def test_sample_values_are_kept_and_no_part_of_the_edition(editor, key):
    told(editor, key, **{AFTER: "146"})
    assert f'name="{AFTER}" value="146"' in editor.page("measurand", key)
    assert "to be put right" not in editor.page()
