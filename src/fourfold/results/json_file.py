"""The results file: the tree as JSON and back, exactly.

Doubles are written with the shortest digits that read back to the same double, keys stand in the
order of the tree, and the same tree gives the same bytes. What is read is checked strictly: a
file that is not whole, not of this format or not of these types is refused with a sentence.
"""

from __future__ import annotations

import dataclasses
import json
import math
from collections.abc import Iterator
from functools import cache
from numbers import Integral, Real
from typing import Any

from pydantic import ConfigDict, TypeAdapter, ValidationError, with_config

from fourfold.errors import FourfoldError, Problem, UsageError
from fourfold.results import tree

FORMAT = 1
LARGEST_FILE = 200_000_000
"""Characters; a results file of a large study stays far below."""
MOST_PROBLEMS = 10

_NOT_A_RESULTS_FILE = "Name a results.json that `fourfold report` wrote."
_DAMAGED = "The file was changed or cut short after it was written; run `fourfold report` again."


class ResultsNotWritable(FourfoldError):
    """The tree holds something that no JSON file can carry."""


class ResultsUnreadable(UsageError):
    """The text is not a results file of this format."""


def dumps(results: tree.Results) -> str:
    """Write the tree as JSON, ending in a newline.

    Parameters
    ----------
    results : tree.Results

    Raises
    ------
    ResultsNotWritable
        If a number is not finite, or a value (in a finding) has no JSON form. What does not
        exist must be None in the tree.
    """
    # Read back before it is given out: a whole number in the place of a double would else be
    # written differently after the next reading, and what cannot be read must not be written.
    try:
        return _written(_read(_written(results)))
    except ResultsUnreadable as error:
        raise ResultsNotWritable(error.problems) from error


