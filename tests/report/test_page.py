"""The page: order, words by design, tables, hidden and separated values, escaping, repeatability."""

from __future__ import annotations

import base64
import hashlib
import os
import re
import subprocess
import sys
from dataclasses import replace
from functools import cache
from pathlib import Path

import jinja2
import pytest
from tests.report import sample
from tests.report.page_reading import Reading, read

from fourfold.errors import RenderingError
from fourfold.report import build, html, page
from fourfold.report.tables.participants import characteristics
from fourfold.report.writer import Writer
from fourfold.results import json_file, tree

SAMPLES = ("cohort", "prediction", "case_control", "cross_sectional", "separated", "hidden", "shaped")


@cache
def rendered(name: str) -> bytes:
    results: tree.Results = getattr(sample, name)()
    return build.render(results, ["html"]).files["report.html"]


@cache
def reading(name: str) -> Reading:
    return read(rendered(name))


def test_sections_stand_in_the_order_of_a_report():
    # Order as readers of such reports expect it: answer, who, results, trust, how, what was noticed.
    assert list(reading("cohort").sections) == [
        "answer", "participants", "results", "other", "trust", "methods", "sentences", "findings",
        "checklist", "cautions", "provenance",
    ]  # fmt: skip


@pytest.mark.parametrize("name", SAMPLES)
def test_every_link_leads_to_a_place_on_the_page(name):
    found = reading(name)
    assert len(found.ids) == len(set(found.ids))
    assert found.links
    assert {link for link in found.links if not link.startswith("#")} == set()
    assert {link[1:] for link in found.links} <= set(found.ids)


@pytest.mark.parametrize("name", SAMPLES)
def test_page_is_whole_in_itself(name):
    found = reading(name)
    assert "script" not in found.tags
    assert {tag for tag in found.tags if tag in ("link", "iframe", "img", "object", "embed", "form")} == set()
    loading = {
        (tag, attr) for tag, attr, value in found.attributes if attr in ("src", "srcset", "action", "style")
    }
    assert loading == set()
    addresses = re.findall(rb"url\([^)]{0,40}", rendered(name))
    assert addresses
    assert all(address.startswith(b'url("data:font/woff2;base64,') for address in addresses)


def test_policy_allows_the_style_sheet_of_the_page_and_nothing_else():
    # The hash is that of the Content Security Policy standard: SHA-256 of the element's text, base64.
    style = re.search(rb"<style>(.*?)</style>", rendered("cohort"), re.DOTALL)
    assert style is not None
    digest = base64.b64encode(hashlib.sha256(style.group(1)).digest()).decode()
    policy = next(value for tag, name, value in reading("cohort").attributes if "default-src" in value)
    assert policy == (
        f"default-src 'none'; style-src 'sha256-{digest}'; font-src data:; img-src data:; "
        "base-uri 'none'; form-action 'none'"
    )


def test_exposure_leads_and_covariates_stand_apart():
    tables = reading("cohort").tables
    # birthwt.json: adjusted odds ratio of smoke 2.5177 (1.1614 to 5.6448), likelihood-ratio P 0.01914;
    # crude 2.0219, profile limits in `crude`; events / total counted from birthwt.csv.
    assert tables["table-exposures"] == [
        ["", "Events / total", "Crude odds ratio (95% CI)", "Adjusted odds ratio (95% CI)", "P"],
        ["Mother smoked", "", "", "", ""],
        ["no", "29 / 115", "reference", "reference", ""],
        ["yes", "30 / 74", "2.02 (1.08 to 3.80)", "2.52 (1.16 to 5.64)", "0.02"],
    ]
    covariates = [row[0] for row in tables["table-covariates"]]
    assert covariates[1:3] == ["Mother’s age, per 5 years", "Mother’s weight, per 10 pounds"]
    assert "Mother smoked" not in covariates
    group = next(row for row in tables["table-covariates"] if row[0].startswith("Group"))
    # Joint likelihood-ratio test of race, birthwt.json: 7.344 on 2 df, P 0.0254.
    assert group == ["Group joint test, 2 df", "", "", "", "0.03"]
    text = reading("cohort").sections["results"]
    assert text.index("Odds ratios of the exposure") < text.index("is not the covariate’s effect")


