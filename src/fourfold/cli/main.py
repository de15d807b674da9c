"""The command line: arguments in, exit codes out. Work is imported only when a command starts,
so that ``--help`` answers at once.
"""

from __future__ import annotations

import os
import sys
import traceback
from pathlib import Path
from typing import Any

import click

from fourfold import __version__
from fourfold.errors import FourfoldError

EXIT_CODES = """
Exit codes: 0 done; 1 done, but with --strict a serious finding; 2 wrong usage; 3 error in the
description; 4 error in the data; 5 nothing can be fitted; 6 rendering failed; 70 internal error
(a fault in Fourfold; FOURFOLD_TRACEBACK=1 shows where); 130 interrupted.
"""

COMPLETE_VAR = "_FOURFOLD_COMPLETE"

INTERNAL_ERROR = 70
"""As EX_SOFTWARE of the BSD sysexits."""


class Commands(click.Group):
    """A group that turns every error meant for the user into a message and an exit code."""

    def invoke(self, ctx: click.Context) -> Any:
        try:
            return super().invoke(ctx)
        except FourfoldError as error:
            _complain(error)
            ctx.exit(error.exit_code)
        except KeyboardInterrupt:
            click.echo("\nInterrupted. Nothing was changed; an earlier report is as it was.", err=True)
            ctx.exit(130)
        except MemoryError:
            _complain(FourfoldError("There is not enough memory for this.", "Nothing was changed."))
            ctx.exit(INTERNAL_ERROR)


def _confess(fault: Exception) -> None:
    """Say that a fault of the program stopped the work."""
    # The fault's own message is left out: it can hold a value from somebody's row.
    kind, place = type(fault).__name__, ""
    for frame in traceback.extract_tb(fault.__traceback__):
        place = f"{Path(frame.filename).name}:{frame.lineno}"
    click.echo(
        click.style("error: ", fg="red", bold=True, reset=True)
        + f"internal error {kind} at {place}; nothing was changed.\n"
        "    This is a fault in Fourfold, not in your files: please report it, with the description.\n"
        "    FOURFOLD_TRACEBACK=1 shows where it happened.",
        err=True,
    )


def _complain(error: FourfoldError) -> None:
    problems = error.problems
    for problem in problems:
        click.echo(click.style("error: ", fg="red", bold=True, reset=True) + str(problem), err=True)
    if len(problems) > 1:
        click.echo(f"{len(problems)} problems found.", err=True)


@click.group(
    cls=Commands,
    epilog=EXIT_CODES,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
)
@click.version_option(__version__, prog_name="fourfold")
def commands() -> None:
    """From a study description and a data file to a finished clinical or epidemiological risk
    report: crude and adjusted odds ratios, whether they can be trusted, tables, figures and
    sentences.

    Results are statistical, not for individual clinical decisions.
    """


def _study_argument(function: Any) -> Any:
    return click.argument("study", type=click.Path(path_type=Path, dir_okay=False), required=False)(function)


_allow_outside = click.option(
    "--allow-outside", is_flag=True, help="Let the description name files outside its own folder."
)


@commands.command(short_help="The main job: from a description and its data to the report.")
@_study_argument
@click.option("--from", "saved", type=click.Path(path_type=Path), help="Render again from a results.json.")
@click.option("--into", type=click.Path(path_type=Path), help="Folder for the report.")
@click.option("--strict", is_flag=True, help="Exit with 1 when there is a serious finding.")
@click.option("--quiet", is_flag=True, help="No progress, no closing lines but errors.")
@_allow_outside
def report(
    study: Path | None, saved: Path | None, into: Path | None, strict: bool, quiet: bool, allow_outside: bool
) -> None:
    """Read, audit, fit, assess and render: STUDY.yaml becomes report.html, report.pdf and
    results.json."""
    if (study is None) == (saved is None):
        raise click.UsageError("Name a study description, or a results file with --from.")
    from fourfold.cli import closing, progress
    from fourfold.pipeline import report as flow

    with progress.shown(quiet) as watched:
        if saved is not None:
            done = flow.render_again(saved, into, watched)
        else:
            assert study is not None
            done = flow.report(study, into, watched, allow_outside=allow_outside)
    if not quiet:
        closing.say(done)
    for problem in done.problems:
        click.echo(click.style("error: ", fg="red", bold=True) + str(problem), err=True)
    if done.problems:
        sys.exit(6)
    if strict and done.serious:
        sys.exit(1)


@commands.command()
@click.argument("study", type=click.Path(path_type=Path, dir_okay=False))
@click.option("--strict", is_flag=True, help="Exit with 1 when there is a serious finding.")
@_allow_outside
def check(study: Path, strict: bool, allow_outside: bool) -> None:
    """Read the description and audit the data; fit nothing."""
    from fourfold.cli import closing, progress
    from fourfold.pipeline import check as flow

    with progress.shown(False) as watched:
        done = flow.check(study, watched, allow_outside=allow_outside)
    closing.say_check(done)
    if strict and done.serious:
        sys.exit(1)


@commands.command(short_help="Write a first description from a data file.")
@click.argument("data", type=click.Path(path_type=Path, dir_okay=False))
@click.option("--table", help="Table of a sqlite or duckdb file, or sheet of a workbook.")
@click.option("--output", type=click.Path(path_type=Path), help="File to write; standard output if absent.")
def draft(data: Path, table: str | None, output: Path | None) -> None:
    """Write a first study description from a data file, marking each guess."""
    from fourfold.pipeline import draft as flow

    text = flow.draft(data, table, output)
    if output is None:
        click.echo(text, nl=False)
    else:
        flow.save(text, output)
        outside = " --allow-outside" if flow.leads_outside(data, output) else ""
        click.echo(
            f"Wrote {output}. Answer the lines marked '# answer:', then run: fourfold check{outside} {output}"
        )


def _known_keys(_: click.Context, __: click.Parameter, begun: str) -> list[str]:
    """The keys that begin as typed, for completion."""
    from fourfold.description.outline import outline

    found = outline().values()
    return sorted({word for key in found for word in (key.name, key.dotted) if word.startswith(begun)})


@commands.command()
@click.argument("key", required=False, shell_complete=_known_keys)
@click.option("--schema", is_flag=True, help="Print the JSON Schema of a description.")
def keys(key: str | None, schema: bool) -> None:
    """What each key of a description means, with an example."""
    from fourfold.description import keys as description_keys

    if schema:
        import json

        click.echo(json.dumps(description_keys.schema(), indent=2))
    else:
        click.echo(description_keys.explain(key))


@commands.command(short_help="Print the completion script of a shell.")
@click.argument("shell", type=click.Choice(["bash", "zsh", "fish"]))
def completion(shell: str) -> None:
    """Print the script that completes commands and file names in your shell."""
    from click.shell_completion import get_completion_class

    found = get_completion_class(shell)
    assert found is not None
    click.echo(found(commands, {}, "fourfold", COMPLETE_VAR).source())


def main() -> None:
    """Entry point of the ``fourfold`` command."""
    try:
        # Named, so that completion and help are the same however the program was started.
        commands(prog_name="fourfold", complete_var=COMPLETE_VAR)
    except Exception as fault:
        # The outermost place: whatever arrives here is a fault of the program, and even then
        # nobody is shown a traceback that they did not ask for.
        if os.environ.get("FOURFOLD_TRACEBACK") == "1":
            raise
        _confess(fault)
        sys.exit(INTERNAL_ERROR)


if __name__ == "__main__":
    main()
