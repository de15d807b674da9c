"""The models' refusals as problems: at their position, in plain words, with the nearest right word."""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

from pydantic import ValidationError
from pydantic_core import ErrorDetails

from fourfold.description import later
from fourfold.description.node import Path, Positions, Written
from fourfold.description.outline import NAME, Key, Pattern, below, outline, pattern_of
from fourfold.description.scalars import REFUSED
from fourfold.description.wording import did_you_mean, found, listed, nearest, quoted
from fourfold.errors import Problem

_KIND_ERRORS = {"model_type", "model_attributes_type", "dict_type"}


def problems_of(error: ValidationError, positions: Positions) -> Iterator[Problem]:
    """One problem for each thing that the models refuse."""
    for detail in error.errors(include_url=False):
        path = tuple(detail["loc"])
        if not positions.refused(path):
            yield _problem(detail, path, positions)


def _problem(detail: ErrorDetails, path: Path, positions: Positions) -> Problem:
    kind = detail["type"]
    if kind == "extra_forbidden":
        return unknown_key(path, detail["input"], positions)
    if kind == "missing":
        return _missing(path, positions)
    where = positions.find(*path)
    subject = subject_of(positions.real(path))
    context: dict[str, Any] = detail.get("ctx", {})
    if kind == REFUSED and "what" in context:
        return Problem(f"{subject} {context['what']}", context["advice"], where)
    if kind == REFUSED:
        what = f"{subject} expects {context['expected']}; found {context['found']}."
        return Problem(what, context["advice"], where)
    if kind == "literal_error":
        return _wrong_word(path, detail["input"], context, positions)
    if kind in _KIND_ERRORS:
        return _no_mapping(path, detail["input"], positions)
    if kind == "list_type":
        value, name = detail["input"], _last_key(path)
        advice = "Write one item in each line, after a dash."
        if isinstance(value, str) and value:
            advice = f"Write `{name}: [{value}]`." if len(value) < 60 and "," not in value else advice
        elif isinstance(value, str):
            advice = f"Write its items as in `{name}: [one, two]`, or remove the line."
        return Problem(f"{subject} expects a list; found {found(value)}.", advice, where)
    key = outline().get(pattern_of(path))
    wanted = key.kind if key is not None else "another kind of value"
    return Problem(f"{subject} expects {wanted}; found {found(detail['input'])}.", "", where)


def subject_of(path: Path) -> str:
    """How a message names a place: the key in backquotes, the item by its number."""
    item = ""
    for place in range(len(path) - 1, -1, -1):
        step = path[place]
        if isinstance(step, str):
            return f"`{step}`{item}"
        item = f" (item {step + 1})"
    return "The description"


def unknown_key(path: Path, value: Any, positions: Positions) -> Problem:
    """A key that its section does not know."""
    section, word = pattern_of(path[:-1]), str(path[-1])
    where = positions.key(*path)
    place = _place(path[:-1])
    instead = later.instead_of_key(section, word)
    if instead is not None:
        return Problem(f"`{word}` is not a key that this version acts on{place}.", instead, where)
    what = f"`{_short(word)}` is not a known key{place}."
    known = below(section)
    elsewhere = [key for key in outline().values() if key.name == word and key.path[:-1] != section]
    close = nearest(word, known) if not elsewhere else None
    above = positions.node(*path[:-1])
    empty = isinstance(value, Written) and value.plain and not value
    if empty and above is not None and above.flow and close is None and ":" not in word:
        return Problem(
            what,
            "If the comma before it belongs to a text, put that text in quotation marks, as in "
            'label: "Age, years".',
            where,
        )
    if empty and above is not None and above.flow and ":" in word:
        return Problem(what, "Put a space after the colon, as in kind: binary.", where)
    if close is not None and close != word:
        return Problem(what, f"Did you mean `{close}`?", where)
    if elsewhere:
        return Problem(what, f"It belongs {listed(dict.fromkeys(_under(key) for key in elsewhere))}.", where)
    return Problem(what, f"Known keys here: {', '.join(known)}.", where)


def _missing(path: Path, positions: Positions) -> Problem:
    name = str(path[-1])
    key = outline().get(pattern_of(path))
    meaning = f" It says: {key.means[0].lower()}{key.means[1:]}" if key is not None else ""
    if key is not None and key.words:
        meaning += f" Expected: {listed(key.words)}."
    advice = f"`fourfold keys {key.dotted}` shows an example." if key is not None else ""
    place = _place(path[:-1]) or " at the top of the description"
    what = f"The key `{name}` is missing{place}.{meaning}"
    return Problem(what, advice, positions.find(*path[:-1]))


def _wrong_word(path: Path, value: Any, context: dict[str, Any], positions: Positions) -> Problem:
    # The context lists the words as 'a', 'b' or 'c'; none of ours holds a quotation mark.
    words = re.findall(r"'([^']*)'", str(context.get("expected", "")))
    pattern = pattern_of(path)
    subject = subject_of(positions.real(path))
    where = positions.find(*path)
    if isinstance(value, str):
        instead = later.instead(pattern, value)
        if instead is not None:
            return Problem(f"{subject}: {quoted(value)} is not done by this version.", instead, where)
        spelling = later.SPELLINGS.get((pattern, value.lower()))
        if spelling is not None:
            what = f"{subject} is written another way; found {quoted(value)}."
            return Problem(what, spelling, where)
    what = f"{subject} expects {listed(quoted(word) for word in words)}; found {found(value)}."
    if isinstance(value, Written) and value.plain and not value:
        return Problem(what, "Give it a value, or remove the line.", where)
    return Problem(what, did_you_mean(value, words) if isinstance(value, str) else "", where)


def _no_mapping(path: Path, value: Any, positions: Positions) -> Problem:
    pattern = pattern_of(path)
    key = outline().get(pattern)
    known = list(below(pattern))
    wanted = "a mapping (`key: value`)"
    if key is not None and any(path[: len(pattern) + 1] == (*pattern, NAME) for path in outline()):
        wanted = "a mapping from the variables' names to their keys"
    elif key is not None and not key.has_keys:
        wanted = key.kind
    elif known:
        wanted += (
            " with "
            + ("keys such as " if len(known) > 3 else "")
            + listed((f"`{name}:`" for name in known[:3]), "and")
        )
    subject = subject_of(positions.real(path))
    advice = ""
    if isinstance(value, list):
        advice = "Remove the dashes before its keys." if not path or value else ""
    elif isinstance(value, str) and value and re.match(r"[^\s:]+:\S", value):
        advice = "Put a space after the colon."
    elif isinstance(value, str) and not value:
        advice = "Write its keys below it, indented, or remove the line."
    elif isinstance(value, str):
        inner = below(pattern)
        fitting = [name for name, child in inner.items() if value in child.words] or list(inner)
        if path and (len(fitting) == 1) and len(value) < 60:
            advice = f"Write `{path[-1]}: {{{fitting[0]}: {value}}}`."
    return Problem(f"{subject} expects {wanted}; found {found(value)}.", advice, positions.find(*path))


def _last_key(path: Path) -> str:
    return next((step for step in reversed(path) if isinstance(step, str) and step[:1] != "("), "")


def _short(word: str) -> str:
    return quoted(word)[1:-1]


def _place(path: Path) -> str:
    keys = [step for step in path if isinstance(step, str) and step[:1] != "("]
    return f" under `{_short('.'.join(keys))}`" if keys else ""


def _under(key: Key) -> str:
    above: Pattern = key.path[:-1]
    if not above:
        return "at the top of the description, not indented"
    return "under `" + ".".join("NAME" if step == NAME else step for step in above) + "`"
