"""Reading texts as descriptions, and what is said about altered copies of them."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from fourfold.description.read import Loaded, load
from fourfold.errors import DescriptionError, Problem

from .studies import SMALL


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A folder with the data file that the descriptions name."""
    (tmp_path / "wound-infection.csv").write_text("patient;infection\n1;no\n")
    return tmp_path


@pytest.fixture
def read(folder: Path) -> Callable[[str], Loaded]:
    """Load a text as a description."""

    def reading(text: str) -> Loaded:
        path = folder / "study.yaml"
        path.write_text(text, encoding="utf-8", newline="")
        return load(path)

    return reading


@pytest.fixture
def refused(folder: Path) -> Callable[[str | bytes], tuple[Problem, ...]]:
    """The problems of a text as a description; fails where there are none."""

    def refusing(text: str | bytes) -> tuple[Problem, ...]:
        path = folder / "study.yaml"
        path.write_bytes(text if isinstance(text, bytes) else text.encode())
        with pytest.raises(DescriptionError) as caught:
            load(path)
        assert caught.value.exit_code == 3
        for problem in caught.value.problems:
            assert problem.where is not None
            assert problem.where.file == str(path)
            # Nothing of the validation library's own wording may reach a reader.
            for jargon in ("Input should", "pydantic", "validation error", "[type=", "Traceback", "ctx"):
                assert jargon not in str(problem)
        return caught.value.problems

    return refusing


@pytest.fixture
def changed(refused: Callable[[str | bytes], tuple[Problem, ...]]) -> Callable[..., Problem]:
    """The one problem of SMALL with a part replaced; it must stand at ``at`` (or at the new part)."""

    def changing(old: str, new: str, at: str | None = None, text: str = SMALL) -> Problem:
        assert text.count(old) >= 1, old
        altered = text.replace(old, new, 1)
        problems = refused(altered)
        assert len(problems) == 1, "\n".join(map(str, problems))
        where = problems[0].where
        assert where is not None
        if at is not None:
            start = altered.index(at)
            line = altered.count("\n", 0, start) + 1
            column = start - (altered.rfind("\n", 0, start) + 1) + 1
            assert (where.line, where.column) == (line, column), str(problems[0])
        return problems[0]

    return changing
