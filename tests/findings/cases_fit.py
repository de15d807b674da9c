"""Cases of findings about the fit, shapes, size, collinearity and influence."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

from tests.findings import alter
from tests.findings.alter import prediction
from tests.findings.trees import Case, sound_study

from fourfold.results import tree


def separated(
    term: str, note: str, events: int, total: int, kind: str = "quasi-complete", **limits: Any
) -> tree.Results:
    results = alter.adjusted(
        term,
        note=note,
        log_odds_ratio=None,
        odds_ratio=None,
        standard_error=None,
        p_value=0.001,
        events=events,
        total=total,
        **{"lower": None, "upper": None, **limits},
    )
    names = [name for name in results.model.parameters if name.startswith(term)]
    return replace(results, model=replace(results.model, separation=kind, separated=names))


def unexposed_without_event() -> tree.Results:
    results = separated("stove", "separated upward", 190, 1200, lower=3.2)
    levels = [
        replace(one, events=0) if one.variable == "stove" and one.reference else one
        for one in results.audit.levels
    ]
    return replace(results, audit=replace(results.audit, levels=levels))


def settled_curve() -> tree.Results:
    """A curve is separated: its estimate has no direction."""
    return separated("age", "separated", 360, 3000)


def complete() -> tree.Results:
    return separated("stove", "separated", 190, 190, kind="complete")


def limits(b: float, error: float, lower: float, upper: float, **changes: Any) -> tree.Results:
    """The stove's log odds ratio with its profile limits on the log scale."""
    fields: dict[str, Any] = {
        "log_odds_ratio": b,
        "standard_error": error,
        "odds_ratio": math.exp(b),
        "lower": math.exp(lower),
        "upper": math.exp(upper),
    }
    return alter.adjusted("stove", **{**fields, **changes})


def strong(b: float, error: float, ratio_p: float, **changes: Any) -> tree.Results:
    return alter.adjusted(
        "stove",
        log_odds_ratio=b,
        standard_error=error,
        odds_ratio=math.exp(b),
        p_value=ratio_p,
        lower=math.exp(b - 1.96 * error),
        upper=math.exp(b + 1.96 * error),
        **changes,
    )


def wald(events: int) -> tree.Results:
    level = tree.SparseLevel(variable="village", level="Far", events=events, non_events=90, reference=False)
    results = alter.analysis(intervals="Wald")
    return replace(results, audit=tree.Audit(levels=[*results.audit.levels, level]))


def interval(lower: float | None, upper: float | None) -> tree.Results:
    return alter.adjusted("stove", lower=lower, upper=upper)


def non_linear(p: float, shape: str = "spline") -> tree.Results:
    results = alter.variable("age", shape=shape)
    tests = [replace(one, p_value=p) for one in results.term_tests]
    return replace(results, term_tests=tests)


def straight(shape: str = "linear") -> tree.Results:
    return replace(alter.variable("age", shape=shape, per=10.0), term_tests=[])


def curve_at(reference: float) -> tree.Results:
    curve = tree.OddsRatioCurve(
        term="age", label="Age", unit="years", shape="spline", reference=reference, knots=[], curve=[]
    )
    return replace(sound_study(), curves=[curve])


def short(required: int, assumed: bool = False) -> tree.Results:
    criteria = [
        tree.SampleSizeCriterion(id=name, required=size, shortfall=max(0, size - 3000))
        for name, size in (("c1", required), ("c2", 400), ("c3", 300), ("c4", 500))
    ]
    return prediction(
        alter.size(required=required, shortfall=required - 3000, criteria=criteria, r_squared_assumed=assumed)
    )


def collinear(term: str, scaled: float) -> tree.Results:
    gvif = [tree.Gvif(term=term, label=term, df=1, gvif=scaled**2, scaled=scaled)]
    return replace(sound_study(), collinearity=tree.Collinearity(gvif=gvif, condition_index=9.0))


def conditioned(index: float, shared: list[str]) -> tree.Results:
    found = tree.Collinearity(gvif=[], condition_index=index, shared_terms=shared)
    return replace(sound_study(), collinearity=found)


def one_person(change: float | None, crosses: bool) -> tree.Results:
    term = tree.InfluenceTerm(
        parameter="stove",
        term="stove",
        largest_change=change,
        largest_change_refitted=change,
        crosses_one=crosses,
    )
    results = sound_study()
    assert results.influence is not None
    return replace(results, influence=replace(results.influence, terms=[term]))


def without(**parts: Any) -> tree.Results:
    return replace(sound_study(), **parts)


