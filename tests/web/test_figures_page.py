"""Acoustic figures: ordinary values at first, what was typed afterwards, refusals beside their fields."""

from __future__ import annotations

import pytest

from tests import builders

pytestmark = pytest.mark.django_db
PAGE = "/criteria/figures/"


@pytest.fixture
def browser():
    return builders.signed_in(builders.ward().technician)


def text_of(answer):
    return answer.content.decode().replace("\N{NO-BREAK SPACE}", " ")


def test_page_shows_ordinary_figures_with_sources_and_cautions_when_opened(browser):
    page = text_of(browser.get(PAGE))
    for words in ("1482 m/s", "129.9 µs", "1.623 kHz", "Marczak 1997", "Goldstein 2000", "not recommended"):
        assert words in page
    assert "as low as reasonably achievable" in page


def test_page_works_out_what_was_typed_and_keeps_it(browser):
    page = text_of(browser.get(PAGE, {"wavelength-frequency": "7,0", "water-temperature": "37"}))
    assert "0.22 mm" in page
    assert "1524 m/s" in page
    assert 'value="7,0"' in page


REFUSED = {
    "no number": ("wavelength-frequency", "fast", "is not a number"),
    "outside its range": ("water-temperature", "96", "Nothing is extrapolated"),
    "zero": ("echo-speed", "0", "not above zero"),
    "hostile": ("echo-speed", "<img src=x>", "sign of comparison"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_page_says_why_a_number_is_refused_and_the_rest_goes_on(browser, name):
    field, typed, words = REFUSED[name]
    answer = browser.get(PAGE, {field: typed})
    page = text_of(answer)
    assert (answer.status_code, words in page, "Wavelength" in page) == (200, True, True)
    assert "<img src=x>" not in page
