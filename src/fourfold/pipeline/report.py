"""The main job: a study description becomes a report in a folder."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from fourfold.description.read import load
from fourfold.errors import Problem, UsageError
from fourfold.pipeline.analyse import analyse
from fourfold.pipeline.output import write_whole
from fourfold.pipeline.progress import Progress, stage
from fourfold.report import build
from fourfold.results import json_file, tree


@dataclass(frozen=True, slots=True)
class Done:
    """What a finished command has to say."""

    results: tree.Results
    folder: Path
    files: tuple[str, ...]
    problems: tuple[Problem, ...]

    @property
    def serious(self) -> list[tree.Finding]:
        return [finding for finding in self.results.findings if finding.grade == "serious"]


def report(study: Path, into: Path | None, progress: Progress, *, allow_outside: bool = False) -> Done:
    """Analyse the study and write its report.

    Raises
    ------
    DescriptionError, DataError, EstimationError, RenderingError
        Each with what to do; an earlier report is then untouched.
    """
    with stage(progress, "reading the description"):
        loaded = load(study, allow_outside=allow_outside)
    results = analyse(loaded, progress)
    folder = into if into is not None else study.parent / f"{study.stem}-report"
    return _write(results, loaded.description.report.formats, folder, progress)


def render_again(saved: Path, into: Path | None, progress: Progress) -> Done:
    """Render a results file again, without the data; all formats."""
    with stage(progress, "reading the results"):
        try:
            text = saved.read_bytes().decode("utf-8")
        except FileNotFoundError:
            raise UsageError(f"{saved}: there is no such file.", "Name a results.json.") from None
        except (OSError, UnicodeDecodeError) as error:
            raise UsageError(f"{saved}: cannot be read as a results file ({error}).") from None
        results = json_file.loads(text)
    folder = into if into is not None else saved.resolve().parent
    return _write(results, ("html", "pdf"), folder, progress)


def _write(results: tree.Results, formats: Sequence[str], folder: Path, progress: Progress) -> Done:
    rendered = build.render(results, formats, progress)
    files = {"results.json": json_file.dumps(results).encode("utf-8"), **rendered.files}
    with stage(progress, "writing"):
        write_whole(folder, files)
    return Done(results, folder, tuple(sorted(files)), tuple(rendered.problems))
