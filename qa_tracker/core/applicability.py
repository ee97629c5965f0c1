"""Whether a published limit may judge a reading at all: medium, method, kind of array, class, and the baseline's key.

What is refused here is *not assessable* with its reason; what is let through is judged in ``conformity``.
"""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from qa_tracker.core.judgement import Judgement, not_assessable
from qa_tracker.core.library_specs import CriterionSpec
from qa_tracker.core.sentence_codes import SentenceCode as Say

METHOD_OF_ORIGIN = {"image": "image"}
"""Where a reading came from, as far as that tells the method; typed and imported ones have the measurand's."""


@dataclass(frozen=True)
class Circumstances:
    """What a reading was taken of, in and by; an empty text is not known and rules nothing out.

    Parameters
    ----------
    array_kind, protection_class, applied_part
        Of the device, as registered.
    medium, method
        Of the reading.
    measured_on
        Local day.
    test_object_id, test_object
        What the check was measured on: key and name.
    qualifier
        Of the reading. Nothing seen is compared with no baseline, so none keeps a limit from judging it.
    """

    array_kind: str = ""
    protection_class: str = ""
    applied_part: str = ""
    medium: str = ""
    method: str = ""
    measured_on: dt.date | None = None
    test_object_id: int | None = None
    test_object: str = ""
    qualifier: str = "="


@dataclass(frozen=True)
class Standing:
    """The part of a baseline that decides whether it still serves."""

    test_object_id: int | None = None
    test_object: str = ""
    expires_on: dt.date | None = None


def unfit(spec: CriterionSpec, met: Circumstances, baseline: Standing | None) -> Judgement | None:
    """Say why a limit can't judge a reading taken so; None where it can.

    Parameters
    ----------
    spec
        The published limit.
    met
        What the reading was taken of, in and by.
    baseline
        The one it would be compared with, if any.

    Returns
    -------
    Judgement or None
        Not assessable: an array without line-to-element correspondence, another medium or method than the limit
        names, another protection class or applied-part type, a baseline that has run out, and a loss of depth
        against a baseline taken on another test object, or where only one of the two names its object (depths
        do not pass between objects).
    """
    if met.array_kind and met.array_kind in spec.not_for_array_kinds:
        return not_assessable(Say.ARRAY_KIND, array_kind=met.array_kind)
    if spec.medium != "any" and met.medium not in ("", "any", spec.medium):
        return not_assessable(Say.OTHER_MEDIUM, medium=met.medium, wanted=spec.medium)
    if met.method and met.method not in spec.methods:
        return not_assessable(Say.OTHER_METHOD, method=met.method, wanted=", ".join(spec.methods))
    return _other_class(spec, met) or _unfit_baseline(spec, met, baseline)


def _other_class(spec: CriterionSpec, met: Circumstances) -> Judgement | None:
    has = {"protection_class": met.protection_class, "applied_part_type": met.applied_part}
    for what, wanted in spec.applies_when:
        if has.get(what) and has[what] != wanted:
            return not_assessable(Say.OTHER_CLASS, what=what, has=has[what], wanted=wanted)
    return None


def _unfit_baseline(spec: CriterionSpec, met: Circumstances, baseline: Standing | None) -> Judgement | None:
    if baseline is None or spec.criterion.basis != "baseline" or met.qualifier == "not_seen":
        return None
    if baseline.expires_on and met.measured_on and met.measured_on >= baseline.expires_on:
        return not_assessable(Say.EXPIRED_BASELINE, expired_on=baseline.expires_on.isoformat())
    objects = (baseline.test_object_id, met.test_object_id)
    if objects[0] == objects[1] or not is_depth(spec):
        return None
    code = Say.OBJECT_NOT_NAMED if None in objects else Say.OTHER_OBJECT
    return not_assessable(code, was=baseline.test_object, now=met.test_object)


def is_depth(spec: CriterionSpec) -> bool:
    """Whether a limit judges a loss seen in a phantom, which another object would show differently."""
    return (
        spec.medium == "phantom"
        and spec.criterion.basis == "baseline"
        and spec.criterion.direction == "below"
    )
