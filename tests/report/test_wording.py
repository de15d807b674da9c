"""Sentences: true to the results, by design, with labels of any grammar."""

from __future__ import annotations

from dataclasses import replace

import pytest
from tests.report import sample

from fourfold.report import answer, methods, results_paragraph, wording
from fourfold.report.citations import Citations
from fourfold.report.cleaned import cleaned, visible
from fourfold.report.words import capital, in_sentence
from fourfold.report.writer import Writer
from fourfold.results import tree


def answered(results: tree.Results) -> str:
    return " ".join(answer.answer(Writer.of(results)))


def told(results: tree.Results) -> str:
    return " ".join(results_paragraph.results_paragraph(Writer.of(results)))


def described(results: tree.Results) -> dict[str, str]:
    writer = Writer.of(results)
    citations = Citations(writer.words)
    return {one.id: citations.plain(one.text) for one in methods.methods(writer)}


def with_smoke(results: tree.Results, **changes: object) -> tree.Results:
    def changed(found: list[tree.Estimate]) -> list[tree.Estimate]:
        return [replace(one, **changes) if one.term == "smoke" else one for one in found]

    return replace(
        results,
        estimates=tree.Estimates(
            crude=changed(results.estimates.crude), adjusted=changed(results.estimates.adjusted)
        ),
    )


def test_answer_of_a_cohort():
    # Estimate, limits and P: birthwt.json. Shares: 30/74 and 29/115 counted in birthwt.csv.
    assert answer.answer(Writer.of(sample.cohort())) == [
        "Mother smoked (yes against no): the odds of low birth weight were 2.5 times as high "
        "(adjusted odds ratio 2.52, 95% CI 1.16 to 5.64; P = 0.02).",
        "Before adjustment the event occurred in 30 of 74 (41%) with “yes” and 29 of 115 (25.2%) with “no”.",
        "The estimate rests on 189 participants, 59 with the event, and 7.4 events for each parameter; "
        "it is adjusted for mother’s age, mother’s weight, group, earlier preterm labours, "
        "history of hypertension and uterine irritability; 7 of 196 eligible were left out for a missing "
        "value.",
    ]


def test_answer_of_a_case_control_study_speaks_of_cases_and_no_risk():
    text = answered(sample.case_control())
    assert "the odds of being a case were 2.5 times as high" in text
    assert "59 of them cases" in text
    assert "Before adjustment" not in text
    assert "risk" not in text


def test_an_interval_that_holds_one_is_not_called_no_association():
    # Common practice after the ASA statement of 2016: compatible with no association, and with more.
    text = answered(with_smoke(sample.cohort(), odds_ratio=1.4, lower=0.7, upper=2.8, p_value=0.34))
    assert "which is compatible with no association and with odds ratios from 0.70 to 2.80." in text
    assert "significant" not in text
    assert "compatible with no association" not in answered(sample.cohort())


def test_an_odds_ratio_of_one_is_not_worded_as_times():
    text = answered(with_smoke(sample.cohort(), odds_ratio=1.02, lower=0.7, upper=1.5, p_value=0.9))
    assert "the odds of low birth weight were about the same (adjusted odds ratio 1.02" in text
    assert "times as high" not in text


@pytest.mark.parametrize(("value", "times"), [(0.42, "0.42"), (2.5177, "2.5"), (13.02, "13"), (2.0, "2.0")])
def test_times_are_written_as_one_says_them(value, times):
    text = answered(with_smoke(sample.cohort(), odds_ratio=value, lower=value / 1.2, upper=value * 1.2))
    assert f"the odds of low birth weight were {times} times as high" in text


@pytest.mark.parametrize(
    ("note", "lower", "upper", "words"),
    [
        ("separated upward", 2.31, None, "were at least 2.31 times as high (95% limit)"),
        ("separated downward", None, 0.42, "were at most 0.42 times as high (95% limit)"),
        ("separated", None, None, "no finite odds ratio of low birth weight exists"),
    ],
)
def test_separation_in_words(note, lower, upper, words):
    results = with_smoke(sample.cohort(), note=note, odds_ratio=None, lower=lower, upper=upper)
    assert words in answered(results)
    assert "no finite odds ratio" in told(results)


