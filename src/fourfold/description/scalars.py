"""The kinds of single values a key may take: text, level, number, whole number, yes or no, date.

A value from a file arrives as ``Written`` text and is read here by the key it stands under, so
YAML's own guesses never apply. Values that are already of the kind (a description built in
Python) pass through. A refusal carries what was expected and, where it is known, the mend.
"""

from __future__ import annotations

import math
import re
from datetime import date
from typing import Annotated, Any

from pydantic import Field, PlainValidator
from pydantic_core import PydanticCustomError

from fourfold.description.node import Written
from fourfold.description.wording import NO_VALUE, found

REFUSED = "fourfold"
"""Type of the errors raised here; their context holds ``what`` or ``expected``, ``found`` and ``advice``."""

LONGEST_TEXT = 10_000
_NUMBER = re.compile(r"[-+]?(?:(?:0|[1-9][0-9]*)(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]{1,3})?")
_WHOLE = re.compile(r"[-+]?(?:0|[1-9][0-9]{0,17})")
_DATE = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")
_TRUE, _FALSE = ("true", "yes"), ("false", "no")

_NUMBER_ADVICE = (
    (r"[-+]?[0-9]+,[0-9]{3}(?:,[0-9]{3})+(?:\.[0-9]+)?", "Write it without thousands separators."),
    (r"[-+]?[0-9]+,[0-9]+", "Write the decimals after a point, as in 2.5."),
    (r"[-+]?[0-9]+(?:[_' ][0-9]{3})+(?:\.[0-9]+)?", "Write it without thousands separators."),
    (r"[-+]?0[0-9]+.*", "Write it without leading zeros; a code with leading zeros belongs among levels."),
    (r"[0-9]+(?::[0-9]+)+", "A time or ratio is no number; give it in one unit, as in 90."),
    (r"[-+]?[0-9.]+ ?%", "Write it without the percent sign."),
    (r"[-+]?[0-9][0-9.]* ?[^\W\d_].*", "Write the number alone; a unit belongs under `unit:`."),
)


GIVE_A_VALUE = "Give it a value, or remove the line."


def expected(phrase: str, value: Any, advice: str = "", shown: str | None = None) -> PydanticCustomError:
    """The error for a value of another kind than its key takes."""
    return PydanticCustomError(
        REFUSED,
        "expected {expected}, found {found}",
        {"expected": phrase, "found": shown or found(value), "advice": advice},
    )


def refusal(what: str, advice: str = "") -> PydanticCustomError:
    """The error for a value of the right kind that cannot be meant."""
    return PydanticCustomError(REFUSED, "{what}", {"what": what, "advice": advice})


def text(value: Any) -> str:
    """A text of one or more visible characters."""
    if isinstance(value, Written) and value.plain and value in NO_VALUE:
        raise expected("text", "", GIVE_A_VALUE)
    if not isinstance(value, str):
        raise expected("text", value, "A text that begins with a bracket or brace needs quotation marks.")
    if not value.strip():
        raise expected("text", value, GIVE_A_VALUE, shown="an empty text")
    return _checked(value)


def level(value: Any) -> str:
    """A value of a column, as text, exactly as it is written."""
    if isinstance(value, str) and (not value.strip() or (isinstance(value, Written) and value.refused)):
        empty = isinstance(value, Written) and value.plain
        advice = GIVE_A_VALUE if empty else "What counts as not recorded belongs under `missing:`."
        shown = None if empty else "an empty text"
        raise expected("a value as it stands in the data", value, advice, shown)
    return code(value)


def code(value: Any) -> str:
    """A value of a column, as text; may be the empty text."""
    if isinstance(value, Written) and value.refused:
        raise expected("a value as it stands in the data", value)
    if value is None:
        return ""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, float) and value.is_integer() and abs(value) < 1e15:
        return str(int(value))
    if isinstance(value, int | float):
        return str(value)
    if not isinstance(value, str):
        raise expected(
            "a single value", value, "A value that begins with a bracket or brace needs quotation marks."
        )
    return _checked(value)


