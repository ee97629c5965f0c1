"""The next edition of a procedure while it is being written: what was typed, and the document it makes.

Everything is kept as text, just as typed, also where it is not valid: a draft never loses anything. Its parts are
the head, the steps, and each measurand under a key of its own; each part knows at which revision of the draft it
was kept last. The document is what ``library.procedure`` reads; whether it is whole is told by ``edition_refusals``.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Any, Final

from qa_tracker.core.errors import Conflict, NotFound
from qa_tracker.core.library_shapes import DEVICE_KINDS
from qa_tracker.core.measurand_draft import NEW, measurand_document, measurand_typed
from qa_tracker.core.schedule_rule import parse_rule
from qa_tracker.core.typed_text import Typed, flag, marked, neat, whole, words

HEAD: Final = "head"
STEPS: Final = "steps"
_HEAD_TEXTS: Final = ("title", "when", "standing", "note", "signing")
_HEAD_FLAGS: Final = ("decontamination_gate", "needs_test_object")
_HEAD_WORDS: Final = ("performed_by", "cautions")
_DEVICES: Final = {
    "kinds": "applies_kinds",
    "array_kinds": "applies_arrays",
    "contact_classes": "applies_contacts",
}
_TYPED_HEAD: Final = (
    *_HEAD_TEXTS, *_HEAD_FLAGS, *_HEAD_WORDS, "minutes", "applies_to", "needs_instrument", "recurrence",
)  # fmt: skip


@dataclass(frozen=True)
class Part:
    """One part of a draft: its inputs by name, and the draft's revision at which it was kept last."""

    key: str
    typed: Typed
    revision: int


@dataclass(frozen=True)
class Writing:
    """A draft.

    Parameters
    ----------
    follows
        Number of the edition it was begun from.
    number
        Number it will have.
    rest
        What of the document can't be typed here and stays as it was: the procedure's code, a yearly part.
    made
        How many measurands were ever made in it: the next one's key.
    """

    follows: int
    number: int
    rest: Mapping[str, Any]
    head: Part
    steps: Part
    measurands: tuple[Part, ...]
    made: int

    def part(self, key: str) -> Part:
        """Find a part by its key; ``edition_draft.no_such_part`` for one that is not there, or no longer."""
        for each in (self.head, self.steps, *self.measurands):
            if each.key == key:
                return each
        raise NotFound("edition_draft.no_such_part")


def begin(document: Mapping[str, Any], number: int) -> Writing:
    """Begin the edition that follows a published one.

    Parameters
    ----------
    document
        The published edition.
    number
        Of the new one.

    Examples
    --------
    >>> begin({"procedure": "x", "edition": 1, "title": "X", "steps": [{"text": "Look."}], "measurands": []},
    ...     2).steps.typed
    {'step-1': 'Look.'}
    """
    typed = [measurand_typed(each) for each in document["measurands"]]
    return Writing(
        follows=document["edition"],
        number=number,
        rest={
            key: value
            for key, value in document.items()
            if key not in _TYPED_HEAD and key not in ("edition", "steps", "measurands")
        },
        head=Part(HEAD, _head_typed(document), 0),
        steps=Part(STEPS, steps_typed(each["text"] for each in document["steps"]), 0),
        measurands=tuple(Part(f"m{number}", each, 0) for number, each in enumerate(typed, 1)),
        made=len(typed),
    )


def _head_typed(document: Mapping[str, Any]) -> dict[str, str]:
    typed = {key: str(document.get(key) or "") for key in (*_HEAD_TEXTS, "needs_instrument")}
    typed |= {key: flag(document.get(key)) for key in _HEAD_FLAGS}
    typed |= {key: " ".join(document.get(key) or ()) for key in _HEAD_WORDS}
    applies = document.get("applies_to") or {}
    typed |= {name: " ".join(applies.get(key) or ()) for key, name in _DEVICES.items()}
    minutes = document.get("minutes") or {}
    typed |= {f"minutes_{kind}": str(minutes[kind]) for kind in DEVICE_KINDS if kind in minutes}
    typed |= _recurrence_typed(document.get("recurrence"))
    return {name: text for name, text in typed.items() if text}


def _recurrence_typed(recurrence: Mapping[str, Any] | None) -> dict[str, str]:
    if not recurrence:
        return {}
    rule = parse_rule(recurrence["rule"])
    typed = {"every": str(rule.interval), "period": rule.frequency}
    if not rule.is_plain:
        typed["rule"] = recurrence["rule"]
    return typed | {key: str(recurrence[key]) for key in ("before_days", "grace_days")}


def steps_typed(texts: Iterable[str]) -> dict[str, str]:
    """Name steps by their place.

    Examples
    --------
    >>> steps_typed(["Clean it.", "Look at it."])
    {'step-1': 'Clean it.', 'step-2': 'Look at it.'}
    """
    return {f"step-{number}": text for number, text in enumerate(texts, 1)}


