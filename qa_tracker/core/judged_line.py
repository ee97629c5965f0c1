"""From a judged reading to the numbers its allowance line is drawn from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from decimal import Decimal

from qa_tracker.core.allowances import allowance, without_shares
from qa_tracker.core.criteria import GRADE_VERDICTS, Criterion, Limit
from qa_tracker.core.figures import Judged

HUNDRED = Decimal(100)


def judged_line(criterion: Criterion, parameters: Mapping[str, str]) -> Judged | None:
    """Give what the allowance line shows, from the criterion and the parameters of the verdict's sentence.

    Parameters
    ----------
    criterion
        The limit the reading was judged by.
    parameters
        As in ``sentence_codes``: value, reference, qualifiers, quantity, ratio; or the grade.

    Returns
    -------
    Judged or None
        None where nothing was compared: no reading, no baseline, no band that holds, not seen. A ratio is
        drawn in percent, grades as ranks.

    Examples
    --------
    >>> lost = Criterion("baseline", "below", remedial=Limit(Decimal("6")))
    >>> judged_line(lost, {"value": "145.4", "reference": "152.0"})
    Judged(origin=Decimal('152.0'), value=Decimal('145.4'), remedial=Decimal('6'), suspension=None, \
direction='below', strict=True, qualifier='=', ranks=False)
    """
    if criterion.grades:
        return _graded(criterion, parameters)
    flat = criterion.at(Decimal(parameters["quantity"])) if parameters.get("quantity") else criterion
    if flat is None or flat.bands or "value" not in parameters:
        return None
    if flat.of_own_spread:
        # Its allowance was worked out when it was judged, and is among the parameters.
        if "allowance" not in parameters:
            return None
        flat = replace(flat, remedial=Limit(absolute=Decimal(parameters["allowance"])))
    if parameters.get("no_share"):
        flat = without_shares(flat)
    reference = Decimal(parameters["reference"]) if "reference" in parameters else None
    if flat.basis != "none" and reference is None:
        return None
    judged = Judged(
        reference,
        Decimal(parameters["value"]),
        _size(flat.remedial, reference),
        _size(flat.suspension, reference),
        direction=flat.direction,
        strict=flat.strict,
        qualifier=parameters.get("value_qualifier", "="),
    )
    return _from_nothing(flat, judged, parameters)


def _size(limit: Limit | None, reference: Decimal | None) -> Decimal | None:
    return None if limit is None else allowance(limit, reference).size


def _from_nothing(criterion: Criterion, judged: Judged, parameters: Mapping[str, str]) -> Judged:
    """Measure from zero what is judged by itself, and a ratio as percent of its other reading."""
    if criterion.basis not in ("none", "ratio"):
        return judged
    origin = None if criterion.direction == "below" else Decimal(0)
    if criterion.basis == "none":
        return replace(judged, origin=origin)
    percents = [limit.percent if limit else None for limit in (criterion.remedial, criterion.suspension)]
    # Not the rounded ratio of the sentence: the share would then differ from the one that stands in it.
    value = HUNDRED * judged.value / judged.origin if judged.value and judged.origin else judged.value
    return replace(judged, origin=origin, value=value, remedial=percents[0], suspension=percents[1])


def _graded(criterion: Criterion, parameters: Mapping[str, str]) -> Judged | None:
    """Rank the grades: 0 conforms, 1 is remedial, 2 suspension; a rank itself is beyond its level."""
    verdicts = dict(criterion.grades)
    verdict = verdicts.get(parameters.get("grade", ""))
    if verdict is None:
        return None
    ranks = {name: Decimal(rank) for rank, name in enumerate(GRADE_VERDICTS) if name in verdicts.values()}
    return Judged(
        Decimal(0),
        ranks[verdict],
        ranks.get("remedial"),
        ranks.get("suspension"),
        direction="above",
        strict=False,
        ranks=True,
    )