def _written(results: tree.Results) -> str:
    return json.dumps(_plain(results, ()), indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def loads(text: str) -> tree.Results:
    """Read a tree back from JSON.

    Raises
    ------
    ResultsUnreadable
        If the text is too long, no JSON, no results file, of an unknown format, or holds values
        of a wrong type; the places are named.
    """
    if len(text) > LARGEST_FILE:
        raise ResultsUnreadable(
            f"The file is longer than {LARGEST_FILE:,} characters, too long for a results file.",
            _NOT_A_RESULTS_FILE,
        )
    found = _parsed(text)
    if not isinstance(found, dict) or "format" not in found or "study" not in found:
        raise ResultsUnreadable(
            "The file is JSON, but not a results file: it has no `format` and `study`.", _NOT_A_RESULTS_FILE
        )
    stated = found["format"]
    if isinstance(stated, bool) or stated != FORMAT:
        raise ResultsUnreadable(
            f"The results file has format {_short(stated)}; this version reads format {FORMAT}.",
            "Render it with the version of fourfold that wrote it, or run `fourfold report` again.",
        )
    return _read(text)


def _read(text: str) -> tree.Results:
    try:
        return _adapter().validate_json(text)
    except ValidationError as error:
        raise ResultsUnreadable(list(_problems(error))) from None


def _parsed(text: str) -> Any:
    def refuse(constant: str) -> float:
        raise ResultsUnreadable(f"The file holds {constant}, which is no number in JSON.", _DAMAGED)

    def finite(digits: str) -> float:
        value = float(digits)
        if not math.isfinite(value):
            raise ResultsUnreadable(f"The file holds {_short(digits)}, too large for a number.", _DAMAGED)
        return value

    def unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
        mapping = dict(pairs)
        if len(mapping) != len(pairs):
            names = [name for name, _ in pairs]
            twice = next(name for name in names if names.count(name) > 1)
            raise ResultsUnreadable(f"The file gives `{_short(twice)}` twice in one place.", _DAMAGED)
        return mapping

    try:
        return json.loads(text, parse_constant=refuse, parse_float=finite, object_pairs_hook=unique)
    except json.JSONDecodeError as error:
        where = f"line {error.lineno}, column {error.colno}"
        if not text.lstrip().startswith("{"):
            raise ResultsUnreadable(
                f"The file is not JSON ({error.msg}, {where}).", _NOT_A_RESULTS_FILE
            ) from None
        raise ResultsUnreadable(f"The file is not whole JSON ({error.msg}, {where}).", _DAMAGED) from None
    except RecursionError:
        raise ResultsUnreadable(
            "The file is nested more deeply than any results file.", _NOT_A_RESULTS_FILE
        ) from None
    except ValueError as error:
        # Python limits the digits of a whole number it reads.
        raise ResultsUnreadable(f"The file holds a number that cannot be read ({error}).", _DAMAGED) from None


@cache
def _adapter() -> TypeAdapter[tree.Results]:
    _forbid_unknown_keys()
    return TypeAdapter(tree.Results)


def _forbid_unknown_keys() -> None:
    # Set here and not in the tree, so that the tree stays free of any library.
    for name in dir(tree):
        found = getattr(tree, name)
        if isinstance(found, type) and dataclasses.is_dataclass(found):
            with_config(ConfigDict(extra="forbid", strict=True))(found)


def _problems(error: ValidationError) -> Iterator[Problem]:
    found = error.errors(include_url=False, include_context=False)
    for one in found[:MOST_PROBLEMS]:
        place = _place(one["loc"])
        if one["type"] == "unexpected_keyword_argument":
            yield Problem(f"{place}: there is no such key in a results file.", _DAMAGED)
        elif one["type"] in ("missing", "missing_argument", "missing_keyword_only_argument"):
            yield Problem(f"{place} is missing.", _DAMAGED)
        else:
            yield Problem(f"{place}: {one['msg']}, found {_short(one['input'])}.", _DAMAGED)
    if len(found) > MOST_PROBLEMS:
        yield Problem(f"... and {len(found) - MOST_PROBLEMS} more places.")


def _place(location: tuple[int | str, ...]) -> str:
    path = ""
    for part in location:
        path += f"[{part}]" if isinstance(part, int) else f".{part}"
    return _short(path.lstrip("."), 200)


def _short(value: object, most: int = 60) -> str:
    text = value if isinstance(value, str) else repr(value)
    return text if len(text) <= most else f"{text[:most]}..."


def _plain(value: Any, path: tuple[int | str, ...]) -> Any:
    """Mappings, lists and scalars of the tree, each checked to have one JSON form."""
    if value is None or isinstance(value, bool | str):
        return _encodable(value, path)
    if isinstance(value, Integral):
        return int(value)
    if isinstance(value, Real):
        if not math.isfinite(value):
            raise ResultsNotWritable(
                f"{_place(path)} is {value}: a results file holds finite numbers only.",
                "This is a fault of the program: what does not exist must be None.",
            )
        return float(value)
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        return {
            field.name: _plain(getattr(value, field.name), (*path, field.name))
            for field in dataclasses.fields(value)
        }
    if isinstance(value, list | tuple):
        return [_plain(item, (*path, place)) for place, item in enumerate(value)]
    if isinstance(value, dict):
        for key in value:
            if type(key) is not str:
                raise _no_form(key, path)
        return {_encodable(key, path): _plain(item, (*path, key)) for key, item in value.items()}
    raise _no_form(value, path)


def _encodable(value: Any, path: tuple[int | str, ...]) -> Any:
    if isinstance(value, str):
        try:
            value.encode("utf-8")
        except UnicodeEncodeError:
            raise ResultsNotWritable(f"{_place(path)} holds text that no file can carry.") from None
    return value


def _no_form(value: object, path: tuple[int | str, ...]) -> ResultsNotWritable:
    return ResultsNotWritable(
        f"{_place(path)} holds a {type(value).__name__}, which has no form in a results file.",
        "This is a fault of the program: plain numbers, words, lists and mappings only.",
    )