def test_fourfold_table_gives_risks_where_the_design_has_them():
    # birthwt.json `fourfold_smoke`: Wilson, Woolf, Newcombe, chi-squared, Fisher.
    assert reading("cohort").tables["table-fourfold-1"] == [
        ["Mother smoked", "With the event", "Without it", "Total", "Risk (95% CI)"],
        ["yes", "30", "44", "74", "41% (30% to 52%)"],
        ["no", "29", "86", "115", "25.2% (18.2% to 33.9%)"],
        ["Total", "59", "130", "189", ""],
    ]
    text = reading("cohort").sections["results"]
    assert "Odds ratio (95% CI)\n2.02 (1.08 to 3.78)" in text
    assert "Risk ratio (95% CI)\n1.61 (1.06 to 2.44)" in text
    assert "Risk difference, percentage points (95% CI)\n15.3 (1.8 to 28.7)" in text
    assert "Chi-squared, 1 df\n4.92, P = 0.03" in text
    assert "Fisher’s exact test, P\n0.04" in text


def test_case_control_prints_no_risk():
    found = reading("case_control")
    assert found.tables["table-fourfold-1"] == [
        ["Mother smoked", "Cases", "Controls", "Total"],
        ["yes", "30", "44", "74"],
        ["no", "29", "86", "115"],
        ["Total", "59", "130", "189"],
    ]
    for id in ("answer", "participants", "other", "sentences"):
        assert "risk" not in found.sections[id].lower(), id
    results = found.sections["results"]
    assert "Risk ratio" not in results
    assert "Risk difference" not in results
    # The one sentence with the word says that there is none.
    assert [line for line in results.splitlines() if "risk" in line.lower()] == [
        "Cases and controls were sampled apart: these data give odds ratios, "
        "and no risk can be computed from them."
    ]
    assert "the intercept reflects the sampling and is withheld" in found.sections["trust"]
    assert "checks of fit in the sample" in found.sections["trust"]
    assert "Brier score" not in [row[0] for row in found.tables["table-performance"]]
    assert "Fitted risk" not in found.text


def test_cross_sectional_says_prevalence():
    found = reading("cross_sectional")
    assert found.tables["table-fourfold-1"][0][-1] == "Prevalence (95% CI)"
    assert "Prevalence ratio (95% CI)" in found.sections["results"]
    assert "Risk ratio" not in found.sections["results"]
    assert "the prevalence of low birth weight among them was 59 (31.2%)" in found.sections["sentences"]


def test_odds_are_never_worded_as_risks():
    lead = reading("cohort").sections["answer"]
    assert "the odds of low birth weight were 2.5 times as high" in lead
    assert "times as likely" not in reading("cohort").text


def test_separated_term_has_a_bound_and_a_reason():
    found = reading("separated")
    row = found.tables["table-exposures"][-1]
    assert row[2:4] == ["no finite estimate; at least 2.31 (95% limit)"] * 2
    assert (
        "Mother smoked: no finite estimate exists, because nobody in the reference group had the event."
        in (found.sections["results"])
    )
    assert "no finite odds ratio exists" in found.sections["answer"]
    assert "at least 2.31 times as high" in found.sections["answer"]


def test_hidden_values_are_named_as_hidden_and_explained():
    found = reading("hidden")
    assert found.tables["table-exposures"][2:] == [
        ["no", "hidden / hidden", "reference", "reference", ""],
        ["yes", "fewer than 5 / hidden", "hidden", "2.52 (1.16 to 5.64)", "0.02"],
    ]
    assert found.tables["table-fourfold-1"][1] == ["yes", "fewer than 5", "hidden", "hidden", "hidden"]
    note = "“Fewer than 5” and “hidden” stand for numbers that are withheld"
    assert note in found.sections["results"]
    assert note not in reading("cohort").text
    # The crude odds ratio gives its counts away, so no sentence may say it either.
    assert "2.02" not in found.text
    assert "the crude odds ratio is hidden" in found.sections["sentences"]


def test_prediction_leads_with_performance_and_gives_the_whole_equation():
    found = reading("prediction")
    text = found.sections["results"]
    assert text.index("Area under the ROC curve") < text.index("The equation")
    table = found.tables["table-equation"]
    # birthwt.json: intercept 0.464403283, age -0.027069779, both with standard errors.
    assert table[1] == ["Intercept", "always 1", "0.46440", "1.20470"]
    assert table[2] == ["Mother’s age", "value in years", "−0.027070", "0.036453"]
    assert [row[0] for row in table[4:6]] == ["Group: black", "Group: other"]
    assert len(table) == 10
    assert "1 / (1 + exp(−L))" in text
    assert "table-covariates" not in found.tables


