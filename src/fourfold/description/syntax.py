"""YAML that cannot be read, in words for a person who does not know YAML's own."""

from __future__ import annotations

import re

import yaml

from fourfold.description.wording import visible
from fourfold.errors import Position, Problem

_TAB_FIRST = re.compile(r" *\t")
_BEGAN_ABOVE = "quoted scalar|flow (mapping|sequence)|simple key"
_LOOK_AROUND = (
    "Look at this line and the one above for a missing quotation mark, bracket or colon, or for "
    "indentation that does not agree."
)

# (where YAML was, what it met), both as regular expressions, then what to say and what to do.
# ``{character}`` is the character at the position.
_SAYINGS: tuple[tuple[str, str, str, str], ...] = (
    (
        "",
        "mapping values are not allowed",
        "A colon followed by a space stands where no key can begin.",
        'Put a text that holds a colon in quotation marks, as in label: "Age: in years"; otherwise check '
        "that the line is indented as its neighbours are.",
    ),
    (
        "quoted scalar",
        "unexpected end|unexpected document",
        "A quotation mark is opened here and not closed.",
        "Close it. Inside '...' an apostrophe is written twice; inside \"...\" it stands as it is.",
    ),
    (
        "double-quoted",
        "escape",
        'A backslash inside "..." does not form a character here.',
        "Use '...' instead of \"...\" where a backslash is meant as it stands.",
    ),
    (
        "flow (mapping|sequence)",
        "",
        "A bracket or brace is opened here and not closed, or a comma is missing inside.",
        "Close it, put commas between its parts, and put a text that holds brackets in quotation marks.",
    ),
    (
        "alias|anchor",
        "",
        "A text cannot begin with '{character}' here.",
        'Put it in quotation marks, as in "*".',
    ),
    (
        "block scalar",
        "",
        "A value cannot begin with '{character}' here.",
        'Put it in quotation marks, as in ">65".',
    ),
    ("tag", "", "A text cannot begin with '!' here.", "Put it in quotation marks."),
    (
        "directive",
        "",
        "A line cannot begin with '%'.",
        "Put the text in quotation marks, or begin the line with '#' if it is a comment.",
    ),
    (
        "",
        "cannot start any token",
        "A text cannot begin with '{character}' here.",
        'Put it in quotation marks, as in "{character}".',
    ),
    (
        "",
        "sequence entries are not allowed",
        "A dash that begins a list item cannot stand here.",
        "Put each `- item` on a line of its own, or the text in quotation marks.",
    ),
    (
        "simple key",
        "",
        "A key without its colon stands here.",
        "Write `key: value`, with a space after the colon, and indent as the neighbouring lines are.",
    ),
    (
        "block (mapping|collection|sequence)",
        "",
        "This does not fit with the lines above it.",
        "Lines that belong together begin in the same column, and nothing follows a closing quotation mark "
        "or bracket on its line.",
    ),
)


def syntax_problem(error: yaml.MarkedYAMLError, text: str, file: str) -> Problem:
    """The plain words for an error of PyYAML's scanner or parser."""
    context, met = error.context or "", error.problem or ""
    mark = error.problem_mark or error.context_mark
    # An unclosed quotation mark or bracket is noticed far below; what helps is where it opened.
    opened = error.context_mark if re.search(_BEGAN_ABOVE, context) else None
    if opened is not None and "escape" not in met:
        mark = opened
    if mark is None:
        return Problem("This cannot be read as YAML.", _LOOK_AROUND, Position(file))
    where = Position(file, mark.line + 1, mark.column + 1)
    lines = text.splitlines()
    tabs = [number for number, line in enumerate(lines, 1) if _TAB_FIRST.match(line)]
    at = error.problem_mark
    if at is not None and (_character(text, at.index) == "\t" or at.line + 1 in tabs):
        others = ", ".join(str(number) for number in tabs[:10])
        more = f" Lines that begin with a tab: {others}." if len(tabs) > 1 else ""
        return Problem(
            "A tab stands here; YAML takes only spaces between and before keys.",
            f"Replace each tab by spaces.{more}",
            Position(file, at.line + 1, at.column + 1),
        )
    above = _without_colon(lines, mark.line)
    if above is not None and "mapping values" in met:
        return Problem(
            "This line has no colon, although the next one is a key below it.",
            f"Write `{visible(lines[above].strip())}:`.",
            Position(file, above + 1, len(lines[above]) - len(lines[above].lstrip()) + 1),
        )
    for in_context, in_met, what, advice in _SAYINGS:
        if re.search(in_context, context) and re.search(in_met, met):
            at_index = error.context_mark if re.search("alias|anchor|block scalar", context) else mark
            character = _character(text, (at_index or mark).index)
            fill = visible(character) or "?"
            return Problem(what.format(character=fill), advice.format(character=fill), where)
    return Problem("This line cannot be read as YAML.", _LOOK_AROUND, where)


def _without_colon(lines: list[str], line: int) -> int | None:
    """The line above, if it is a single word that can only be a key whose colon was forgotten."""
    for number in range(min(line, len(lines)) - 1, -1, -1):
        stripped = lines[number].split(" #")[0].strip()
        if stripped and not stripped.startswith("#"):
            return number if re.fullmatch(r"[\w-]+", stripped) else None
    return None


def _character(text: str, index: int) -> str:
    return text[index : index + 1]
