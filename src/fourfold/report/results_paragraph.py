"""The results in sentences ready for a manuscript."""

from __future__ import annotations

from fourfold.report import cells
from fourfold.report.comparisons import (
    comparison,
    covariate_labels,
    interval,
    is_hidden,
    p_phrase,
    ratio,
)
from fourfold.report.writer import Writer
from fourfold.results import tree

STRAIGHT_FROM = 0.05
"""P of the test of non-linearity from which no departure is said to show; the P is printed beside."""


def results_paragraph(writer: Writer) -> list[str]:
    """Sentences on the flow, the leading estimates and the model."""
    sentences = _flow(writer)
    if not writer.prediction:
        for exposure in writer.of_role("exposure"):
            sentences += _exposure(writer, exposure)
    return [*sentences, *_trust(writer)]


def _flow(writer: Writer) -> list[str]:
    flow, say, numbers = writer.results.participants, writer.say, writer.numbers

    def count(name: str) -> str:
        value: int | None = getattr(flow, name)
        return numbers.count(value, flow.hidden.get(name))

    def share(part: int | None, whole: int | None) -> str | None:
        if part is None or not whole:
            return None
        return numbers.percent(100 * part / whole, whole) or None

    # Where a column of counts says so, the numbers are of people, not of rows of the file.
    people = writer.results.analysis.counts_variable is not None
    if flow.exclusions:
        excluded = [exclusion.count for exclusion in flow.exclusions]
        known = [value for value in excluded if value is not None]
        total = sum(known) if len(known) == len(excluded) else None
        reasons = [
            say(
                "results.flow.reason",
                reason=writer.words.inline(exclusion.reason),
                count=numbers.count(exclusion.count, exclusion.hidden.get("count")),
            )
            for exclusion in flow.exclusions
        ]
        first = say(
            "results.flow.read",
            read=count("read"),
            people=people,
            reasons=reasons,
            excluded=numbers.count(total, None if total is not None else "derived"),
        )
    else:
        first = say("results.flow.read_none_excluded", read=count("read"), people=people)
    second = say(
        "results.flow.complete" if flow.incomplete == 0 else "results.flow.incomplete",
        eligible=count("eligible"),
        incomplete=count("incomplete"),
        share=share(flow.incomplete, flow.eligible),
    )
    third = say(
        f"results.flow.analysed.{writer.share}",
        n=count("analysed"),
        events=count("events"),
        non_events=count("non_events"),
        share=share(flow.events, flow.analysed),
        outcome=writer.inline(writer.outcome.name),
    )
    return [first, second, third]


def _exposure(writer: Writer, exposure: tree.Variable) -> list[str]:
    sentences = [_estimate(writer, crude, adjusted) for crude, adjusted in writer.pairs(exposure.name)]
    test = writer.joint_test(exposure.name, "non-linearity")
    if test is not None and test.p_value is not None:
        sentences.append(
            writer.say(
                "results.exposure.non_linearity",
                label=writer.inline(exposure.name),
                df=test.df,
                straight=test.p_value >= STRAIGHT_FROM,
                p=writer.numbers.p_phrase(test.p_value),
            )
        )
    return sentences


def _estimate(writer: Writer, crude: tree.Estimate | None, adjusted: tree.Estimate) -> str:
    named = comparison(writer, adjusted)
    if is_hidden(adjusted):
        return writer.say("results.exposure.hidden", comparison=named)
    if adjusted.odds_ratio is None:
        bound = adjusted.lower if adjusted.lower is not None else adjusted.upper
        return writer.say(
            "results.exposure.separated",
            comparison=named,
            confidence=writer.confidence,
            bound=None if bound is None else writer.numbers.odds_ratio(bound),
        )
    others = len(writer.of_role("exposure", "covariate")) > 1
    with_crude = others and crude is not None and crude.odds_ratio is not None
    key = "both" if with_crude else "crude_only"
    if others and crude is not None and is_hidden(crude):
        key = "hidden_crude"
    also = [writer.inline(found.name) for found in writer.of_role("exposure") if found.name != adjusted.term]
    return writer.say(
        f"results.exposure.{key}",
        comparison=named,
        event=writer.event_phrase(),
        confidence=writer.confidence,
        crude=ratio(writer, crude) if with_crude and crude is not None else None,
        crude_interval=interval(writer, crude) if with_crude and crude is not None else None,
        adjusted=ratio(writer, adjusted),
        adjusted_interval=interval(writer, adjusted),
        p=p_phrase(writer, adjusted.p_value),
        covariates=[*also, *covariate_labels(writer)],
    )


def _trust(writer: Writer) -> list[str]:
    found, calibration, numbers = writer.results.discrimination, writer.results.calibration, writer.numbers
    sentences = []
    if found is not None and found.auc is not None:
        brier = calibration.brier if calibration is not None else None
        sentences.append(
            writer.say(
                f"results.trust.{'auc_case_control' if writer.case_control else 'auc'}",
                auc=cells.area(writer, found, 2),
                brier=None if brier is None else numbers.number(brier, 3),
            )
        )
    test = calibration.hosmer_lemeshow if calibration is not None else None
    if test is not None and test.statistic is not None and test.df is not None and test.verdict is None:
        sentences.append(
            writer.say(
                "results.trust.hosmer_lemeshow",
                groups=test.groups,
                df=test.df,
                statistic=numbers.number(test.statistic, 2),
                p=numbers.p_phrase(test.p_value),
            )
        )
    if writer.prediction and not writer.case_control:
        sentences.append(writer.say("results.trust.equation"))
    return sentences
