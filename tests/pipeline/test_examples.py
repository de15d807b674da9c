"""The bundled examples: their data come from their scripts, and each report shows what it is for."""

from __future__ import annotations

import csv
import json
import re
import shutil
import subprocess
import sys
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pikepdf
import pytest

from fourfold.report import wording

EXAMPLES = Path(__file__).parents[2] / "examples"
NAMES = ("wound-infection", "readmission", "harvest-supper")


@dataclass(frozen=True)
class Made:
    """An example's finished report, read in every format."""

    folder: Path
    results: dict[str, Any]
    page: str
    page_text: str
    pdf_text: str
    closing: str

    @property
    def findings(self) -> set[str]:
        return {finding["id"] for finding in self.results["findings"]}

    @property
    def serious(self) -> set[str]:
        return {finding["id"] for finding in self.results["findings"] if finding["grade"] == "serious"}


class Words(HTMLParser):
    """What a page says: its text, and the texts in place of figures, but no drawing or style."""

    def __init__(self) -> None:
        super().__init__()
        self.parts: list[str] = []
        self.silent = 0

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.silent += tag in ("style", "script")
        self.parts += [value for name, value in attrs if name in ("alt", "aria-label", "title") and value]
        self.parts.append(" ")

    def handle_endtag(self, tag: str) -> None:
        self.silent -= tag in ("style", "script")
        self.parts.append("\n" if tag in ("tr", "p", "li", "table") else " ")

    def handle_data(self, data: str) -> None:
        if not self.silent:
            self.parts.append(data)


def words_of(page: str) -> str:
    reader = Words()
    reader.feed(page)
    return "\n".join(" ".join(line.split()) for line in "".join(reader.parts).splitlines() if line.strip())


@pytest.fixture(scope="session")
def made(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Made]:
    """Each example reported once, in a copy, by the command."""
    found = {}
    for name in NAMES:
        folder = tmp_path_factory.mktemp(name)
        for ending in ("yaml", "csv"):
            shutil.copy(EXAMPLES / name / f"{name}.{ending}", folder)
        ran = subprocess.run(
            [sys.executable, "-m", "fourfold.cli.main", "report", f"{name}.yaml"],
            cwd=folder, capture_output=True, text=True, encoding="utf-8", timeout=240, check=False,
        )  # fmt: skip
        assert ran.returncode == 0, ran.stderr
        report = folder / f"{name}-report"
        page = (report / "report.html").read_text(encoding="utf-8")
        pdf = subprocess.run(
            ["pdftotext", "-layout", str(report / "report.pdf"), "-"], capture_output=True, check=True
        ).stdout.decode("utf-8")
        results = json.loads((report / "results.json").read_text(encoding="utf-8"))
        found[name] = Made(report, results, page, words_of(page), pdf, " ".join(ran.stdout.split()))
    return found


@pytest.mark.parametrize("name", NAMES)
def test_the_script_gives_the_committed_rows(tmp_path, name):
    shutil.copy(EXAMPLES / name / "make_data.py", tmp_path)
    subprocess.run([sys.executable, str(tmp_path / "make_data.py")], check=True, timeout=120)
    assert (tmp_path / f"{name}.csv").read_bytes() == (EXAMPLES / name / f"{name}.csv").read_bytes()


# What each example was made for. More may be noticed; these must be.
SHOWS = {
    "wound-infection": {"MIS-dropped", "MIS-crude-adjusted-rows", "COD-sparse-level", "LIN-not-straight"},
    "readmission": {
        "SEL-p-values",
        "SIZ-riley",
        "SIZ-shrinkage",
        "VAL-few-events",
        "AUC-apparent",
        "VAL-none",
    },
    "harvest-supper": {"SEP-infinite", "OR-case-control-risk", "SML-hidden", "TAB-expected-small"},
}
SERIOUS = {
    "wound-infection": set[str](),
    "readmission": {"SEL-p-values", "SIZ-riley", "SIZ-shrinkage", "VAL-few-events", "AUC-apparent"},
    "harvest-supper": {"SEP-infinite"},
}


@pytest.mark.parametrize("name", NAMES)
def test_each_example_shows_what_it_is_for(made, name):
    assert SHOWS[name] <= made[name].findings
    assert made[name].serious == SERIOUS[name]
    for other in set(NAMES) - {name}:
        assert SHOWS[name] - made[other].findings, f"{other} shows all that {name} shows"


@pytest.mark.parametrize("name", NAMES)
def test_findings_stand_in_page_and_pdf_and_the_serious_ones_in_the_closing_lines(made, name):
    for finding in made[name].findings:
        assert finding in spaced(made[name].page_text)
        assert finding in spaced(made[name].pdf_text)
    for line in made[name].page_text.splitlines():
        assert "{{" not in line
        assert "Undefined" not in line
    assert ("Serious findings" in made[name].closing) == bool(SERIOUS[name])
    assert f"Findings: {len(SERIOUS[name])} serious" in made[name].closing


CAUTIONS = (
    "not for individual clinical decisions",
    "Association is not causation",
    "data-protection rules",
    "qualified statistician or clinician",
)


def spaced(text: str) -> str:
    """One line, with words that a line's end had divided at a hyphen whole again."""
    return " ".join(re.sub(r"-\s*\n\s*", "-", text).split())