def test_prediction_from_cases_and_controls_withholds_the_intercept():
    results = sample.case_control()
    roles = [
        replace(one, role="predictor") if one.role in ("exposure", "covariate") else one
        for one in results.variables
    ]
    results = replace(results, variables=roles, study=replace(results.study, purpose="prediction"))
    found = read(build.render(results, ["html"]).files["report.html"])
    assert "Intercept" not in [row[0] for row in found.tables["table-equation"]]
    assert "they give no probability" in found.sections["results"]


def test_shaped_quantity_shows_contrasts_and_curve():
    found = reading("shaped")
    header = next(row[0] for row in found.tables["table-covariates"] if row[0].startswith("Mother’s weight"))
    assert header.startswith("Mother’s weight, spline with 4 knots")
    # Odds ratio of 110 against 130 pounds: birthwt.json `spline_lwt`, 4 knots.
    pick = next(one for one in sample.CASE["spline_lwt"][1]["curve"] if one["value"] == 110)
    row = next(row for row in found.tables["table-covariates"] if row[0] == "110 against 130 pounds")
    assert row[3].startswith(f"{pick['odds_ratio']:.2f} ({pick['lower']:.2f} to {pick['upper']:.2f}")
    assert "departure from a straight line" in [row[1] for row in found.tables["table-term-tests"]]


LEVELS = ["white", "<img src=x onerror=alert(2)>", "other"]


def hostile() -> tree.Results:
    """A study whose every word comes from somebody who wishes the reader ill."""
    script = "<script>alert(1)</script>"
    template = "{{ 7 * 191 }}{% for x in y %}{# c #}"
    results = sample.cohort()
    long = "Verylong" * 250
    changed = {
        "low": f"Event {script} & “quotes” ' \" > <b>bold</b>",
        "smoke": f"Smoked {template} \u202eesrever\u202c",
        "lwt": long,
        "race": "</table></div></section><style>*{display:none}</style>",
    }
    variables = [
        replace(one, label=changed.get(one.name, one.label),
                levels=[*LEVELS] if one.name == "race" else one.levels)
        for one in results.variables
    ]  # fmt: skip

    def relabelled(estimates: list[tree.Estimate]) -> list[tree.Estimate]:
        return [
            replace(one, label=changed.get(one.term, one.label),
                    level="<img src=x onerror=alert(2)>" if one.level == "black" else one.level)
            for one in estimates
        ]  # fmt: skip

    return replace(
        results,
        study=replace(results.study, title=f"{script} {template} \ue002 \ue003 {long} \x00\x07",
                      setting="javascript:alert(3)", authors=["<a href=//x.example>x</a>"]),
        variables=variables,
        estimates=tree.Estimates(crude=relabelled(results.estimates.crude),
                                 adjusted=relabelled(results.estimates.adjusted)),
        tables=[replace(results.tables[0], label=changed["smoke"])],
        provenance=replace(results.provenance, description=f"{script}\n{template}\n\u202e\n</pre></main>"),
        outcome_by_quantity=[replace(one, label=changed["lwt"]) for one in results.outcome_by_quantity],
    )  # fmt: skip


def test_words_from_outside_are_text_and_nothing_else():
    content = build.render(hostile(), ["html"]).files["report.html"]
    found, plain = read(content), read(rendered("cohort"))
    # The markup is the program's own: the same elements, whatever the words say.
    for tag in ("script", "img", "b", "style", "table", "section", "a"):
        assert found.tags.count(tag) == plain.tags.count(tag), tag
    assert list(found.sections) == list(plain.sections)
    assert "<script>alert(1)</script>" in found.text
    assert "{{ 7 * 191 }}{% for x in y %}{# c #}" in found.text
    assert "1337" not in found.text
    # Direction overrides and control characters are shown as their code point, never obeyed.
    assert "⟨U+202E⟩esrever⟨U+202C⟩" in found.text
    assert "⟨U+0000⟩⟨U+0007⟩" in found.text
    assert not re.search("[\x00-\x08\x0b-\x1f\u202a-\u202e\u2066-\u2069\ue000-\uf8ff]", content.decode())
    assert any(value.startswith("default-src 'none'") for _, _, value in found.attributes)


