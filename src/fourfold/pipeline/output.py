"""Output that appears whole or not at all.

The files are written into a folder beside the final one, flushed to disk, and the two folders
are then exchanged in one step where the system can (Linux), else in two renames that the next
run completes if the first was interrupted between them. Files in the old folder that the
program did not make are carried over, never deleted.
"""

from __future__ import annotations

import contextlib
import ctypes
import errno
import os
import shutil
import tempfile
from collections.abc import Mapping
from pathlib import Path

from fourfold.errors import RenderingError

OWN_FILES = ("report.html", "report.pdf", "results.json")

_AT_FDCWD = -100
_RENAME_EXCHANGE = 2


def write_whole(folder: Path, files: Mapping[str, bytes]) -> None:
    """Replace the program's files in ``folder`` by ``files``, all or none.

    Parameters
    ----------
    folder : Path
        Made if absent; its parent must exist.
    files : mapping of file name to bytes

    Raises
    ------
    RenderingError
        If anything could not be written; ``folder`` is then as it was before.
    """
    if folder.exists() and not folder.is_dir():
        raise RenderingError(f"{folder} is a file, not a folder.", "Name another folder with --into.")
    staging: Path | None = None
    try:
        recover(folder)
        staging = Path(tempfile.mkdtemp(prefix=_prefix(folder), dir=folder.parent))
        staging.chmod(0o755)
        for name, content in files.items():
            _write_flushed(staging / name, content)
        _flush_folder(staging)
        _swap(staging, folder)
    except OSError as error:
        raise RenderingError(_explain(error, folder), _advice(error)) from error
    finally:
        if staging is not None:
            _discard(staging, folder)


def recover(folder: Path) -> None:
    """Finish or clear what an interrupted run left beside ``folder``."""
    if not folder.parent.is_dir():
        return
    for left in sorted(folder.parent.glob(_prefix(folder) + "*")):
        if not left.is_dir():
            continue
        if left.name.endswith(".old") and not folder.exists():
            left.rename(folder)
        else:
            _discard(left, folder)


def _prefix(folder: Path) -> str:
    return f".{folder.name}.writing-"


def _write_flushed(path: Path, content: bytes) -> None:
    with path.open("wb") as file:
        file.write(content)
        file.flush()
        os.fsync(file.fileno())


def _flush_folder(folder: Path) -> None:
    # Windows cannot open a folder for flushing; the renames are then as safe as they get.
    with contextlib.suppress(PermissionError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


def _swap(staging: Path, folder: Path) -> None:
    if not folder.exists():
        staging.rename(folder)
    elif not _exchange(staging, folder):
        old = staging.with_name(staging.name + ".old")
        folder.rename(old)
        try:
            staging.rename(folder)
        except OSError:
            old.rename(folder)
            raise
        _discard(old, folder)
    _flush_folder(folder.parent)


def _exchange(first: Path, second: Path) -> bool:
    """Exchange two folders atomically; False where the system cannot."""
    try:
        renameat2 = ctypes.CDLL(None, use_errno=True).renameat2
    except (OSError, AttributeError, TypeError):
        return False
    done = renameat2(_AT_FDCWD, os.fsencode(first), _AT_FDCWD, os.fsencode(second), _RENAME_EXCHANGE)
    if done == 0:
        return True
    if ctypes.get_errno() in (errno.ENOSYS, errno.EINVAL, errno.ENOTSUP):
        return False
    raise OSError(ctypes.get_errno(), os.strerror(ctypes.get_errno()), str(second))


def _discard(left: Path, folder: Path) -> None:
    """Carry foreign files of ``left`` over to ``folder``, then remove it."""
    if not left.is_dir():
        return
    for entry in list(left.iterdir()):
        if entry.name not in OWN_FILES and folder.is_dir() and not (folder / entry.name).exists():
            entry.rename(folder / entry.name)
    if all(entry.name in OWN_FILES for entry in left.iterdir()):
        shutil.rmtree(left, ignore_errors=True)


def _explain(error: OSError, folder: Path) -> str:
    if error.errno in (errno.ENOSPC, errno.EDQUOT):
        return f"The disk is full: the report could not be written to {folder}."
    if error.errno in (errno.EACCES, errno.EPERM, errno.EROFS):
        return f"The folder {folder.parent} cannot be written to."
    if error.errno == errno.ENOENT:
        return f"The folder {folder.parent} does not exist."
    return f"The report could not be written to {folder}: {error.strerror or error}."


def _advice(error: OSError) -> str:
    kept = "Any earlier report there is untouched. "
    if error.errno in (errno.ENOSPC, errno.EDQUOT):
        return kept + "Free some space, or name a folder on another disk with --into."
    return kept + "Name a folder that exists and can be written to with --into."
