"""From a path to the text of a description: how much is read, and in which encoding."""

from __future__ import annotations

import hashlib
import re
import stat
from dataclasses import dataclass
from pathlib import Path

from fourfold.description.wording import did_you_mean, quoted
from fourfold.errors import DescriptionError, Position, Problem

LARGEST_FILE = 1_000_000
SAVE_AS_UTF8 = "Save the file as UTF-8 in your editor (often under Save as, Encoding)."

# What YAML allows as a character; the rest is control characters and halves of surrogate pairs.
_NOT_ALLOWED = re.compile("[^\t\n\r\x20-\x7e\x85\xa0-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
_LINE_BREAK = re.compile("\r\n|[\n\r\x85\u2028\u2029]")

# Beginnings of files that people name by mistake.
_OTHER_FILES = (
    (b"PK\x03\x04", "a workbook or another compressed file"),
    (b"PAR1", "a parquet file"),
    (b"%PDF", "a PDF"),
    (b"SQLite format 3", "a database"),
    (b"\x1f\x8b", "a compressed file"),
    (b"\xd0\xcf\x11\xe0", "a workbook of the old kind"),
    (b"\x89PNG", "a picture"),
)


@dataclass(frozen=True, slots=True)
class SourceText:
    """The text of a file without its byte-order mark, and the hash of its bytes."""

    text: str
    sha256: str


def read_text(path: Path) -> SourceText:
    """Read a description's text.

    Raises
    ------
    DescriptionError
        If the file is missing, is no ordinary file, is larger than a description can be (it is
        then not read at all), or is not text in UTF-8.
    """
    raw = _bytes(path)
    return SourceText(decode(raw, str(path)), hashlib.sha256(raw).hexdigest())


def decode(raw: bytes, file: str) -> str:
    """Bytes as text; says which byte is wrong and where.

    Raises
    ------
    DescriptionError
    """
    for beginning, what in _OTHER_FILES:
        if raw.startswith(beginning):
            raise _refused(
                f"This is {what}, not a study description, which is a text file in YAML.",
                "Name the description (for example study.yaml); it names the data file under `data:`.",
                Position(file),
            )
    if raw.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise _refused("The file is encoded as UTF-16; expected UTF-8.", SAVE_AS_UTF8, Position(file, 1, 1))
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        start = error.start + (3 if raw.startswith(b"\xef\xbb\xbf") else 0)
        raise _refused(*_wrong_byte(raw, start, file)) from None
    wrong = _NOT_ALLOWED.search(text)
    if wrong is not None:
        name = f"U+{ord(wrong.group()):04X}"
        where = position_of(text, wrong.start(), file)
        if text.count("\x00") > 1:
            raise _refused(
                f"The file is not text: it holds the control character {name}.",
                "Name a text file in YAML. A text saved as UTF-16 without a mark looks like this too: "
                + SAVE_AS_UTF8,
                where,
            )
        raise _refused(
            f"The control character {name} stands here; a description holds visible characters only.",
            "Delete it; it often comes with text copied from another program.",
            where,
        )
    return text


def position_of(text: str, index: int, file: str) -> Position:
    """Line and column of a character, counted as YAML counts lines."""
    line, start = 1, 0
    for match in _LINE_BREAK.finditer(text, 0, index):
        line, start = line + 1, match.end()
    return Position(file, line, index - start + 1)


def _bytes(path: Path) -> bytes:
    where = Position(str(path))
    try:
        status = path.stat()
        if stat.S_ISDIR(status.st_mode):
            raise _refused("This is a folder; expected a study description (a YAML file).", "", where)
        if not stat.S_ISREG(status.st_mode):
            raise _refused("This is not an ordinary file; expected a study description.", "", where)
        if status.st_size > LARGEST_FILE:
            raise _too_large(status.st_size, where)
        with path.open("rb") as file:
            # One byte more than is allowed: the file may have grown since it was looked at.
            raw = file.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise _refused("There is no such file.", _near(path), where) from None
    except PermissionError:
        raise _refused("You may not read this file.", "Check its permissions.", where) from None
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise _refused(f"The file cannot be read: {reason}.", "", where) from None
    if len(raw) > LARGEST_FILE:
        raise _too_large(len(raw), where)
    return raw


def _near(path: Path) -> str:
    try:
        names = [entry.name for entry in path.parent.iterdir() if entry.suffix in (".yaml", ".yml")]
    except OSError:
        return f"The folder {quoted(str(path.parent))} is not there either."
    hint = did_you_mean(path.name, names)
    return hint or "`fourfold draft DATA` writes a first description from a data file."


def _too_large(size: int, where: Position) -> DescriptionError:
    return _refused(
        f"The file has {size / 1e6:,.1f} MB; a study description has at most {LARGEST_FILE / 1e6:.0f} MB.",
        "Is this the data file? Name the description; it names the data file under `data:`.",
        where,
    )


def _wrong_byte(raw: bytes, start: int, file: str) -> tuple[str, str, Position]:
    before = raw[:start].decode("utf-8-sig", errors="replace")
    where = position_of(before, len(before), file)
    what = f"Byte 0x{raw[start]:02X} is not UTF-8"
    try:
        meant = raw[start : start + 1].decode("cp1252")
    except UnicodeDecodeError:
        meant = ""
    if meant.isprintable() and meant:
        what += f" (in the encoding Windows-1252 it would be '{meant}')"
    return what + "; expected a text file in UTF-8.", SAVE_AS_UTF8, where


def _refused(what: str, advice: str, where: Position) -> DescriptionError:
    return DescriptionError(Problem(what, advice, where))