@pytest.mark.parametrize("name", NAMES)
def test_every_format_carries_the_cautions(made, name):
    standing = spaced(wording.standing_caution("en"))
    assert made[name].closing.endswith(standing)
    for said in (made[name].closing, made[name].page_text, made[name].pdf_text):
        for caution in CAUTIONS:
            assert caution.lower() in spaced(said).lower()
    assert {
        "statistical-not-individual",
        "association-not-causation",
        "defer-to-local",
        "qualified-person",
    } <= set(made[name].results["cautions"])


def test_the_pdf_holds_the_results_and_the_description(made):
    for name in NAMES:
        with pikepdf.open(made[name].folder / "report.pdf") as pdf:
            held = {file: pdf.attachments[file].get_file().read_bytes() for file in pdf.attachments}
        assert held["results.json"] == (made[name].folder / "results.json").read_bytes()
        assert held[f"{name}.yaml"] == (EXAMPLES / name / f"{name}.yaml").read_bytes()


# The event as the sentences name it; a case-control study has no risk of it.
RISK_OF_EVENT = re.compile(
    r"\b(risks?|probability|proportion|prevalence|incidence)\s+of\s+(being\s+a\s+case|the\s+event|gastroenteritis|"
    r"illness|case)",
    re.IGNORECASE,
)


def test_the_case_control_study_prints_no_risk_and_holds_no_intercept(made):
    supper = made["harvest-supper"]
    for said in (supper.page_text, supper.pdf_text, supper.closing):
        assert not RISK_OF_EVENT.search(spaced(said))
    model = supper.results["model"]
    assert model["withheld"] == "sampled by outcome"
    assert "(intercept)" not in model["parameters"] + model["terms"]
    assert len(model["coefficients"]) == len(model["parameters"])
    assert model["covariance"] is None or len(model["covariance"]) == len(model["parameters"])
    assert "intercept" not in json.dumps(
        {key: part for key, part in supper.results.items() if key != "findings"}
    )
    assert supper.results["risk_distribution"] == []
    for table in supper.results["tables"]:
        for key in ("risk_exposed", "risk_unexposed", "risk_ratio", "risk_difference"):
            assert table[key] is None
    # The cohort has what the case-control study withholds.
    assert "(intercept)" in made["wound-infection"].results["model"]["parameters"]
    assert made["wound-infection"].results["risk_distribution"]
    assert made["wound-infection"].results["tables"][0]["risk_ratio"]["estimate"] > 1


def numbers(part: Any, key: str = "") -> Iterator[tuple[str, float]]:
    """Every number of a JSON tree with the key it stands under."""
    if isinstance(part, dict):
        for name, value in part.items():
            yield from numbers(value, name)
    elif isinstance(part, list):
        for value in part:
            yield from numbers(value, key)
    elif isinstance(part, int | float) and not isinstance(part, bool):
        yield key, part


def test_small_counts_of_the_supper_are_nowhere(made):
    with (EXAMPLES / "harvest-supper" / "harvest-supper.csv").open(encoding="utf-8") as file:
        rows = list(csv.DictReader(file, delimiter=";"))
    supper = made["harvest-supper"]
    # How many findings there are may happen to be the same number.
    closing = re.sub(r"Findings: [^.]*\.", "", supper.closing)
    for food, label in (("posset", "raw-milk posset"),):
        cells = Counter((row[food], row["status"]) for row in rows)
        small = [count for count in cells.values() if 0 < count < 5]
        assert small, "the example no longer has a small count"
        # The other case cell and the totals of the rows give the small one away by subtraction.
        cases = {cells[("yes", "case")], cells[("no", "case")]}
        totals = {cells[(eaten, "case")] + cells[(eaten, "control")] for eaten in ("yes", "no")}
        secret = cases | totals
        word = re.compile(r"(?<![\d.,])(" + "|".join(map(str, sorted(secret))) + r")(?![\d,%]|\.\d)")
        for said in (supper.page_text, supper.pdf_text, closing):
            about = [line for line in said.splitlines() if label in line]
            assert about
            for line in about:
                assert not word.search(line), line
        of_food = [
            *[table for table in supper.results["tables"] if table["exposure"] == food],
            *[row for row in supper.results["descriptives"]["by_outcome"]["rows"] if row["variable"] == food],
            *[
                row
                for part in ("crude", "adjusted")
                for row in supper.results["estimates"][part]
                if row["term"] == food
            ],
        ]
        assert len(of_food) == 4
        held = set(numbers(of_food))
        assert not {(key, value) for key, value in held if value in secret}, food
        for row in of_food[2:]:
            assert row["events"] is None
            assert row["total"] is None
        assert "fewer than 5" in supper.page_text
        assert "fewer than 5" in supper.pdf_text


def test_whole_counts_of_the_supper_appear_in_no_place_that_names_a_count(made):
    """By value alone, whatever it stands under: counts that only a hidden cell could give."""
    supper = made["harvest-supper"]
    parts = {
        key: part for key, part in supper.results.items() if key not in ("provenance", "format", "analysis")
    }
    counted = {"a", "b", "c", "d", "count", "events", "total", "n", "incomplete", "remaining"}
    assert not {(key, value) for key, value in numbers(parts) if key in counted and 0 < value < 5}
