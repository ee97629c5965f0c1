"""Which sentence is true of a reading that was compared, and the figures beside it."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from fractions import Fraction

from qa_tracker.core import verdict_kernel as kernel
from qa_tracker.core.comparison import Comparison, comparison_parameters
from qa_tracker.core.criteria import Level
from qa_tracker.core.decimals import plain, round_half_even, subtract
from qa_tracker.core.judgement import VERDICT_OF_CODE, Judgement
from qa_tracker.core.sentence_codes import SentenceCode as Say
from qa_tracker.core.verdict_kernel import Rule

TEN_THOUSANDTH = Decimal("0.0001")


def explain(compared: Comparison, rule: Rule) -> Judgement:
    """Ask the kernel, and say why."""
    rank = compared.code(rule)
    verdict, level = VERDICT_OF_CODE[rank]
    first = compared.criterion.levels()[0][0]
    shown = level or first
    code, extra = _reason(compared, rank, rule, first)
    allowed = compared.allowance(shown)
    probability = compared.probability(shown)
    if compared.uncertainty is not None:
        extra |= _uncertainty_parameters(compared, shown, probability)
    return Judgement(
        verdict=verdict,
        level=level,
        code=code,
        parameters=comparison_parameters(compared, shown, first) | extra,
        departure=compared.departure[0],
        allowance=allowed.size,
        used=compared.used(first),
        governed_by=allowed.governed_by,
        lower_name=first,
        probability=probability,
    )


def _reason(compared: Comparison, rank: int, rule: Rule, first: Level) -> tuple[Say, dict[str, str]]:
    """Choose the sentence for a kernel code, with the parameters only that sentence has."""
    if rank == kernel.NOT_ASSESSABLE:
        return Say.NO_UNCERTAINTY, {}
    if rank == kernel.CONFORMING:
        return _conforming_reason(compared, first)
    if rank in (kernel.INDETERMINATE_REMEDIAL, kernel.INDETERMINATE_SUSPENSION):
        code, extra = _doubt(compared)
        return code, extra | {"proven": _proven_below(compared, rank, rule)}
    guarded = rule == "guarded" and compared.code("simple") < rank
    return (Say.GUARD_BAND if guarded else Say.BEYOND), {}


def _proven_below(compared: Comparison, rank: int, rule: Rule) -> str:
    """Name the remedial level where the reading is certainly beyond that, while the suspension is in doubt."""
    if rank == kernel.INDETERMINATE_REMEDIAL or compared.criterion.remedial is None:
        return "none"
    lower = replace(compared.criterion, suspension=None)
    return "remedial" if compared.code(rule, lower) == kernel.REMEDIAL else "none"


def _doubt(compared: Comparison) -> tuple[Say, dict[str, str]]:
    """Say what leaves it open: what a bounded baseline hides, the reading's own bound, or the uncertainty."""
    if compared.reference_qualifier == "=":
        return (Say.TOO_CLOSE if compared.qualifier == "=" else Say.STRADDLES), {}
    if (compared.criterion.direction, compared.reference_qualifier) != ("below", ">"):
        return Say.OPEN_BASELINE, {}
    return Say.HIDDEN_LOSS, {"hidden": "both" if compared.qualifier == ">" else "baseline"}


def _conforming_reason(compared: Comparison, first: Level) -> tuple[Say, dict[str, str]]:
    """Say that a conforming reading is better than it should be, or that all it can stand for conforms."""
    bounded = compared.reference_qualifier != "="
    # What a share of a bounded baseline comes to is not known.
    if not (bounded and compared.limit(first).percent) and compared.is_gain_beyond(first):
        return Say.BETTER_THAN_EXPECTED, {}
    return (Say.WITHIN if compared.qualifier == "=" and not bounded else Say.WITHIN_OPEN), {}


def _uncertainty_parameters(compared: Comparison, level: Level, probability: float | None) -> dict[str, str]:
    uncertainty, allowed = compared.uncertainty or Decimal(0), compared.allowance(level).size
    # A lower limit is guarded upwards: what is accepted starts above it.
    downwards = compared.criterion.direction == "below" and not compared.is_change
    acceptance = subtract(allowed, uncertainty.copy_negate() if downwards else uncertainty)
    written = {"uncertainty": plain(uncertainty), "acceptance": plain(acceptance, strip=True)}
    if probability is not None:
        written["probability"] = plain(round_half_even(Fraction(probability), TEN_THOUSANDTH))
    return written