CASES = {
    "SEP-infinite": Case(
        [
            (lambda: separated("stove", "separated upward", 40, 40, lower=7.5), "serious"),
            (lambda: separated("stove", "separated downward", 0, 1, upper=0.8), "serious"),
            (unexposed_without_event, "serious"),
            (lambda: separated("village", "separated downward", 0, 31, upper=0.6), "concern"),
            (settled_curve, "concern"),
            (lambda: alter.model(separation="quasi-complete", separated=["age", "age (2)"]), "concern"),
        ],
        [sound_study, complete],
    ),
    "SEP-complete": Case(
        [(complete, "serious")],
        [sound_study, lambda: separated("stove", "separated upward", 40, 40, lower=7.5)],
    ),
    "EST-not-converged": Case(
        [(lambda: alter.model(converged=False, iterations=25), "serious")], [sound_study]
    ),
    # The profile and Wald limits of `smoke` in Hosmer and Lemeshow's birth-weight data (0.1496018 to
    # 1.7307739 against 0.9233492 -+ 1.96 x 0.4008583, base R) differ by 3% of the distance: silence.
    "EST-wald-profile-differ": Case(
        [
            (lambda: limits(1.0, 0.5, -0.3, 1.98), "concern"),
            (lambda: limits(1.0, 0.5, 0.02, 2.3, interval="profile likelihood"), "concern"),
        ],
        [
            sound_study,
            lambda: limits(0.923349157, 0.400858315, 0.1496018, 1.7307739),
            lambda: limits(1.0, 0.5, -0.3, 1.98, interval="Wald"),
        ],
    ),
    # Wald P of 4.0 / 1.6 is 0.0124 (normal tables): twelve times 0.001, once 0.0124.
    "EST-hauck-donner": Case(
        [(lambda: strong(4.0, 1.6, 0.001), "remark")],
        [
            sound_study,
            lambda: strong(4.0, 1.6, 0.002),
            lambda: strong(2.9, 1.6, 0.0001),
            # Both far below anything that could mislead.
            lambda: strong(4.0, 0.4, 1e-30),
            lambda: strong(4.0, 1.6, 0.001, test="Wald"),
        ],
    ),
    "EST-wald-sparse": Case([(lambda: wald(9), "concern")], [sound_study, lambda: wald(10)]),
    "LIN-not-straight": Case(
        [
            (lambda: non_linear(0.049), "remark"),
            (lambda: non_linear(0.001, "linear"), "concern"),
            (lambda: non_linear(0.001, "log2"), "concern"),
        ],
        [sound_study, lambda: non_linear(0.05), lambda: non_linear(0.3, "linear")],
    ),
    "LIN-unassessed": Case(
        [(straight, "remark"), (lambda: straight("log2"), "remark")],
        [sound_study, lambda: non_linear(0.3, "linear")],
    ),
    "EXT-range": Case(
        [
            (lambda: alter.adjusted("age", contrast=[40.0, 99.0]), "concern"),
            (lambda: alter.adjusted("age", contrast=[10.0, 99.0]), "concern"),
            (lambda: curve_at(0.0), "concern"),
        ],
        [sound_study, lambda: alter.adjusted("age", contrast=[18.0, 95.0]), lambda: curve_at(50.0)],
    ),
    "SIZ-epp": Case(
        [
            (lambda: alter.size(events_per_parameter=9.9), "concern"),
            (lambda: alter.size(events_per_parameter=5.0), "concern"),
            (lambda: alter.size(events_per_parameter=4.9), "serious"),
            (lambda: alter.size(events_per_parameter=4.0, candidate_parameters=1), "serious"),
        ],
        [
            sound_study,
            lambda: alter.size(events_per_parameter=10.0),
            lambda: alter.size(events_per_parameter=None),
        ],
    ),
    "SIZ-riley": Case(
        [(lambda: short(3200), "concern"), (lambda: short(6001, assumed=True), "serious")],
        [
            sound_study,
            prediction,
            # The criteria are for prediction models.
            lambda: alter.size(required=9000, shortfall=6000),
        ],
    ),
    # van Houwelingen and le Cessie 1990: (LR - p) / LR, 0.9 wanted.
    "SIZ-shrinkage": Case(
        [
            (lambda: prediction(alter.size(shrinkage=0.89)), "concern"),
            (lambda: prediction(alter.size(shrinkage=0.79)), "serious"),
            (lambda: prediction(alter.size(shrinkage=-0.2)), "serious"),
            (lambda: alter.size(shrinkage=0.79), "remark"),
        ],
        [
            sound_study,
            lambda: prediction(alter.size(shrinkage=0.9)),
            lambda: alter.size(shrinkage=0.85),
            # No association to speak of: the factor is small in samples of any size.
            lambda: replace(alter.size(shrinkage=-0.5), model=alter.model(likelihood_ratio_p=0.4).model),
            lambda: alter.size(shrinkage=None),
        ],
    ),
    # The square root of 5 is 2.236.
    "COL-gvif": Case(
        [(lambda: collinear("stove", 2.24), "concern"), (lambda: collinear("age", 2.24), "remark")],
        [sound_study, lambda: collinear("stove", 2.23), lambda: without(collinearity=None)],
    ),
    "COL-condition": Case(
        [
            (lambda: conditioned(31.0, ["stove", "age"]), "concern"),
            (lambda: conditioned(31.0, ["age", "village"]), "remark"),
        ],
        # High, but of a single term's own columns.
        [sound_study, lambda: conditioned(29.0, ["stove", "age"]), lambda: conditioned(60.0, [])],
    ),
    "INF-one-row": Case(
        [
            (lambda: one_person(-0.4, True), "serious"),
            (lambda: one_person(None, True), "serious"),
            (lambda: prediction(one_person(0.4, True)), "concern"),
            (lambda: one_person(0.1, True), "concern"),
            (lambda: one_person(0.51, False), "concern"),
            (lambda: one_person(0.21, False), "remark"),
        ],
        [sound_study, lambda: one_person(0.2, False), lambda: without(influence=None)],
    ),
}