def number(value: Any) -> float:
    """A finite number."""
    if isinstance(value, int | float) and not isinstance(value, bool):
        if math.isfinite(value):
            return float(value)
        raise expected("a number", value)
    written = _unquoted(value, "a number")
    if _NUMBER.fullmatch(written):
        parsed = float(written)
        if math.isfinite(parsed):
            return parsed
        raise expected("a number", value, "It is larger than a computer's numbers reach.")
    raise expected("a number", value, number_advice(written))


def whole(value: Any) -> int:
    """A whole number."""
    if isinstance(value, int) and not isinstance(value, bool):
        return value
    if isinstance(value, float) and value.is_integer():
        return int(value)
    written = _unquoted(value, "a whole number")
    if _WHOLE.fullmatch(written):
        return int(written)
    advice = "Write it without a decimal point or exponent." if _NUMBER.fullmatch(written) else ""
    raise expected("a whole number", value, advice or number_advice(written))


def truth(value: Any) -> bool:
    """Yes or no."""
    if isinstance(value, bool):
        return value
    if isinstance(value, Written) and value.lower() in _TRUE + _FALSE:
        return value.lower() in _TRUE
    raise expected("true or false", value, "Write true or false.")


def day(value: Any) -> date:
    """A date, year first."""
    if isinstance(value, date):
        return value
    if isinstance(value, str) and _DATE.fullmatch(value):
        try:
            return date.fromisoformat(str(value))
        except ValueError:
            raise expected("a date", value, "There is no such day in the calendar.") from None
    raise expected("a date", value, "Write year, month and day, as in 2023-01-31.")


def number_or_day(value: Any) -> float | date:
    """A number or a date, whichever it looks like."""
    if isinstance(value, date) or (isinstance(value, str) and _DATE.fullmatch(value)):
        return day(value)
    try:
        return number(value)
    except PydanticCustomError as error:
        advice = (error.context or {}).get("advice", "")
        raise expected("a number or a date (as in 2023-01-31)", value, advice) from None


def pair(value: Any) -> tuple[float, float]:
    """Two numbers in a list."""
    if not isinstance(value, list | tuple) or len(value) != 2:
        raise expected("a list of two numbers", value, "Write them as [18, 105].")
    return number(value[0]), number(value[1])


def number_advice(written: str) -> str:
    """How to mend what was meant as a number."""
    for pattern, advice in _NUMBER_ADVICE:
        if re.fullmatch(pattern, written, re.ASCII):
            return advice
    return "Write digits, with a point before decimals."


def _unquoted(value: Any, kind: str) -> str:
    if isinstance(value, Written) and not value.plain and _NUMBER.fullmatch(value):
        raise expected(kind, value, f"Write {value} without quotation marks.", "a text in quotation marks")
    if not isinstance(value, str):
        raise expected(kind, value)
    if isinstance(value, Written) and value in NO_VALUE:
        raise expected(kind, "", GIVE_A_VALUE)
    return str(value)


def _checked(value: str) -> str:
    if len(value) > LONGEST_TEXT:
        raise refusal(
            f"has {len(value):,} characters; a text may have at most {LONGEST_TEXT:,}.", "Shorten it."
        )
    for character in value:
        if not character.isprintable() and character not in "\t\n" and not character.isspace():
            raise refusal(
                f"holds the control character U+{ord(character):04X}; a text holds visible characters only.",
                "Remove it (or the escape that makes it).",
            )
    return str(value)


Scalar = str | int | float | bool
Text = Annotated[str, PlainValidator(text, json_schema_input_type=str)]
Level = Annotated[str, PlainValidator(level, json_schema_input_type=Scalar)]
Code = Annotated[str, PlainValidator(code, json_schema_input_type=Scalar | None)]
Number = Annotated[float, PlainValidator(number, json_schema_input_type=float)]
Whole = Annotated[int, PlainValidator(whole, json_schema_input_type=int)]
Truth = Annotated[bool, PlainValidator(truth, json_schema_input_type=bool)]
Day = Annotated[date, PlainValidator(day, json_schema_input_type=date)]
NumberOrDay = Annotated[float | date, PlainValidator(number_or_day, json_schema_input_type=float | date)]
Pair = Annotated[
    tuple[float, float],
    PlainValidator(pair, json_schema_input_type=Annotated[list[float], Field(min_length=2, max_length=2)]),
]
