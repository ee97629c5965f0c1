"""What judging one reading gives, and the order of severity."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from typing import Literal

from qa_tracker.core.criteria import Level
from qa_tracker.core.sentence_codes import SentenceCode

Verdict = Literal["conforming", "remedial", "suspension", "indeterminate", "not_assessable"]

# Kernel code -> verdict and deciding level, in order of severity.
VERDICT_OF_CODE: tuple[tuple[Verdict, Level | None], ...] = (
    ("conforming", None),
    ("indeterminate", "remedial"),
    ("not_assessable", None),
    ("remedial", "remedial"),
    ("indeterminate", "suspension"),
    ("suspension", "suspension"),
)


@dataclass(frozen=True)
class Judgement:
    """A verdict with everything its sentence and its allowance line need.

    Parameters
    ----------
    verdict, level
        The verdict, and the level that decided it (of an indeterminate one: the level in doubt).
    code, parameters
        What the sentence says (``sentence_codes``).
    departure
        As compared with the allowance: it grows as things get worse; a gain is below zero. With basis none
        or ratio it is the value. None where nothing was compared.
    allowance
        Exactly what the deciding level allows; of a conforming reading the first level.
    used
        Share of the first level's allowance in percent, one decimal.
    governed_by
        Which part of the limit is the allowance.
    lower_name
        The first level there is, which ``used`` refers to.
    probability
        That the true value is within the level whose allowance is given, 0 to 1, unrounded, where the uncertainty is
        known: the level that decided; of a conforming reading the first.
    """

    verdict: Verdict
    level: Level | None
    code: SentenceCode
    parameters: dict[str, str] = field(default_factory=dict)
    departure: Decimal | None = None
    allowance: Decimal | None = None
    used: Decimal | None = None
    governed_by: Literal["absolute", "percent"] | None = None
    lower_name: Level | None = None
    probability: float | None = None


def not_assessable(code: SentenceCode, **parameters: str) -> Judgement:
    """Give the verdict of a reading that lacks what its criterion needs."""
    return Judgement("not_assessable", None, code, parameters)


def severity(judgement: Judgement) -> int:
    """Rank a judgement: 5 suspension, 4 indeterminate there, 3 remedial, 2 not assessable, 1, 0 conforming."""
    return VERDICT_OF_CODE.index((judgement.verdict, judgement.level))


def worst(judgements: Sequence[Judgement]) -> int | None:
    """Return the position of the worst judgement, the first of equals; None of none."""
    ranks = [severity(judgement) for judgement in judgements]
    return ranks.index(max(ranks)) if ranks else None
