"""A first study description from a data file: guesses marked as guesses, questions as questions.

Every column is read in full, so that no level is missed. Nothing of single rows is written.
"""

from __future__ import annotations

import json
import re
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path

from fourfold.data.guesses import Guess, decimal_sign, guess_column, missing_words
from fourfold.data.raw import RawTable
from fourfold.data.source import ENDINGS, Request, read_file
from fourfold.description.model import DataSource

ANSWER = "ANSWER"
"""Stands where only a person knows; no description that still holds it is accepted."""

PLAIN = re.compile(r"[A-Za-z][A-Za-z_-]*( [A-Za-z_-]+)*")
SPECIAL = {"yes", "no", "true", "false", "on", "off", "y", "n", "null", "na", "nan"}


def guess(path: Path, table: str | None = None) -> str:
    """Write a first description of the data in ``path``.

    Parameters
    ----------
    path : Path
    table : str, optional
        Table of a database, or sheet of a workbook.

    Returns
    -------
    str
        YAML; each guess carries a comment ``# guess:``, each open question ``# answer:``.

    Raises
    ------
    DataError
        If the file cannot be read.
    """
    options = _options(path, table)
    data = read_file(Request(path, path.name, None, options))
    if ENDINGS[path.suffix.lower()] == "delimited":
        options = options.model_copy(update={"decimal": decimal_sign(data)})
        data = replace(data, decimal=options.decimal)
    missing = missing_words(data)
    guesses = [guess_column(name, data, missing) for name in data.columns]
    return "\n".join(
        [*_head(path, data), *_data(options, guesses, missing), *_variables(guesses), *_roles(guesses)]
    )


def _options(path: Path, table: str | None) -> DataSource:
    family = ENDINGS.get(path.suffix.lower())
    if table is not None:
        key = "sheet" if family in ("xlsx", "ods") else "table"
        return DataSource.model_validate({"file": path.name, key: table})
    if family == "delimited" and path.is_file():
        content = path.read_bytes()
        if not content.startswith((b"\xff\xfe", b"\xfe\xff")) and b"\x00" not in content:
            try:
                content.decode("utf-8")
            except UnicodeDecodeError:
                return DataSource(file=path.name, encoding="windows-1252")
    return DataSource(file=path.name)


def _head(path: Path, data: RawTable) -> list[str]:
    return [
        f"# First description of {json.dumps(path.name, ensure_ascii=False)}: {data.n} rows, "
        f"{len(data.columns)} columns.",
        "# Read every line. '# guess:' marks what was inferred from names and values; mend what is wrong.",
        f"# '# answer:' marks what only you can say; put it in place of {ANSWER}.",
        "study:",
        f"  title: {ANSWER}  # answer: what was studied, where",
        f"  design: {ANSWER}  # answer: cohort, case-control, cross-sectional or survey",
        "  purpose: association  # guess: or prediction; then write predictors: in place of exposures:",
    ]


def _data(options: DataSource, guesses: Sequence[Guess], missing: Sequence[str]) -> list[str]:
    lines = ["data:", f"  file: {quoted(options.file)}"]
    if options.table is not None:
        lines.append(f"  table: {quoted(options.table)}")
    if options.sheet is not None:
        lines.append(f"  sheet: {quoted(options.sheet)}")
    if options.encoding is not None:
        lines.append(
            f"  encoding: {options.encoding}  # guess: the file is not UTF-8; look at letters with accents"
        )
    if options.decimal != ".":
        lines.append('  decimal: ","  # guess: numbers are written with a comma')
    identifier = next((guess for guess in guesses if guess.kind == "identifier"), None)
    if identifier is not None:
        lines.append(f"  identifier: {quoted(identifier.column)}  # guess: {identifier.why}")
    codes = ", ".join(quoted(word) for word in ("", *missing))
    lines.append(f"  missing: [{codes}]  # guess: what means 'not recorded' in every column")
    return lines


def _variables(guesses: Sequence[Guess]) -> list[str]:
    lines = ["variables:"]
    identified = False
    for guess in guesses:
        if guess.kind == "left out" or (guess.kind == "identifier" and identified):
            lines.append(f"  # guess: {_in_comment(guess.column)} is left out: {_in_comment(guess.why)}")
        elif guess.kind == "identifier":
            identified = True
        else:
            lines.append(f"  {quoted(guess.column)}: {_variable(guess)}  # guess: {_in_comment(guess.why)}")
    return lines


def _variable(guess: Guess) -> str:
    parts = [f"label: {quoted(_label(guess.column))}", f"kind: {guess.kind}"]
    if guess.present is not None:
        parts.append(f"present: {quoted(guess.present)}")
    if guess.levels:
        parts.append(f"levels: [{', '.join(quoted(level) for level in guess.levels)}]")
    if guess.unit is not None:
        parts.append(f"unit: {quoted(guess.unit)}")
    if guess.missing:
        parts.append(f"missing: [{', '.join(guess.missing)}]")
    return "{" + ", ".join(parts) + "}"


def _roles(guesses: Sequence[Guess]) -> list[str]:
    binary = [guess.column for guess in guesses if guess.kind == "binary"]
    usable = [
        guess.column for guess in guesses if guess.kind in ("binary", "quantity", "category", "ordered")
    ]
    candidates = ", ".join(_in_comment(name) for name in binary) or "none was found; describe one"
    others = ", ".join(_in_comment(name) for name in usable)
    return [
        f"outcome: {ANSWER}  # answer: the variable that is explained; binary ones are: {candidates}",
        f"exposures: [{ANSWER}]  # answer: whose odds ratio answers the question; one or more of: {others}",
        "covariates: []  # answer: what the exposures' odds ratios are adjusted for, if anything",
        "",
    ]


def _label(column: str) -> str:
    words = " ".join(column.replace("_", " ").split()) or column
    return words[:1].upper() + words[1:]


def _in_comment(words: str) -> str:
    # A line break would end the comment and let a column's name become YAML.
    return json.dumps(words, ensure_ascii=False)[1:-1] if not words.isprintable() else words


def quoted(word: str) -> str:
    """A word as YAML that reads back as the same text."""
    if PLAIN.fullmatch(word) and word.casefold() not in SPECIAL:
        return word
    return json.dumps(word, ensure_ascii=False)
