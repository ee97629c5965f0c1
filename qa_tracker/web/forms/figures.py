"""Acoustic figures: what each asks, read from the address and kept as typed when refused, and what it works out."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from decimal import Decimal

from qa_tracker.core import decimals
from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.services import cautions, wording
from qa_tracker.web.presenters.figures import Result, Source, Words

Check = Callable[[float, str], object]


@dataclass(frozen=True)
class Asked:
    """One number: its words, its unit's symbol, an ordinary value, and the check of core that it has to pass."""

    name: str
    label: Words
    unit: str
    start: str
    check: Check


@dataclass(frozen=True)
class Choice:
    """One of a few answers; ``start`` is the ordinary one."""

    name: str
    label: Words
    options: tuple[tuple[str, Words], ...]
    start: str


@dataclass(frozen=True)
class Given:
    """What was given to one figure: exact numbers, which are read as binary floats by name, and choices."""

    exact: Mapping[str, Decimal]
    chosen: Mapping[str, str]

    def __getitem__(self, name: str) -> float:
        return float(self.exact[name])


@dataclass(frozen=True)
class ShownInput:
    """One field with what was typed and why it was refused; ``key`` is its name in the address."""

    key: str
    asked: Asked | Choice
    value: str
    refusal: str = ""

    @property
    def options(self) -> tuple[tuple[str, Words], ...]:
        """The answers of a choice; none for a number."""
        return self.asked.options if isinstance(self.asked, Choice) else ()

    def refused(self, sentence: str) -> ShownInput:
        """The same field with a refusal beside it."""
        return replace(self, refusal=sentence)


def key_of(figure: str, asked: Asked | Choice) -> str:
    """The name of an input in the address."""
    return f"{figure}-{asked.name}"


def read(
    figure: str, questions: tuple[Asked | Choice, ...], typed: Mapping[str, str]
) -> tuple[tuple[ShownInput, ...], Given]:
    """The fields of a figure, and what was given in those that were not refused."""
    inputs, exact, chosen = [], {}, {}
    for asked in questions:
        shown = ShownInput(key_of(figure, asked), asked, typed.get(key_of(figure, asked), asked.start))
        if isinstance(asked, Choice):
            known = dict(asked.options)
            shown = shown if shown.value in known else replace(shown, value=asked.start)
            chosen[asked.name] = shown.value
        else:
            try:
                exact[asked.name] = _number(asked, shown)
            except Invalid as error:
                shown = shown.refused(wording.refusal(error))
        inputs.append(shown)
    return tuple(inputs), Given(exact, chosen)


def _number(asked: Asked, shown: ShownInput) -> Decimal:
    number = decimals.parse(shown.value, field=shown.key).decimal
    asked.check(float(number), shown.key)
    return number


@dataclass(frozen=True)
class Figure:
    """One figure.

    Parameters
    ----------
    fields
        Names that core gives in a refusal, and the question each stands beside here.
    cautions
        Codes of the cautions shown with it.
    """

    code: str
    title: Words
    asked: tuple[Asked | Choice, ...]
    work_out: Callable[[Given], Sequence[Result]]
    formula: tuple[Words, ...]
    sources: tuple[Source, ...]
    fields: Mapping[str, str] = field(default_factory=dict)
    cautions: tuple[str, ...] = ()


@dataclass(frozen=True)
class ShownFigure:
    """One section of the page; ``kept`` is what was typed in the others, so that it is not lost."""

    figure: Figure
    inputs: tuple[ShownInput, ...]
    results: tuple[Result, ...]
    refusal: str
    kept: tuple[tuple[str, str], ...]

    @property
    def cautions(self) -> tuple[str, ...]:
        """The sentences of its cautions."""
        return cautions.texts(self.figure.cautions)


def shown_figures(figures: Sequence[Figure], typed: Mapping[str, str]) -> tuple[ShownFigure, ...]:
    """Every figure worked out from what was typed, or from ordinary values where nothing was."""
    return tuple(_shown(each, typed, _kept(figures, each, typed)) for each in figures)


def _kept(figures: Sequence[Figure], own: Figure, typed: Mapping[str, str]) -> tuple[tuple[str, str], ...]:
    starts = {
        key_of(each.code, asked): asked.start for each in figures for asked in each.asked if each != own
    }
    return tuple((key, typed[key]) for key, start in starts.items() if typed.get(key, start) != start)


def _shown(figure: Figure, typed: Mapping[str, str], kept: tuple[tuple[str, str], ...]) -> ShownFigure:
    inputs, given = read(figure.code, figure.asked, typed)
    if any(each.refusal for each in inputs):
        return ShownFigure(figure, inputs, (), "", kept)
    try:
        return ShownFigure(figure, inputs, tuple(figure.work_out(given)), "", kept)
    except DomainError as error:
        name, sentence = figure.fields.get(error.field), wording.refusal(error)
        beside = tuple(each.refused(sentence) if each.asked.name == name else each for each in inputs)
        return ShownFigure(figure, beside, (), "" if beside != inputs else sentence, kept)