def test_several_levels_stand_in_one_sentence():
    results = sample.cohort()
    roles = {"race": "exposure", "smoke": "covariate"}
    results = replace(
        results, variables=[replace(one, role=roles.get(one.name, one.role)) for one in results.variables]
    )
    # birthwt.json: black 3.5368 (1.2638 to 10.1256), other 2.3670 (1.0127 to 5.7244); joint P 0.0254.
    assert answer.answer(Writer.of(results))[0] == (
        "Group, against white: adjusted odds ratios of low birth weight were 3.54 (1.26 to 10.13) for black "
        "and 2.37 (1.01 to 5.72) for other (95% CI in brackets; joint test P = 0.03)."
    )


def test_several_exposures_are_each_adjusted_for_the_others():
    results = sample.cohort()
    results = replace(
        results,
        variables=[replace(one, role="exposure") if one.name == "ht" else one for one in results.variables],
    )
    text = answered(results)
    assert "History of hypertension (yes against no): the odds of low birth weight were 6.3 times" in text
    assert "The estimates rest on" in text
    assert "each is adjusted for the other exposures and for mother’s age" in text
    assert "after adjustment for history of hypertension, mother’s age" in told(results)


def test_answer_of_a_prediction_study():
    # Area .746 (.666 to .813), shrinkage .759: birthwt.json.
    text = answered(sample.prediction())
    assert "in 75% of pairs: AUC 0.75 (95% CI 0.67 to 0.81)." in text
    assert "heuristic shrinkage factor of 0.76" in text
    assert "ask for 536 participants" in text
    assert "falls short by 347" in text


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"auc": 1.0, "lower": 0.95, "upper": None}, "AUC 1.00 (95% bound: at least 0.95)"),
        ({"lower": None, "upper": None}, "AUC 0.75."),
        ({"auc": None, "hidden": {"auc": "derived"}}, "its discrimination is hidden"),
    ],
)
def test_area_without_a_whole_interval(changes, words):
    results = sample.prediction()
    assert results.discrimination is not None
    assert words in answered(replace(results, discrimination=replace(results.discrimination, **changes)))


def finding(grade: str) -> tree.Finding:
    return tree.Finding(id="X", grade=grade, section="trust", values={}, source="")


def test_trust_counts_the_serious_findings_and_the_concerns():
    def words(*grades: str) -> tuple[str, str | None]:
        writer = Writer.of(replace(sample.cohort(), findings=[finding(grade) for grade in grades]))
        return answer.trust(writer), answer.concerns(writer)

    assert words() == ("No serious finding was noticed, which does not prove that there is none.", None)
    assert words("serious", "remark")[0] == "One serious finding limits how far this can be trusted:"
    assert words("serious", "serious", "concern") == (
        "2 serious findings limit how far this can be trusted:",
        "One finding of concern is listed under Findings.",
    )


def test_results_paragraph_of_a_cohort():
    assert told(sample.cohort()) == (
        "Of 214 rows read, 18 were excluded (twin birth, 11; born abroad, 7). Of the 196 eligible, 7 "
        "(3.6%) lacked a value of the outcome or of a variable in the model. 189 participants were "
        "analysed, of whom 59 (31.2%) had the event, low birth weight. Mother smoked (yes against no)"
        " was associated with an odds ratio for low birth weight of 2.02 (95% CI 1.08 to 3.80) in the"
        " crude analysis and of 2.52 (95% CI 1.16 to 5.64; P = 0.02) after adjustment for mother’s "
        "age, mother’s weight, group, earlier preterm labours, history of hypertension and uterine "
        "irritability. On the fitting data the area under the ROC curve was 0.75 (95% CI 0.67 to "
        "0.81) and the Brier score 0.179. The Hosmer-Lemeshow statistic over 10 groups was 10.40 on 8"
        " df (P = 0.24)."
    )


def test_hosmer_lemeshow_without_a_verdict_is_not_quoted():
    results = sample.cohort()
    assert results.calibration is not None
    assert results.calibration.hosmer_lemeshow is not None
    test = replace(results.calibration.hosmer_lemeshow, verdict="thin groups")
    text = told(replace(results, calibration=replace(results.calibration, hosmer_lemeshow=test)))
    assert "Hosmer-Lemeshow" not in text


