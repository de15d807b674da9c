"""Help for every key, and the JSON Schema, both generated from the models."""

from __future__ import annotations

import re
from collections.abc import Iterable
from functools import cache
from textwrap import fill, indent
from typing import Any

import yaml

from fourfold.description import later
from fourfold.description.json_schema import without_python
from fourfold.description.model import StudyDescription
from fourfold.description.outline import NAME, Key, Pattern, below, outline
from fourfold.description.wording import listed, nearest, quoted
from fourfold.errors import UsageError

WIDTH = 96
DIALECT = "https://json-schema.org/draft/2020-12/schema"

_BANDS: tuple[Pattern, ...] = (("variables", NAME, "from"), ("variables", NAME, "cut"))

# Words that people look for and that are no keys or values, with the keys that answer.
_CONCEPTS: tuple[tuple[str, tuple[Pattern, ...]], ...] = (
    (r".*(band|cut.?point|age.?group|binned|categori[sz]ed).*|bands?|cuts|bins?", _BANDS),
    (r"event|case|cases|disease|response|dependent", (("outcome",), ("variables", NAME, "present"))),
    (r"yes|no|code|coding|coded", (("variables", NAME, "present"), ("variables", NAME, "levels"))),
    (r"baseline|comparison", (("variables", NAME, "reference"),)),
    (r"curve|non.?linear(ity)?|knot", (("variables", NAME, "shape"), ("variables", NAME, "shape", "spline"))),
    (r"adjust(ed|ment)?|confounders?", (("covariates",),)),
    (r"range|limits?|outliers?", (("variables", NAME, "plausible"),)),
    (r"na|unknown|not.?recorded|incomplete", (("data", "missing"), ("analysis", "missing_data"))),
    (r"alpha|level.of.confidence|ci", (("analysis", "confidence"),)),
    (r"suppress(ion)?|small.?(numbers?|counts?|cells?)|hid(e|den|ing)", (("disclosure", "smallest_count"),)),
    (r"hosmer.*|deciles?", (("assessment", "groups"),)),
    (r"csv|tsv|parquet|xlsx|ods|sqlite|duckdb|xpt|path|filename", (("data", "file"),)),
    (r"frequenc(y|ies)|grouped", (("data", "counts"),)),
    (r"filter|exclude|eligib(le|ility)|inclusion|include", (("exclusions",),)),
    (r"id|ids|patient|person", (("data", "identifier"),)),
    (r"match(ed|ing)?", (("sampling", "matched_on"),)),
    (r"clusters?(ed|ing)?|wards?|households?", (("sampling", "clusters"),)),
)


def explain(key: str | None) -> str:
    """Help for one key, or the list of all.

    Parameters
    ----------
    key : str or None
        A key (``cut``), a dotted path (``analysis.confidence``), a word that a key takes
        (``cohort``) or a thing that keys describe (``age_band``).

    Raises
    ------
    UsageError
        If nothing is known by that name; names the nearest words.
    """
    if key is None or not key.strip():
        return _overview()
    word = key.strip().strip(":`'\"").replace(":", ".").strip(".")
    found = _named(word)
    if found:
        return _all_help(found)
    answered = _by_value(word) or _by_concept(word)
    if answered:
        names = listed((one.dotted for one in answered), "and")
        return f"{quoted(word)} is no key; this is what answers to it: {names}.\n\n{_all_help(answered)}"
    refused = [text for (_, known), text in later.KEYS.items() if known == word.lower()]
    if refused:
        return fill(f"{quoted(word)} is not a key that this version acts on. {refused[0]}", WIDTH)
    known = [one.name for one in outline().values()] + [one.dotted for one in outline().values()]
    close = nearest(word, known)
    hint = f"Did you mean {quoted(close)}? " if close is not None else ""
    raise UsageError(
        f"No key of a description is called {quoted(word)}.", f"{hint}`fourfold keys` lists all of them."
    )


def schema() -> dict[str, Any]:
    """The JSON Schema (draft 2020-12) of a description."""
    return {"$schema": DIALECT, **without_python(StudyDescription.model_json_schema(by_alias=True))}


