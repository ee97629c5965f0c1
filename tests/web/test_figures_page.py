"""Acoustic figures: ordinary values at first, what was typed afterwards, refusals beside their fields."""

from __future__ import annotations

import re

import pytest

from qa_tracker.core.constants import KNOWN_NUMBERS
from qa_tracker.core.roles import ROLES
from qa_tracker.web.forms.figure_list import FIGURES
from qa_tracker.web.forms.figures import Choice
from qa_tracker.web.presenters.figures import significant
from qa_tracker.web.presenters.known_numbers import NAMES
from tests import builders

pytestmark = pytest.mark.django_db
PAGE = "/figures/"
# What the sections show at first, with what is beside it.
ORDINARY = {
    "interface": ("1.341 MRayl", "1.709 MRayl", "1.455 %", "98.54 %", "equations 17.38 and 17.39; confirmed"),
    "loss": ("17.5 dB", "35 dB", "4.03 Np", "1.778 %", "0.03162 %", "0.403 cm⁻¹", "ISO 80000-8"),
    "levels": ("0.6908 Np", "8.686 dB", "8.685889638 dB"),
    "wavelength": ("0.44 mm", "0.7857 mm", "common practice, no source"),
    "echo": ("129.9 µs", "10.01 cm", "t = 2 d / c"),
    "doppler": ("1.623 kHz", "Δf = 2 f v cos θ / c", "OpenStax"),
    "velocity": ("49.99 cm/s", "true angle is 55°", "+14.7 %", "true angle is 65°", "−15.5 %"),
    "water": ("1482.4 m/s", "5.799136 × 10⁻² T²", "Marczak 1997", "confirmed"),
    "air": ("343.2 m/s", "√(1 + T / 273.15)", "Cramer 1993"),
    "distance": ("100.00 mm", "A true 106.21 mm would read", "112.8 mm", "Goldstein 2000"),
    "mi": ("0.802", "IEC 62359", "as low as reasonably achievable", "tests the screen"),
    "ti": ("60 minutes at most", "never a permission", "never as permission", "3.0 and above", "from memory: compare"),
}  # fmt: skip


@pytest.fixture
def browser():
    return builders.signed_in(builders.first_administrator())


def text_of(answer):
    return answer.content.decode().replace("\N{NO-BREAK SPACE}", " ")


def section(page, code):
    return re.search(rf'<section class="worked" id="{code}".*?</section>', page, re.DOTALL)[0]


def test_page_shows_ordinary_figures_with_formula_source_and_cautions_when_opened(browser):
    page = text_of(browser.get(PAGE))
    assert [each.code for each in FIGURES] == list(ORDINARY)
    missing = {
        code: [words for words in told if words not in section(page, code)] for code, told in ORDINARY.items()
    }
    assert {code: words for code, words in missing.items() if words} == {}


def test_page_lists_the_numbers_of_media_with_their_ranges(browser):
    page = text_of(browser.get(PAGE))
    assert set(NAMES) == {each.code for each in KNOWN_NUMBERS}
    for words in (
        "1412 to 1487 m/s",
        "no range stated",
        "Kaye &amp; Laby",
        "Urethane object",
        "1482.346 to 1482.38 m/s",
    ):
        assert words in page


def test_page_is_open_to_everyone_who_is_signed_in():
    admin = builders.first_administrator()
    at_site = builders.site(admin)
    for role in ROLES:
        browser = builders.signed_in(builders.person(admin, f"a-{role}", role, at_site))
        assert browser.get(PAGE).status_code == 200
        assert f'href="{PAGE}"' in text_of(browser.get("/criteria/"))


def test_page_works_out_what_was_typed_and_keeps_it(browser):
    page = text_of(browser.get(PAGE, {"wavelength-frequency": "7,0", "water-temperature": "37"}))
    assert "0.22 mm" in section(page, "wavelength")
    assert "1523.7 m/s" in section(page, "water")
    assert 'value="7,0"' in section(page, "wavelength")


def test_one_section_carries_what_was_typed_in_the_others(browser):
    page = text_of(
        browser.get(PAGE, {"wavelength-frequency": "7", "water-temperature": "hot", "air-temperature": "20"})
    )
    kept = re.findall(r'<input type="hidden" name="([^"]+)" value="([^"]+)">', section(page, "echo"))
    assert kept == [("wavelength-frequency", "7"), ("water-temperature", "hot")]
    assert "hidden" not in section(page, "water").replace('name="wavelength-frequency"', "").replace(
        'type="hidden"', ""
    )


REFUSED = {
    "no number": ("wavelength-frequency", "fast", "is not a number"),
    "nothing": ("echo-depth", "", "Enter"),
    "outside its range": ("water-temperature", "96", "96 °C is outside 0 °C to 95 °C"),
    "zero": ("echo-speed", "0", "not above zero"),
    "negative": ("mi-pressure", "-1", "below zero"),
    "an angle too far off": ("velocity-off", "40", "100° is outside 0° to 90°"),
    "lateral": ("distance-direction", "lateral", "not by the time of flight"),
    "compensated": ("distance-layout", "compensated", "already makes up"),
    "too large": ("loss-depth", "10000000000000000", "15"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_page_says_why_beside_the_field_and_keeps_what_was_typed(browser, name):
    field, typed, words = REFUSED[name]
    answer = browser.get(PAGE, {field: typed})
    own = section(text_of(answer), field.partition("-")[0])
    beside = re.search(rf'id="r-{field}">(.*?)</p>', own)[1]
    assert (answer.status_code, words in beside, "<dl" in own) == (200, True, False)
    assert f'value="{typed}"' in own
    assert "1.623 kHz" in text_of(answer)


def test_page_shows_no_markup_that_was_typed(browser):
    page = text_of(browser.get(PAGE, {"echo-speed": "<img src=x>", "distance-layout": "<b>"}))
    assert "<img src=x>" not in page
    assert "<b>" not in page


def test_figure_beyond_all_measure_is_refused_without_a_field(browser):
    page = text_of(browser.get(PAGE, {"loss-depth": "100000000000000", "loss-frequency": "100000"}))
    assert "too large or too small for any figure" in section(page, "loss")


AMOUNTS = {
    0: "0", 1.341254: "1.341", 0.22: "0.22", -15.4763: "−15.48", 1234567: "1235000", 0.0000316: "0.0000316",
    3.1623e-9: "3.162 × 10⁻⁹", 1e20: "1 × 10²⁰", 99999: "100000",
}  # fmt: skip


@pytest.mark.parametrize("number", AMOUNTS)
def test_number_is_written_to_four_significant_digits(number):
    assert significant(number) == AMOUNTS[number]


def test_every_section_has_a_source_and_asks_for_what_it_has_a_value_for():
    for each in FIGURES:
        assert each.sources
        assert len({asked.name for asked in each.asked}) == len(each.asked)
        assert all(asked.start in dict(asked.options) for asked in each.asked if isinstance(asked, Choice))
        assert set(each.fields.values()) <= {asked.name for asked in each.asked}
