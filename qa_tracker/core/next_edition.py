"""Writing the next edition of a set of criteria: what is typed over the edition before, and all that is wrong with it.

A document is the JSON of one edition, as ``library.criteria_set`` reads it. What can be typed is named by the
criterion's id and its place in it, such as ``TG1-PEN.criterion.remedial.absolute``.
"""

from __future__ import annotations

import copy
import re
from collections.abc import Iterator, Mapping
from typing import Any

from qa_tracker.core import library
from qa_tracker.core.criteria import LEVELS
from qa_tracker.core.decimals import parse
from qa_tracker.core.errors import DomainError, Invalid

HEAD = ("edition", "title", "source", "note")
WORDS = ("source", "note")
SPREAD = ("coverage", "confidence")
REMOVE = "remove"
LOCAL = "local"
"""Standing of a number that was changed here, and not read anywhere."""
_PLACE = re.compile(r"criteria\[(?P<index>\d+)\](?P<rest>.*)")
_MOST_REFUSALS = 500


def typed_places(document: Mapping[str, Any]) -> dict[str, str]:
    """Name everything that can be typed, with what stands there now; empty where nothing does.

    Parameters
    ----------
    document
        The edition before.

    Returns
    -------
    dict
        Place to text, in the document's order: the head, then of each criterion both levels' numbers and which
        of two governs, the standing of each level, source and note. A grade has no numbers, and a criterion of
        the device's own spread has its two shares.
    """
    places = {key: str(document[key]) for key in HEAD}
    for content in document["criteria"]:
        code = content["id"]
        for where, part in _parts(content["criterion"]):
            for level, key in _level_keys(content["criterion"]):
                given = part.get(level) or {}
                places[f"{code}.{where}.{level}.{key}"] = str(given.get(key) or "")
        for level in _levels_of(content["criterion"]):
            places[f"{code}.standing.{level}"] = content["standing"].get(level) or ""
        places |= {f"{code}.{key}": content[key] for key in WORDS}
    return places


def _parts(criterion: Mapping[str, Any]) -> Iterator[tuple[str, Any]]:
    """Yield the parts that have levels: each band, or the criterion itself."""
    if criterion.get("grades"):
        return
    bands = criterion.get("bands") or []
    yield from ((f"criterion.bands[{number}]", band) for number, band in enumerate(bands))
    if not bands:
        yield "criterion", criterion


def _level_keys(criterion: Mapping[str, Any]) -> list[tuple[str, str]]:
    """What can be typed for each level, by what the criterion stands on."""
    if is_of_own_spread(criterion):
        return [("remedial", key) for key in SPREAD]
    keys = {"none": ("absolute",), "ratio": ("percent",)}
    named = keys.get(criterion["basis"], ("absolute", "percent", "governs"))
    return [(level, key) for level in LEVELS for key in named]


def is_of_own_spread(criterion: Mapping[str, Any]) -> bool:
    """Tell whether a criterion's JSON is a limit of the device's own spread."""
    return any("coverage" in (part.get("remedial") or {}) for _, part in _parts(criterion))


def _levels_of(criterion: Mapping[str, Any]) -> list[str]:
    """The levels that a standing can be typed for."""
    if criterion.get("grades"):
        return [level for level in LEVELS if level in criterion["grades"].values()]
    return ["remedial"] if is_of_own_spread(criterion) else list(LEVELS)


def next_document(before: Mapping[str, Any], typed: Mapping[str, str]) -> dict[str, Any]:
    """Write what was typed over the edition before.

    A level whose numbers are all empty is no level of the next edition, and has no standing. A comma is read as
    the decimal point. A level whose numbers are other than before loses the standing they had: where that is left
    as it was, it becomes a local decision. Nothing is checked here.

    Parameters
    ----------
    before
        The edition before; left as it is.
    typed
        Place to text, as ``typed_places`` names them; a place that is not there counts as empty. With
        ``<id>.remove`` the criterion is left out.
    """
    document = copy.deepcopy(dict(before)) | {key: typed.get(key, "").strip() for key in HEAD}
    kept = [content for content in document["criteria"] if not typed.get(f"{content['id']}.{REMOVE}")]
    for content in kept:
        _write(content, typed)
    return document | {"criteria": kept}


def _write(content: dict[str, Any], typed: Mapping[str, str]) -> None:
    code, criterion, before = content["id"], content["criterion"], copy.deepcopy(content)
    for where, part in _parts(criterion):
        for level in LEVELS:
            keys = [key for of, key in _level_keys(criterion) if of == level]
            limit = {key: typed.get(f"{code}.{where}.{level}.{key}", "").strip() for key in keys}
            _put_level(part, level, {key: text for key, text in limit.items() if text})
    there = _levels_written(criterion)
    for key in ("standing", "own_words"):
        content[key] = {level: word for level, word in content[key].items() if level in there}
    for name in sorted(there):
        content["standing"].pop(name, None)
        if standing := typed.get(f"{code}.standing.{name}", ""):
            content["standing"][name] = standing
    for name in _changed_levels(content, before):
        if name in before["standing"] and content["standing"].get(name) == before["standing"][name]:
            content["standing"][name] = LOCAL
    content |= {key: typed.get(f"{code}.{key}", "").strip() for key in WORDS}