def _overview() -> str:
    lines = ["Keys of a study description. Those marked * are required."]
    for top in below(()).values():
        lines += ["", *_entry(top.name + (" *" if top.required else ""), top, 0)]
        lines += _entries_below(top, 1)
    lines += [
        "",
        "`fourfold keys KEY` explains one of them, with an example; KEY may be a word such as cut, or a",
        "path such as analysis.confidence.",
    ]
    return "\n".join(lines)


def _entries_below(top: Key, depth: int) -> list[str]:
    lines = []
    for one in outline().values():
        inside = len(one.path) > len(top.path) and one.path[: len(top.path)] == top.path
        if inside:
            steps = ["NAME" if step == NAME else step for step in one.path[len(top.path) :]]
            lines += _entry(".".join(steps) + (" *" if one.required else ""), one, depth)
    return lines


def _entry(name: str, one: Key, depth: int) -> list[str]:
    start = ("  " * depth + name).ljust(28)
    text = _first_sentence(one.means)
    filled = fill(text, WIDTH, initial_indent=start + " ", subsequent_indent=" " * 29)
    return filled.splitlines()


def _first_sentence(text: str) -> str:
    return re.split(r"(?<=[.;]) ", text)[0].rstrip(";.") + "."


def _all_help(keys: list[Key]) -> str:
    # A key that stands in several places with one meaning (a role's `reason:`) is explained once.
    same = dict[tuple[str, str], list[Key]]()
    for one in keys:
        same.setdefault((one.means, one.example), []).append(one)
    return "\n\n".join(_help(group) for group in same.values())


def _help(places: list[Key]) -> str:
    one = places[0]
    lines = [", ".join(place.dotted for place in places) + (" (required)" if one.required else ""), ""]
    lines.append(fill(one.means, WIDTH, initial_indent="  ", subsequent_indent="  "))
    lines += ["", *_pair("takes", one.kind)]
    if one.has_keys:
        lines += _pair(
            "its keys", ", ".join(k.name + (" *" if k.required else "") for k in below(one.path).values())
        )
    elif (*one.path, NAME) in {path[: len(one.path) + 1] for path in outline()}:
        inner = [path[-1] for path in outline() if path[:-1] == (*one.path, NAME)]
        lines += _pair("keys of each", ", ".join(inner))
    if one.otherwise:
        lines += _pair("if absent", one.otherwise)
    instead = [(word, text) for (path, word), text in later.WORDS.items() if path == one.path]
    for word, text in instead:
        lines += _pair("not done", f"{word}: {text}")
    lines += ["", "  example", "", indent(one.example, "    ")]
    return "\n".join(lines)


def _pair(name: str, text: str) -> list[str]:
    start = f"  {name}".ljust(16)
    return fill(text, WIDTH, initial_indent=start, subsequent_indent=" " * 16).splitlines()


def _named(word: str) -> list[Key]:
    """Keys with this name or whose path ends in it; chosen names may stand where NAME does."""
    steps = word.lower().split(".")
    exact = [one for one in outline().values() if _fits(one.path, steps)]
    if exact:
        return exact
    return [
        one
        for one in outline().values()
        if len(one.path) > len(steps) and _fits(one.path[-len(steps) :], steps)
    ]


def _fits(path: Iterable[str], steps: list[str]) -> bool:
    path = list(path)
    if len(path) != len(steps):
        return False
    return all(a == b or (a == NAME and len(steps) > 1) for a, b in zip(path, steps, strict=True))


def _by_value(word: str) -> list[Key]:
    return [one for one in outline().values() if word.lower() in one.words]


def _by_concept(word: str) -> list[Key]:
    plain = word.lower().replace("-", "_").replace(" ", "_")
    instead = [path for (path, known) in later.WORDS if known.replace("-", "_").replace(" ", "_") == plain]
    for pattern, paths in _CONCEPTS:
        if re.fullmatch(pattern, plain):
            instead += paths
    if not instead and plain in _names_in_examples():
        instead = [("variables",)]
    return [outline()[path] for path in dict.fromkeys(instead)]


@cache
def _names_in_examples() -> frozenset[str]:
    names = set[str]()
    for one in outline().values():
        names |= set(yaml.safe_load(one.example).get("variables", {}))
    return frozenset(names)
