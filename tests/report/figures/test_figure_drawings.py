"""Every figure: sound SVG, alternative texts with numbers, nothing hidden shown, extremes survived."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterator
from dataclasses import replace
from xml.etree import ElementTree

import pytest
from tests.report.figures import figure_samples as samples

from fourfold.report.figures import (
    calibration,
    flow,
    forest,
    odds_ratio_curve,
    outcome_by_quantity,
    palette,
    risk_distribution,
    roc,
    tile,
)
from fourfold.report.figures.figure import Figure, slug
from fourfold.results import tree

SVG = "{http://www.w3.org/2000/svg}"
NUMBER = re.compile(r"-?\d+(?:\.\d+)?(?:e[-+]?\d+)?")

FIGURES: dict[str, Callable[[], Figure | None]] = {
    "tile": lambda: tile.draw(samples.table(), samples.setting()),
    "rare tile": lambda: tile.draw(samples.table(2, 9000, 1, 70), samples.setting()),
    "flow": lambda: flow.draw(samples.participants(), samples.setting()),
    "hidden flow": lambda: flow.draw(samples.participants(True), samples.setting("case-control")),
    "forest": lambda: forest.draw(samples.estimates(), samples.setting()),
    "one exposure": lambda: forest.draw(
        tree.Estimates(adjusted=samples.estimates().adjusted[:1]), samples.setting()
    ),
    "extreme forest": lambda: forest.draw(samples.extreme_estimates(), samples.setting(confidence=99)),
    "roc": lambda: roc.draw(samples.discrimination(5000), samples.setting()),
    "calibration": lambda: calibration.draw(samples.calibration(), samples.risk_bins(), samples.setting()),
    "tiny calibration": lambda: calibration.draw(
        samples.calibration(0.001, hide=0), samples.risk_bins(0.001, True), samples.setting("survey")
    ),
    "risks": lambda: risk_distribution.draw(samples.risk_bins(), samples.setting()),
    "hidden risks": lambda: risk_distribution.draw(samples.risk_bins(hide=True), samples.setting()),
    "curve": lambda: odds_ratio_curve.draw(samples.odds_ratio_curve(n=900), samples.setting()),
    "steep curve": lambda: odds_ratio_curve.draw(samples.odds_ratio_curve(2.0), samples.setting()),
    "outcome": lambda: outcome_by_quantity.draw(samples.outcome_by_quantity(), samples.setting()),
    "outcome with people": lambda: outcome_by_quantity.draw(
        samples.outcome_by_quantity(9000, True), samples.setting("case-control")
    ),
}


@pytest.fixture(params=FIGURES)
def figure(request: pytest.FixtureRequest) -> Figure:
    drawn = FIGURES[request.param]()
    assert drawn is not None
    return drawn


def texts(svg: str) -> list[str]:
    return [element.text or "" for element in ElementTree.fromstring(svg).iter(f"{SVG}text")]


def path_numbers(svg: str, style: str) -> Iterator[list[float]]:
    for element in ElementTree.fromstring(svg).iter(f"{SVG}path"):
        if element.get("class") == palette.PREFIX + style:
            yield [float(one) for one in NUMBER.findall(element.get("d") or "")]


def test_is_well_formed_titled_and_lean(figure: Figure) -> None:
    root = ElementTree.fromstring(figure.svg)
    assert root.get("role") == "img"
    assert root[0].tag == f"{SVG}title"
    assert root[0].text == figure.alt
    assert len(figure.svg.encode()) < 30_000
    assert root.get("viewBox") == f"0 0 {root.get('width')} {root.get('height')}"


def test_every_number_is_finite_and_short(figure: Figure) -> None:
    allowed = set("MLHVZAhvlaz 0123456789.-")
    for element in ElementTree.fromstring(figure.svg).iter():
        for name, value in element.attrib.items():
            if name == "d":
                assert set(value) <= allowed
                assert all(len(one.partition(".")[2]) <= 2 for one in NUMBER.findall(value))
            elif name in ("x", "y", "width", "height", "cx", "cy", "r", "stroke-width"):
                assert math.isfinite(float(value))
    for words in [*texts(figure.svg), figure.alt, figure.caption, figure.title]:
        assert not re.search(r"\b(nan|None|inf|Infinity|Undefined)\b", words)


def test_marks_stay_inside_the_sheet(figure: Figure) -> None:
    root = ElementTree.fromstring(figure.svg)
    width, height = float(root.get("width", "0")), float(root.get("height", "0"))
    for element in root.iter(f"{SVG}text"):
        assert 0 <= float(element.get("x", "nan")) <= width
        assert 0 <= float(element.get("y", "nan")) <= height
    for element in root.iter(f"{SVG}path"):
        absolute = re.findall(r"[ML](-?[\d.]+) (-?[\d.]+)", element.get("d") or "")
        assert all(-4 <= float(x) <= width + 4 and -4 <= float(y) <= height + 4 for x, y in absolute)


def test_every_class_is_one_that_the_page_can_restyle(figure: Figure) -> None:
    classes = {element.get("class") for element in ElementTree.fromstring(figure.svg).iter()} - {None}
    assert classes <= {"ff-figure", *(palette.PREFIX + style for style in palette.STYLES)}


def test_words_are_whole_sentences_without_markup(figure: Figure) -> None:
    assert re.search(r"\d", figure.alt)
    for words in (figure.alt, figure.caption):
        assert words.endswith(".")
        assert "{" not in words
        assert "  " not in words
        assert " ." not in words
        assert " ," not in words
        assert ".." not in words.replace("…", "")
    assert not figure.title.endswith(".")


@pytest.mark.parametrize("name", FIGURES)
def test_the_same_input_gives_the_same_bytes(name: str) -> None:
    assert FIGURES[name]() == FIGURES[name]()


def test_flow_says_every_count_in_order() -> None:
    figure = flow.draw(samples.participants(), samples.setting())
    found = [int(number) for number in re.findall(r"\d+", figure.alt.replace("Under 18", ""))]
    assert found == [812, 74, 9, 12, 717, 44, 673, 106, 567]
    assert {"812", "74", "9", "12", "717", "44", "673", "106", "567"} <= set(texts(figure.svg))


def test_flow_hides_counts_by_words() -> None:
    figure = flow.draw(samples.participants(True), samples.setting())
    shown = texts(figure.svg)
    assert "fewer than 5" in shown
    assert "hidden" in shown
    assert "729" not in figure.svg + figure.alt
    assert "717" not in figure.svg + figure.alt
    assert "Under 18: fewer than 5" in figure.alt


def test_flow_without_exclusions_claims_none() -> None:
    plain = replace(samples.participants(), exclusions=[], incomplete=0)
    figure = flow.draw(plain, samples.setting())
    assert "Excluded" not in figure.svg + figure.alt
    assert "excludes no one" in figure.caption


def test_forest_places_estimates_on_a_log_axis() -> None:
    figure = forest.draw(samples.estimates(), samples.setting())
    assert figure is not None
    # Middles of the adjusted squares; the first, at the height of the key, is the key's own.
    squares = [x + side / 2 for x, _, side, *_ in path_numbers(figure.svg, "accent")][1:]
    told = [one.odds_ratio for one in samples.estimates().adjusted]
    logs = [math.log(one) for one in told if one is not None]
    slope = (squares[-1] - squares[0]) / (logs[-1] - logs[0])
    for x, log in zip(squares, logs, strict=True):
        assert x == pytest.approx(squares[0] + slope * (log - logs[0]), abs=0.05)


def test_forest_alternative_text_holds_every_estimate() -> None:
    figure = forest.draw(samples.estimates(), samples.setting())
    assert figure is not None
    for words in (
        "Current smoker: 1.84 (1.17 to 2.86)",
        "Age, per 10 years: 1.21 (1.02 to 1.44)",
        "Body-mass index, 33 against 27 kg/m2: 1.65 (1.16 to 2.37)",
        "ASA class, 4 against 1: 4.02 (0.91 to 15.20)",
        "95%",
    ):
        assert words in figure.alt
    assert texts(figure.svg).count("reference") == 1
    assert "Adjusted for; not effects of interest" in texts(figure.svg)


def test_forest_draws_separated_terms_as_their_bound_without_a_mark() -> None:
    one = samples.estimate("x", "Ate it", None, 3.4, None, role="exposure", note="separated upward")
    figure = forest.draw(tree.Estimates(adjusted=[one]), samples.setting())
    assert figure is not None
    assert "no finite estimate; at least 3.40" in figure.alt
    assert "A line without a square has no finite estimate" in figure.caption
    shapes = list(path_numbers(figure.svg, "accent"))
    # The key's square and one arrow head at the right; no square of an estimate.
    assert len(shapes) == 2
    lines = list(path_numbers(figure.svg, "accent-line"))
    assert shapes[1][0] > lines[0][2] - 1


def test_forest_draws_an_arrow_for_a_limit_beyond_the_axis() -> None:
    wide = samples.estimate("x", "Wide", 2.0, 0.0004, 9000.0, role="exposure")
    near = samples.estimate("x", "Near", 2.0, 1.2, 3.3, role="exposure")
    arrows = {}
    for name, one in (("wide", wide), ("near", near)):
        figure = forest.draw(tree.Estimates(adjusted=[one]), samples.setting())
        assert figure is not None
        arrows[name] = sum("v6z" in data.replace(" ", "") for data in re.findall(r'd="([^"]*)"', figure.svg))
    assert arrows == {"wide": 2, "near": 0}


def test_forest_with_more_rows_than_a_page_says_what_it_leaves_out() -> None:
    many = [samples.estimate(f"t{i}", f"Term {i}", 1.2, 0.9, 1.6) for i in range(70)]
    figure = forest.draw(tree.Estimates(adjusted=many), samples.setting())
    assert figure is not None
    assert f"{70 - forest.MOST_ROWS} further estimates stand in the table" in figure.caption
    assert len(figure.svg) < 40_000


def test_forest_never_marks_by_p_value() -> None:
    rows = samples.estimates()
    changed = tree.Estimates(
        crude=rows.crude, adjusted=[replace(one, p_value=0.0001 * i) for i, one in enumerate(rows.adjusted)]
    )
    assert forest.draw(rows, samples.setting()) == forest.draw(changed, samples.setting())


def test_roc_says_area_interval_and_landmarks() -> None:
    figure = roc.draw(samples.discrimination(), samples.setting())
    assert figure is not None
    assert "0.70" in figure.alt
    assert "0.65 to 0.75" in figure.alt
    # sensitivity = (1 - specificity) ** 0.42 by construction: 0.25 ** 0.42 = 0.559, 0.5 ** 0.42 = 0.747;
    # the nearest points of the curve at or above these specificities lie just below.
    assert "55% at a specificity of at least 75%" in figure.alt
    assert "74% at a specificity of at least 50%" in figure.alt
    assert "0.70 (95% CI 0.65 to 0.75)" in texts(figure.svg)


def test_roc_curve_never_leaves_its_data() -> None:
    figure = roc.draw(samples.discrimination(5000), samples.setting())
    assert figure is not None
    (numbers,) = path_numbers(figure.svg, "accent-line")
    points = list(zip(numbers[::2], numbers[1::2], strict=True))
    # Two hundred points of the results at most, and the two corners.
    assert len(points) <= 202
    for x, y in points:
        across, upward = (x - 44) / 270, (294 - y) / 270
        assert upward == pytest.approx(across**0.42, abs=1e-3 + 0.02 * (across < 0.001))


@pytest.mark.parametrize("curve", [0, 1])
def test_nothing_is_drawn_from_nothing(curve: int) -> None:
    setting = samples.setting()
    one = samples.odds_ratio_curve()
    assert odds_ratio_curve.draw(replace(one, curve=one.curve[:curve]), setting) is None
    found = samples.discrimination()
    assert roc.draw(replace(found, curve=found.curve[:curve]), setting) is None
    empty = replace(samples.calibration(), groups=[], curve=samples.calibration().curve[:curve])
    assert calibration.draw(empty, [], setting) is None
    assert risk_distribution.draw([], setting) is None
    by = samples.outcome_by_quantity()
    assert outcome_by_quantity.draw(replace(by, curve=by.curve[:curve], bins=[]), setting) is None
    assert forest.draw(tree.Estimates(), setting) is None


def test_calibration_says_each_group_and_skips_hidden_ones() -> None:
    figure = calibration.draw(samples.calibration(), samples.risk_bins(), samples.setting())
    hiding = calibration.draw(samples.calibration(hide=9), samples.risk_bins(), samples.setting())
    assert figure is not None
    assert hiding is not None
    # 30 of 67 = 44.8%; under 100 people, whole percentages.
    assert "44% and 45%" in figure.alt
    assert "in 10 groups" in figure.alt
    assert "in 9 groups" in hiding.alt
    assert "45%" not in hiding.alt
    assert "hidden" in hiding.caption
    circles = [len(list(path_numbers(one.svg, "point"))) for one in (figure, hiding)]
    assert circles[0] - circles[1] == 1


def test_calibration_on_fitting_data_says_so() -> None:
    own = calibration.draw(samples.calibration(), [], samples.setting())
    new = calibration.draw(samples.calibration(basis="new data"), [], samples.setting())
    assert own is not None
    assert new is not None
    assert "flatters" in own.caption
    assert "flatters" not in new.caption


def test_risk_bars_are_proportional_to_counts() -> None:
    bins = samples.risk_bins()
    figure = risk_distribution.draw(bins, samples.setting())
    assert figure is not None
    (numbers,) = path_numbers(figure.svg, "event")
    heights = [numbers[i + 1] - numbers[i + 3] for i in range(0, len(numbers), 5)]
    counts = [one.events for one in bins if one.events]
    assert len(heights) == len(counts)
    for height, count in zip(heights, counts, strict=True):
        assert height / max(heights) == pytest.approx(count / max(counts), abs=2e-4)


def test_hidden_risk_counts_have_marks_of_one_height() -> None:
    figure = risk_distribution.draw(samples.risk_bins(hide=True), samples.setting())
    assert figure is not None
    dotted = [e for e in ElementTree.fromstring(figure.svg).iter() if e.get("stroke-dasharray")]
    (numbers,) = (([float(n) for n in NUMBER.findall(e.get("d") or "")]) for e in dotted)
    heights = {round(numbers[i + 1] - numbers[i + 3], 2) for i in range(0, len(numbers), 5)}
    assert len(heights) == 1
    assert "hidden" in figure.caption
    assert "hidden" in figure.alt


def test_odds_ratio_curve_marks_reference_and_knots_and_says_numbers() -> None:
    one = samples.odds_ratio_curve()
    figure = odds_ratio_curve.draw(one, samples.setting())
    assert figure is not None
    assert "against 55 years" in figure.alt
    # At 18: exp(0.004 * -37 + 0.0009 * 37**2) = 2.96, limits times exp(-+ 0.012 * 37): 1.90 and 4.61.
    assert "2.96 (1.90 to 4.61) at 18" in figure.alt
    assert "reference 55 years" in texts(figure.svg)
    knots = [numbers for numbers in path_numbers(figure.svg, "rule") if len(numbers) == 3 * len(one.knots)]
    assert len(knots) == 1


def test_band_without_limits_is_left_out() -> None:
    one = samples.odds_ratio_curve()
    bare = replace(one, curve=[replace(point, lower=None, upper=None) for point in one.curve])
    figure = odds_ratio_curve.draw(bare, samples.setting())
    assert figure is not None
    assert not list(path_numbers(figure.svg, "band"))
    assert list(path_numbers(figure.svg, "accent-line"))


def test_people_are_drawn_only_where_the_results_hold_them() -> None:
    without = outcome_by_quantity.draw(samples.outcome_by_quantity(), samples.setting())
    few = outcome_by_quantity.draw(samples.outcome_by_quantity(40), samples.setting())
    assert without is not None
    assert few is not None
    assert "series-" not in without.svg
    assert "people" not in without.caption
    assert {f"series-{i}" for i in (1, 2, 3, 4)} <= set(re.findall(r"series-\d", few.svg))
    assert "Small marks are people" in few.caption
    assert {"East", "North", "South", "West"} <= set(texts(few.svg))


def test_hidden_bins_are_skipped() -> None:
    figure = outcome_by_quantity.draw(samples.outcome_by_quantity(hide=True), samples.setting())
    assert figure is not None
    assert "In 7 bins" in figure.alt
    assert "hidden" in figure.alt
    stale = samples.outcome_by_quantity()
    stale = replace(stale, bins=[replace(stale.bins[0], events=None), *stale.bins[1:]])
    again = outcome_by_quantity.draw(stale, samples.setting())
    assert again is not None
    assert "In 7 bins" in again.alt


@pytest.mark.parametrize("design", ["case-control"])
def test_case_control_figures_never_say_risk_or_prevalence(design: str) -> None:
    setting = samples.setting(design)
    for one in (
        flow.draw(samples.participants(), setting),
        roc.draw(samples.discrimination(), setting),
        outcome_by_quantity.draw(samples.outcome_by_quantity(), setting),
        forest.draw(samples.estimates(), setting),
    ):
        assert one is not None
        for words in (one.title, one.alt, one.caption, *texts(one.svg)):
            assert "prevalence" not in words.lower()
            assert "risk" not in words.lower()


@pytest.mark.parametrize("design", ["cross-sectional", "survey"])
def test_prevalence_takes_the_place_of_risk(design: str) -> None:
    figure = calibration.draw(samples.calibration(), samples.risk_bins(), samples.setting(design))
    assert figure is not None
    assert "Fitted prevalence" in texts(figure.svg)
    assert "risk" not in " ".join([figure.alt, figure.caption, *texts(figure.svg)])


def test_anchors_are_safe_and_different_for_different_names() -> None:
    assert slug("tile", "smoker") == "tile-smoker"
    names = ["a b", "a-b", "A b", "é", "è", "", "'><script>", "a" * 200, "a" * 201]
    anchors = [slug("tile", name) for name in names]
    assert len(set(anchors)) == len(names)
    assert all(re.fullmatch(r"[a-z0-9-]+", anchor) for anchor in anchors)
