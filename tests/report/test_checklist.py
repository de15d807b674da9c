"""Reporting checklists: every item, where it is answered, and never a score."""

from __future__ import annotations

from dataclasses import replace

import pytest
from tests.report import sample

from fourfold.report import assets, checklist
from fourfold.report.checklist import Item
from fourfold.report.page import SECTIONS
from fourfold.report.writer import Writer
from fourfold.results import tree

# Numbering of the published statements: STROBE (von Elm et al. 2007), 22 items, and TRIPOD+AI
# (Collins et al. 2024), 27 items with sub-items. Item 14c concerns cohorts, 6b matched designs.
STROBE = [
    "1a", "1b", "2", "3", "4", "5", "6a", "6b", "7", "8", "9", "10", "11", "12a", "12b", "12c", "12d",
    "12e", "13a", "13b", "13c", "14a", "14b", "14c", "15", "16a", "16b", "16c", "17", "18", "19", "20",
    "21", "22",
]  # fmt: skip
TRIPOD = [
    "1", "2", "3a", "3b", "3c", "4", "5a", "5b", "6a", "6b", "6c", "7", "8a", "8b", "8c", "9a", "9b",
    "9c", "10", "11", "12a", "12b", "12c", "12d", "12e", "12f", "12g", "13", "14", "15", "16", "17",
    "18a", "18b", "18c", "18d", "18e", "18f", "19", "20a", "20b", "20c", "21", "22", "23a", "23b", "24",
    "25", "26", "27a", "27b", "27c",
]  # fmt: skip


def items(results: tree.Results) -> dict[str, Item]:
    return {item.item: item for item in checklist.checklist(Writer.of(results)).items}


def test_association_follows_strobe_and_prediction_tripod():
    assert checklist.checklist(Writer.of(sample.cohort())).name == "STROBE"
    assert list(items(sample.cohort())) == STROBE
    assert checklist.checklist(Writer.of(sample.prediction())).name == "TRIPOD+AI"
    assert list(items(sample.prediction())) == TRIPOD


def test_items_follow_the_design():
    case_control, cross_sectional = items(sample.case_control()), items(sample.cross_sectional())
    assert "14c" not in case_control
    assert "6b" not in cross_sectional
    assert "controls selected" in case_control["6a"].asks
    assert "sampling" in cross_sectional["12d"].asks
    survey = replace(sample.cohort(), study=replace(sample.cohort().study, design="survey"))
    assert {number: item.asks for number, item in items(survey).items()} == {
        number: item.asks for number, item in cross_sectional.items()
    }


@pytest.mark.parametrize("name", ["cohort", "case_control", "cross_sectional", "prediction", "hidden"])
def test_every_item_is_answered_stated_or_to_write(name):
    for item in items(getattr(sample, name)()).values():
        assert item.answered or item.stated or item.to_write, item.item
        assert {place.section for place in item.answered} <= set(SECTIONS)


def test_what_the_description_states_is_quoted():
    found = items(sample.cohort())
    assert found["22"].stated == ["No external funding (invented example)"]
    assert found["22"].to_write is None
    assert found["5"].stated == ["Two maternity units", "2019-01-01 to 2020-12-31"]
    assert found["5"].to_write is None
    bare = replace(sample.cohort(), study=replace(sample.cohort().study, setting=None, stated={}))
    assert items(bare)["22"].to_write == "Write the funding and its role."
    assert items(bare)["5"].to_write is not None


def test_only_the_author_can_write_interpretation():
    for number in ("2", "3", "9", "20", "21"):
        item = items(sample.cohort())[number]
        assert not item.answered
        assert item.to_write


def test_reasons_for_adjustment_count_only_when_all_are_stated():
    assert items(sample.cohort())["16a"].to_write == "Write why each covariate was adjusted for."
    reasoned = replace(
        sample.cohort(),
        variables=[replace(one, reason="Known to matter") for one in sample.cohort().variables],
    )
    assert items(reasoned)["16a"].to_write is None


def test_no_risk_is_asked_of_a_case_control_study():
    item = items(sample.case_control())["16c"]
    assert [place.statement for place in item.answered] == [
        "No risk can be computed from a case-control study."
    ]
    assert item.to_write is None


def test_the_equation_is_claimed_only_where_it_is_whole():
    assert items(sample.prediction())["22"].answered[0].statement is None
    from_cases = replace(
        sample.case_control(), study=replace(sample.case_control().study, purpose="prediction")
    )
    # Item 22 of this sample carries a stated answer for STROBE; without it the intercept is missed.
    bare = replace(from_cases, study=replace(from_cases.study, stated={}))
    assert "The intercept is withheld" in str(items(bare)["22"].answered[0].statement)


@pytest.mark.parametrize("name", ["checklist-strobe", "checklist-tripod"])
def test_files_use_known_words_only(name):
    known = {"item", "asks", "run", "none", "told", "author", "author_unless"}
    for entry in assets.language_file("en", name)["items"]:
        assert set(entry) <= known, entry["item"]
        assert isinstance(entry["item"], str), entry["item"]