def test_methods_say_what_was_run():
    text = described(sample.cohort())
    assert text["design"].startswith(
        "This was a cohort study (Two maternity units), from 2019-01-01 to 2020-12-31."
    )
    assert "Exclusions were applied in this order: twin birth and born abroad." in text["design"]
    assert "Follow-up was stated to be equal." in text["design"]
    assert "Group was compared with the level white, the most frequent." in text["variables"]
    assert "mother’s age (older mothers smoke less)" in text["variables"]
    assert "95% profile-likelihood intervals [1]" in text["model"]
    assert "there was none" in text["model"]
    assert "complete cases" in text["missing"]
    assert "tenths of fitted risk" in text["assessment"]
    assert "Reporting follows STROBE" in text["assessment"]
    assert "Fourfold 0.1.0 on Python 3.11.2 (numpy 2.4.0 and scipy 1.17.0)" in text["software"]


def test_methods_follow_the_choices():
    results = sample.cohort()
    wald = replace(
        results, analysis=replace(results.analysis, intervals="Wald", confidence=90.0, selection="stepwise")
    )
    assert "90% Wald intervals" in described(wald)["model"]
    assert "profile" not in described(wald)["model"]
    assert "stepwise procedure on the same data" in described(wald)["variables"]
    assert "quasi-complete" in described(sample.separated())["model"]
    assert "the intercept reflects the sampling and is withheld" in described(sample.case_control())["model"]
    assert "Risks" not in described(sample.case_control())["measures"]
    assert "Prevalences" in described(sample.cross_sectional())["measures"]
    assert "TRIPOD+AI" in described(sample.prediction())["assessment"]
    whole = replace(results, participants=replace(results.participants, incomplete=0))
    assert "No eligible participant had a missing value" in described(whole)["missing"]
    nothing_hidden = replace(results, analysis=replace(results.analysis, smallest_count=0))
    assert described(nothing_hidden)["disclosure"] == "No count is hidden."


def test_references_are_numbered_as_they_come():
    writer = Writer.of(sample.shaped())
    citations = Citations(writer.words)
    texts = [citations.plain(one.text) for one in methods.methods(writer)]
    assert [number for number, _ in citations.references] == list(range(1, len(citations.references) + 1))
    assert "spline with knots at 94.4, 115, 130.2 and 188.2 pounds [1]" in " ".join(texts)
    assert citations.references[0][1].startswith("Harrell FE.")
    assert "\ue000" not in " ".join(texts)


def test_citation_links_escape_the_words_around_them():
    citations = Citations(Writer.of(sample.cohort()).words)
    linked = citations.linked("<b> \ue000harrell2015\ue001 &")
    assert linked == ('&lt;b&gt; <span class="cite"> [<a href="#reference-1">1</a>]</span> &amp;')


@pytest.mark.parametrize(
    ("label", "inside"),
    [
        ("Current smoker", "current smoker"),
        ("ASA class", "ASA class"),
        ("BMI", "BMI"),
        ("Body-mass index", "body-mass index"),
        ("Crohn's disease", "Crohn's disease"),
        ("Mother’s age", "mother’s age"),
        ("pH of blood", "pH of blood"),
        ("HbA1c", "HbA1c"),
        ("B", "B"),
        ("", ""),
    ],
)
def test_labels_inside_sentences(label, inside):
    assert in_sentence("en", label) == inside


def test_capital_of_nothing_is_nothing():
    assert capital("") == ""
    assert capital("überall") == "Überall"


def test_deceptive_characters_become_visible_everywhere():
    # Unicode's bidirectional controls: U+202A to U+202E and U+2066 to U+2069.
    assert visible("a\u202eb\u2066c\x1b[31m") == "a⟨U+202E⟩b⟨U+2066⟩c⟨U+001B⟩[31m"
    assert visible("\x00d\re\r\nf") == "⟨U+0000⟩d⟨U+000D⟩e\nf"
    assert visible("Größe\u00a0≥ 5 µg\n\tx") == "Größe\u00a0≥ 5 µg\n\tx"
    assert visible("\ud800") == "⟨U+D800⟩"
    results = replace(sample.cohort(), cautions=["\u202e"])
    assert cleaned(results).cautions == ["⟨U+202E⟩"]
    assert cleaned(sample.cohort()) == sample.cohort()


def test_command_line_says_the_same_sentences():
    assert wording.answer_sentences(sample.cohort()) == answer.answer(Writer.of(sample.cohort()))
    assert "not for individual clinical decisions" in wording.standing_caution()


def test_values_of_a_finding_may_have_any_name():
    words = Writer.of(sample.cohort()).words
    assert words.fill("{{ key }} {{ template }} {{ self_ }}", key=1, template=2, self_=3) == "1 2 3"
