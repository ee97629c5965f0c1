"""Pages under a strict content policy, and in the words of the trade."""

from __future__ import annotations

import re

import pytest
from sources import python_files, shown, templates

from qa_tracker.records import guards

INLINE = {
    "a style attribute": re.compile(r"\sstyle\s*=", re.IGNORECASE),
    "an event handler": re.compile(r"<[^>]*\son[a-z]+\s*=", re.IGNORECASE),
    "a script in the page": re.compile(r"<script(?![^>]*\ssrc\s*=)[^>]*>", re.IGNORECASE),
    "a style in the page": re.compile(r"<style\b", re.IGNORECASE),
    "a script address": re.compile(r"javascript:", re.IGNORECASE),
    "a file of another host": re.compile(r"""(?:src|href)\s*=\s*["'](?:https?:)?//""", re.IGNORECASE),
    "text marked safe": re.compile(r"\|\s*safe\b|{%\s*autoescape off"),
}
COMPOUNDS = r"(?:test|task|unit|qa)[ _-]?(?:lists?|sets?|templates?|forms?|protocols?|groups?)"
WORDS = (
    rf"{COMPOUNDS}|ok|pass|fails?|tolerances?|warnings?|alerts?|thresholds?|unreviewed|reviewed"
    r"|approved|rejected|review queue|dashboards?|overview|trackers?|schedulers?|inbox|qa|machines?|assets?|modality"
    r"|modalities|service (?:events?|logs?)|work ?orders?|tickets?|boolean|multiple choice|composite|macros?|uploads?"
    r"|analy[sz]ers?|subscriptions?|qa_tracker"
)
BANNED = re.compile(rf"(?<![A-Za-z]){'(?:' + WORDS + ')'}(?![A-Za-z])", re.IGNORECASE)
MARKUP = re.compile(r"{#.*?#}|{%\s*comment.*?endcomment\s*%}|{%.*?%}|{{.*?}}|<[^>]*>", re.DOTALL)
QUOTED_IN_TAGS = re.compile(r"""{%\s*(?:trans|translate|blocktrans\w*)\s+["'](.*?)["']""")


def words_of(name):
    """A name in snake or camel case as words."""
    return re.sub(r"(?<=[a-z0-9])(?=[A-Z])|_|-|/|\.", " ", name)


def read_by_people(path):
    text = path.read_text(encoding="utf-8")
    return " ".join([MARKUP.sub(" ", text), *QUOTED_IN_TAGS.findall(text)])


PAGES = templates()
every_page = pytest.mark.parametrize("page", PAGES, ids=shown)


def test_pages_are_found():
    assert len(PAGES) >= 1


@every_page
@pytest.mark.parametrize("what", INLINE)
def test_page_needs_nothing_that_the_content_policy_bars(page, what):
    assert INLINE[what].findall(page.read_text(encoding="utf-8")) == []


@pytest.mark.parametrize(
    ("text", "what"),
    [
        ('<p style="x">', "a style attribute"),
        ('<a href="#" onclick="x()">', "an event handler"),
        ("<script>x()</script>", "a script in the page"),
        ('<link href="//a.example/x.css">', "a file of another host"),
        ("{{ name|safe }}", "text marked safe"),
    ],
)
def test_what_the_content_policy_bars_would_be_seen(text, what):
    assert INLINE[what].search(text)


@every_page
def test_page_keeps_to_our_words(page):
    assert BANNED.findall(read_by_people(page)) == []


@every_page
def test_page_is_named_in_our_words(page):
    assert BANNED.findall(words_of(page.stem)) == []


@pytest.mark.parametrize("model", guards.audited_models())
def test_table_and_columns_are_named_in_our_words(model):
    names = [model.__name__, *(field.name for field in model._meta.fields)]
    assert [name for name in names if BANNED.search(words_of(name))] == []


def test_files_and_commands_are_named_in_our_words():
    paths = python_files("qa_tracker", "config")
    assert paths
    assert [shown(path) for path in paths if BANNED.search(words_of(path.stem))] == []


@pytest.mark.parametrize(
    "text", ["Test list", "QA tracker", "a warning", "unit_template", "Dashboard", "work order"]
)
def test_word_to_be_avoided_would_be_seen(text):
    assert BANNED.search(words_of(text))


@pytest.mark.parametrize("text", ["passive", "okay", "Unit", "failure", "test object", "reset"])
def test_word_of_ours_is_let_through(text):
    assert not BANNED.search(words_of(text))