def _changed_levels(content: Mapping[str, Any], before: Mapping[str, Any]) -> list[str]:
    """The levels there are whose numbers are other than before."""
    pairs = list(zip(_parts(content["criterion"]), _parts(before["criterion"]), strict=True))
    return [
        level
        for level in sorted(_levels_written(content["criterion"]))
        if any(_numbers(new.get(level)) != _numbers(old.get(level)) for (_, new), (_, old) in pairs)
    ]


def _numbers(limit: Mapping[str, str] | None) -> dict[str, object]:
    """A level's numbers by what they are worth: 6.0 is 6."""
    return {key: _worth(text) for key, text in (limit or {}).items()}


def _worth(text: str) -> object:
    try:
        return parse(text).decimal
    except Invalid:
        return text


def _put_level(part: dict[str, Any], level: str, limit: dict[str, str]) -> None:
    if limit.keys() <= {"governs"}:
        part.pop(level, None)
        return
    if not {"absolute", "percent"} <= limit.keys():
        limit.pop("governs", None)
    numbers = {key: text.replace(",", ".") if key != "governs" else text for key, text in limit.items()}
    part[level] = numbers


def _levels_written(criterion: Mapping[str, Any]) -> set[str]:
    if criterion.get("grades"):
        return set(criterion["grades"].values()) & set(LEVELS)
    return {level for _, part in _parts(criterion) for level in LEVELS if part.get(level)}


def refusals(document: Mapping[str, Any], before: Mapping[str, Any]) -> tuple[DomainError, ...]:
    """Find all that keeps a next edition from being published, each at its place.

    The document is read again and again; what is refused is put back to what the edition before says there,
    until the rest is whole.

    Parameters
    ----------
    document
        As ``next_document`` gives it.
    before
        The edition before, which is whole itself.

    Returns
    -------
    tuple of DomainError
        Empty where the document can be published. ``field`` is a place as ``typed_places`` names it, or the part
        of the criterion that it is in.
    """
    given = copy.deepcopy(dict(document))
    known = {content["id"]: content for content in before["criteria"]}
    found: list[DomainError] = []
    for content in given["criteria"]:
        wrong = [*_wrong_numbers(content), *_without_standing(content)]
        found += [*wrong, *_of_another_source(content, known[content["id"]])]
        if wrong:
            _put_back(content, known[content["id"]], "criterion")
    for _ in range(_MOST_REFUSALS):
        try:
            library.criteria_set(given)
        except DomainError as refusal:
            found.append(_at_its_place(refusal, given))
            if not _mend(given, before, refusal.field):
                break
        else:
            break
    order = {content["id"]: number for number, content in enumerate(given["criteria"])}
    return tuple(sorted(found, key=lambda each: order.get(each.field.partition(".")[0], -1)))


def _wrong_numbers(content: Mapping[str, Any]) -> Iterator[DomainError]:
    for where, part in _parts(content["criterion"]):
        for level in LEVELS:
            for key, text in (part.get(level) or {}).items():
                if key == "governs":
                    continue
                try:
                    parse(text, field=f"{content['id']}.{where}.{level}.{key}")
                except Invalid as refusal:
                    yield refusal


def _without_standing(content: Mapping[str, Any]) -> Iterator[DomainError]:
    for level in LEVELS:
        if level in _levels_written(content["criterion"]) and level not in content["standing"]:
            yield Invalid("library.no_standing", field=f"{content['id']}.standing.{level}", level=level)


def _of_another_source(content: Mapping[str, Any], before: Mapping[str, Any]) -> Iterator[DomainError]:
    """Refuse a changed number under the source of the number that it was."""
    if content["source"] and content["source"] == before["source"] and _changed_levels(content, before):
        yield Invalid("library.source_of_another_number", field=f"{content['id']}.source")


def _at_its_place(refusal: DomainError, document: Mapping[str, Any]) -> DomainError:
    """The refusal with the criterion's id instead of its number."""
    found = _PLACE.fullmatch(refusal.field)
    if not found:
        return refusal
    code = document["criteria"][int(found["index"])]["id"]
    return type(refusal)(refusal.code, field=code + found["rest"], **refusal.parameters)


def _mend(given: dict[str, Any], before: Mapping[str, Any], field: str) -> bool:
    """Put back what was refused; False where that can't be done."""
    if field in HEAD:
        same = given[field] == before[field]
        given[field] = before[field]
        return not same
    found = _PLACE.fullmatch(field)
    if not found:
        return False
    content = given["criteria"][int(found["index"])]
    known = next(each for each in before["criteria"] if each["id"] == content["id"])
    return _put_back(content, known, found["rest"].removeprefix(".").partition(".")[0])


def _put_back(content: dict[str, Any], known: Mapping[str, Any], part: str) -> bool:
    """Put one part of a criterion back; its levels go together. False where it is as it was already."""
    parts = (part,) if part in WORDS else ("criterion", "standing", "own_words")
    same = all(content.get(name) == known.get(name) for name in parts)
    content |= {name: copy.deepcopy(known.get(name)) for name in parts}
    return not same
