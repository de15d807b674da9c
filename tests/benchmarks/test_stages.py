"""Where the time goes, from start to PDF, and what ``--help`` costs: shares and ratios of one run.

Run with ``pytest -m benchmark --benchmark-enable -n 0 -s tests/benchmarks/test_stages.py``.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import time
from pathlib import Path

import pytest

from fourfold.pipeline import report as flow
from fourfold.pipeline.progress import Stopwatch

pytestmark = pytest.mark.benchmark

COHORT = Path(__file__).parents[2] / "examples" / "wound-infection" / "wound-infection.yaml"
DRAWING = ("making the PDF", "writing the page")


def test_shares_of_the_cohort_example_warm(tmp_path):
    flow.report(COHORT, tmp_path / "warming", Stopwatch())
    watch = Stopwatch()
    started = time.perf_counter()
    flow.report(COHORT, tmp_path / "measured", watch)
    whole = time.perf_counter() - started
    print(f"\nstart to PDF, warm: {whole:.2f} s")
    for name, seconds in sorted(watch.seconds.items(), key=lambda item: -item[1]):
        print(f"  {seconds / whole:6.1%}  {seconds:6.2f} s  {name}")
    # Each stage is timed once: none inside another, and nearly nothing outside all.
    assert 0.9 * whole < sum(watch.seconds.values()) <= whole
    work = {name: seconds for name, seconds in watch.seconds.items() if name not in DRAWING}
    assert len(work) >= 5
    assert max(watch.seconds, key=watch.seconds.__getitem__) == "making the PDF"
    # A stage of the work may take 1 s where the whole takes five or more.
    assert max(work.values()) < 0.2 * whole


def median_of(code: list[str], rounds: int = 15) -> float:
    seconds = []
    for _ in range(rounds):
        started = time.perf_counter()
        subprocess.run([sys.executable, *code], check=True, capture_output=True)
        seconds.append(time.perf_counter() - started)
    return statistics.median(seconds)


def test_help_costs_little_more_than_the_library_it_uses():
    bare = median_of(["-c", "pass"])
    click = median_of(["-c", "import click"])
    shown = median_of(["-m", "fourfold.cli.main", "--help"])
    print(f"\npython {1000 * bare:.0f} ms, with click {1000 * click:.0f} ms, --help {1000 * shown:.0f} ms")
    assert shown < 2 * click