def test_missing_value_of_a_template_is_an_error_and_never_a_blank(monkeypatch):
    words = Writer.of(sample.cohort()).words
    with pytest.raises(jinja2.UndefinedError):
        words.say("labels.captions.fourfold", label="x")
    with pytest.raises(KeyError):
        words.say("labels.captions.nothing")
    with pytest.raises(KeyError):
        words.say("labels.captions")
    content = page.page(Writer.of(sample.cohort()))
    monkeypatch.setattr(html, "SECTIONS", (*html.SECTIONS, "nowhere"))
    with pytest.raises(KeyError):
        html.html(content)


def test_same_results_give_the_same_bytes_in_another_process(tmp_path):
    program = (
        "import sys; sys.path.insert(0, sys.argv[1]); from tests.report import sample; import hashlib\n"
        "from fourfold.report import build\n"
        "print(hashlib.sha256(build.render(sample.shaped(), ['html']).files['report.html']).hexdigest())"
    )
    digests = {hashlib.sha256(rendered("shaped")).hexdigest()}
    for seed in ("1", "2"):
        environment = {**os.environ, "PYTHONHASHSEED": seed, "TZ": "Pacific/Auckland", "LC_ALL": "C"}
        run = subprocess.run(
            [sys.executable, "-c", program, str(Path(__file__).parents[2])],
            env=environment, cwd=tmp_path, capture_output=True, text=True, check=True,
        )  # fmt: skip
        digests.add(run.stdout.strip())
    assert len(digests) == 1


@pytest.mark.parametrize("name", ["shaped", "hidden", "separated"])
def test_saved_results_render_to_the_same_bytes(name):
    saved = json_file.dumps(getattr(sample, name)())
    assert build.render(json_file.loads(saved), ["html"]).files["report.html"] == rendered(name)


def test_hidden_group_sizes_are_explained_too():
    results = sample.cohort()
    found = results.descriptives.by_outcome
    assert found is not None
    veiled = replace(found, group_sizes=[None, 130], hidden={"group_sizes": "small"})
    table = characteristics(Writer.of(results), veiled, "x")
    assert table.headings[1].text == "Overall (n\u00a0=\u00a0hidden)"
    assert table.headings[2].text == "With the event (n\u00a0=\u00a0fewer than 5)"
    assert "stand for numbers that are withheld" in table.notes[-1]


def test_a_language_that_is_not_there_is_refused():
    results = sample.cohort()
    with pytest.raises(RenderingError, match="language 'xx'"):
        build.render(replace(results, analysis=replace(results.analysis, language="xx")), ["html"])


def test_unknown_format_is_refused():
    with pytest.raises(RenderingError, match="Unknown report format: docx"):
        build.render(sample.cohort(), ["html", "docx"])


def test_tables_name_their_rows_and_columns():
    found = reading("cohort")
    scopes = [value for tag, name, value in found.attributes if tag == "th" and name == "scope"]
    assert scopes.count("col") > 10
    assert scopes.count("row") > 50
    assert found.tags.count("th") == len(scopes)
    assert found.tags.count("caption") == found.tags.count("table")
    assert ("html", "lang", "en") in found.attributes
    assert {"header", "nav", "main", "footer"} <= set(found.tags)
    assert found.links[0] == "#report"


@pytest.mark.parametrize("name", SAMPLES)
def test_columns_fill_the_table_and_no_more(name):
    # Layout is fixed: columns that add up to more than the table would run over the margin.
    content = page.page(Writer.of(getattr(sample, name)()))
    found = content.tables
    every = [
        *found.characteristics, found.missing, found.patterns, found.leading, found.covariates,
        found.term_tests, found.crude_rows, found.equation, found.performance, found.hosmer_lemeshow,
        found.sample_size, found.influence, found.collinearity, *(block.table for block in found.fourfold),
    ]  # fmt: skip
    for table in every:
        if table is not None:
            assert 92 <= sum(table.widths) <= 100, table.id
            assert all(len(row.cells) == len(table.headings) - 1 for row in table.rows), table.id