def steps_of(typed: Typed) -> tuple[str, ...]:
    """The steps in their order; a step left empty is none, unless all are.

    Examples
    --------
    >>> steps_of({"step-10": "Last.", "step-2": "First.", "step-3": " "})
    ('First.', 'Last.')
    """
    numbers = sorted(int(name[5:]) for name in typed if name.startswith("step-") and name[5:].isdecimal())
    texts = (typed.get(f"step-{number}", "").strip() for number in numbers)
    return tuple(text for text in texts if text)


def document_of(writing: Writing) -> dict[str, Any]:
    """Make the document that a draft stands for; nothing is checked.

    What has no meaning for a measurand's kind, such as grades for a number, is kept in the draft and left out here.
    """
    head = writing.head.typed
    return {
        **writing.rest,
        "edition": writing.number,
        **{key: neat(head, key) for key in _HEAD_TEXTS},
        **{key: marked(head, key) for key in _HEAD_FLAGS},
        **{key: words(head, key) for key in _HEAD_WORDS},
        "minutes": {
            kind: whole(neat(head, f"minutes_{kind}"))
            for kind in DEVICE_KINDS
            if neat(head, f"minutes_{kind}")
        },
        "applies_to": {
            "kinds": words(head, _DEVICES["kinds"]),
            **{key: words(head, _DEVICES[key]) or None for key in ("array_kinds", "contact_classes")},
        },
        "needs_instrument": neat(head, "needs_instrument") or None,
        "recurrence": _recurrence(head),
        "steps": [{"text": text} for text in steps_of(writing.steps.typed)],
        "measurands": [measurand_document(each.typed) for each in writing.measurands],
    }


def _recurrence(head: Typed) -> dict[str, Any] | None:
    """How often, from a rule that was typed, or from a count and a period; none where no period was chosen."""
    period, every = neat(head, "period"), neat(head, "every")
    rule = neat(head, "rule").upper().replace(" ", "")
    if not rule and period:
        rule = f"FREQ={period}" + (f";INTERVAL={every}" if every not in ("", "1") else "")
    if not rule:
        return None
    return {"rule": rule, **{key: whole(neat(head, key) or "0") for key in ("before_days", "grace_days")}}


def kept(writing: Writing, key: str, typed: Typed, *, seen: int, revision: int) -> Writing:
    """Write a part over with what was typed.

    Parameters
    ----------
    seen
        Revision of the draft that the page was opened with: what was kept in this part since is not written over.
    revision
        That the draft will have.

    Raises
    ------
    Conflict
        ``edition_draft.kept_meanwhile``
    NotFound
        ``edition_draft.no_such_part``
    """
    before = writing.part(key)
    if before.revision > seen and dict(before.typed) != dict(typed):
        raise Conflict("edition_draft.kept_meanwhile")
    part = Part(key, dict(typed), revision)
    if key == HEAD:
        return replace(writing, head=part)
    if key == STEPS:
        return replace(writing, steps=part)
    return replace(
        writing, measurands=tuple(part if each.key == key else each for each in writing.measurands)
    )


def with_new_measurand(writing: Writing, revision: int) -> Writing:
    """Add a measurand at the end, of which nothing is typed yet."""
    part = Part(f"m{writing.made + 1}", dict(NEW), revision)
    return replace(writing, measurands=(*writing.measurands, part), made=writing.made + 1)


def without_measurand(writing: Writing, key: str) -> Writing:
    """Take a measurand out; ``edition_draft.no_such_part`` where it is not there."""
    writing.part(key)
    return replace(writing, measurands=tuple(each for each in writing.measurands if each.key != key))


def moved(writing: Writing, key: str, by: int) -> Writing:
    """Move a measurand up (-1) or down (1); at either end it stays.

    Raises
    ------
    NotFound
        ``edition_draft.no_such_part``
    """
    keys = [each.key for each in writing.measurands]
    order = list(writing.measurands)
    part = writing.part(key)
    here = keys.index(key) if key in keys else 0
    order.remove(part)
    order.insert(min(max(here + by, 0), len(order)), part)
    return replace(writing, measurands=tuple(order))


def following(writing: Writing, newest: int) -> Writing:
    """Let a draft follow a newer edition; what was typed stays as it is."""
    return replace(writing, follows=newest, number=newest + 1)


def to_json(writing: Writing) -> dict[str, Any]:
    """Write a draft as JSON, to be kept."""
    return {
        "follows": writing.follows,
        "number": writing.number,
        "rest": dict(writing.rest),
        "head": _part_json(writing.head),
        "steps": _part_json(writing.steps),
        "measurands": [_part_json(each) for each in writing.measurands],
        "made": writing.made,
    }


def from_json(content: Mapping[str, Any]) -> Writing:
    """Read a draft that was kept.

    Examples
    --------
    >>> draft = begin({"edition": 1, "steps": [], "measurands": []}, 2)
    >>> from_json(to_json(draft)) == draft
    True
    """
    return Writing(
        content["follows"],
        content["number"],
        content["rest"],
        _part(content["head"]),
        _part(content["steps"]),
        tuple(_part(each) for each in content["measurands"]),
        content["made"],
    )


def _part_json(part: Part) -> dict[str, Any]:
    return {"key": part.key, "typed": dict(part.typed), "revision": part.revision}


def _part(content: Mapping[str, Any]) -> Part:
    return Part(content["key"], content["typed"], content["revision"])
