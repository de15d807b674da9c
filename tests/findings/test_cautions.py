"""Standing cautions: in every report, by design and purpose, with words, and in CAUTIONS.md."""

from __future__ import annotations

from pathlib import Path

import pytest

from fourfold.findings import cautions
from fourfold.report.assets import language_file

DESIGNS = ("cohort", "case-control", "cross-sectional", "survey")
PURPOSES = ("association", "prediction")


@pytest.mark.parametrize("design", DESIGNS)
@pytest.mark.parametrize("purpose", PURPOSES)
def test_the_usual_cautions_come_first_in_every_report(design: str, purpose: str):
    found = cautions.for_study(design, purpose)
    assert found[:4] == [
        "statistical-not-individual", "association-not-causation", "defer-to-local", "qualified-person",
    ]  # fmt: skip
    assert len(found) == len(set(found))


def test_design_and_purpose_add_their_own():
    assert "case-control-no-risk" in cautions.for_study("case-control", "association")
    assert "odds-not-risk" not in cautions.for_study("case-control", "association")
    assert "cross-sectional-no-order" in cautions.for_study("survey", "association")
    assert "prediction-not-validated" in cautions.for_study("cohort", "prediction")
    assert "prediction-not-validated" not in cautions.for_study("cohort", "association")


def test_each_has_words_and_none_is_spare():
    words = language_file("en", "cautions")
    assert set(words) == set(cautions.all_ids())
    for entry in words.values():
        assert {"title", "short", "text"} == set(entry)
        assert len(entry["short"]) < 90 < len(entry["text"])
        assert entry["text"].strip().endswith(".")


def test_the_cautions_file_says_every_one_in_full():
    page = " ".join((Path(__file__).parents[2] / "CAUTIONS.md").read_text(encoding="utf-8").split())
    for entry in language_file("en", "cautions").values():
        assert f"**{entry['title']}.** {' '.join(entry['text'].split())}" in page
