"""Everything a verification can find has a sentence."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

from qa_tracker.services.wording import problem_sentence, seal_sentence
from qa_tracker.services.wording_findings import HOLDS, PROBLEMS, REFUSED

ROOT = Path(__file__).parents[2] / "qa_tracker"


def _texts(path, called):
    """Constant texts of the calls of one name, in order."""
    for node in ast.walk(ast.parse((ROOT / path).read_text())):
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id == called:
            yield [
                arg.value for arg in node.args if isinstance(arg, ast.Constant) and isinstance(arg.value, str)
            ]


ITEMS = {(texts[0], texts[-1]) for texts in _texts("seals/finding.py", "Item")}
ITEMS |= {("file_in_ledger", "dossier.hash_unknown")}


def test_every_item_of_a_seal_has_both_its_sentences():
    assert {name for name, _code in ITEMS} == set(HOLDS)
    assert {code for _name, code in ITEMS} == set(REFUSED)


def test_dossiers_still_look_for_the_hash_by_these_names():
    source = (ROOT / "services/dossiers.py").read_text()
    assert '("file_in_ledger", self.in_ledger is not None, "dossier.hash_unknown")' in source


def test_every_problem_of_the_ledger_has_its_words():
    named = [*_texts("services/upkeep.py", "Problem"), *_texts("services/rechecking.py", "VerdictProblem")]
    assert {texts[0] for texts in named} == set(PROBLEMS)


@pytest.mark.parametrize(
    ("holds", "sentence"),
    [
        (True, "The sealed content is as it was when it was sealed."),
        (False, "The content was changed after it was sealed. Don't rely on it."),
    ],
)
def test_item_reads(holds, sentence):
    assert seal_sentence("intact", "seal.digest_differs", holds=holds) == sentence


def test_item_from_another_time_is_named_as_it_is():
    assert seal_sentence("ink_dry", "ink.wet", holds=True) == "Ink dry."
    assert seal_sentence("ink_dry", "ink.wet", holds=False) == "This does not hold (ink.wet)."


@pytest.mark.parametrize(
    ("problem", "sentence"),
    [
        ((7, "rows_differ", "reading [3]"), "Leaf 7: rows differ from what the leaf covers (reading [3])."),
        ((7, "leaf_missing", ""), "Leaf 7: a leaf is missing."),
        ((None, "head_differs", "8/9"), "The ledger's head doesn't fit its leaves: 8/9."),
        ((None, "checkpoint_differs", ""), "A checkpoint doesn't fit the leaves."),
    ],
)
def test_problem_reads(problem, sentence):
    assert problem_sentence(*problem) == sentence
