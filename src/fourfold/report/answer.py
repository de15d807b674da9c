"""The Answer: the estimate, its interval, how far to trust it, and what is seriously wrong."""

from __future__ import annotations

from fourfold.report import cells
from fourfold.report.comparisons import comparison, holds_one, interval, is_hidden, p_phrase, ratio
from fourfold.report.writer import Writer
from fourfold.results import tree

SAME_FROM, SAME_TO = 0.95, 1.05
"""Odds ratios that one decimal prints as 1.0: no "1.0 times as high"."""


def answer(writer: Writer) -> list[str]:
    """The Answer's sentences, plain text; serious findings are listed beside them."""
    return _prediction(writer) if writer.prediction else _association(writer)


def trust(writer: Writer) -> str:
    """The sentence that leads to the list of serious findings, and counts the concerns."""
    serious = sum(found.grade == "serious" for found in writer.results.findings)
    if serious == 0:
        return writer.say("answer.trust.none")
    return writer.say("answer.trust.one" if serious == 1 else "answer.trust.many", n=serious)


def concerns(writer: Writer) -> str | None:
    """How many findings of concern wait under Findings."""
    found = sum(finding.grade == "concern" for finding in writer.results.findings)
    if found == 0:
        return None
    return writer.say(f"answer.trust.concerns.{'one' if found == 1 else 'many'}", n=found)


def _association(writer: Writer) -> list[str]:
    sentences: list[str] = []
    exposures = writer.of_role("exposure")
    for exposure in exposures:
        sentences += _exposure(writer, exposure)
    # With several exposures the shares stand in the fourfold tables: an answer stays short.
    absolute = _absolute(writer, exposures[0]) if len(exposures) == 1 else None
    if absolute:
        sentences.append(absolute)
    sentences.append(_basis(writer, len(exposures)))
    return sentences


def _exposure(writer: Writer, exposure: tree.Variable) -> list[str]:
    estimates = writer.estimates(exposure.name)
    if len(estimates) > 1 and exposure.kind in ("category", "ordered"):
        return [_levels(writer, exposure, estimates)]
    return [_estimate(writer, estimate) for estimate in estimates]


def _estimate(writer: Writer, estimate: tree.Estimate) -> str:
    named = comparison(writer, estimate)
    event = writer.event_phrase()
    if is_hidden(estimate):
        return writer.say("answer.exposure.hidden", comparison=named)
    if estimate.odds_ratio is None:
        direction = (estimate.note or "").removeprefix("separated").strip()
        bound = {"upward": estimate.lower, "downward": estimate.upper}.get(direction)
        return writer.say(
            f"answer.exposure.separated.{direction if bound is not None else 'none'}",
            comparison=named,
            event=event,
            confidence=writer.confidence,
            bound=None if bound is None else writer.numbers.odds_ratio(bound),
        )
    same = SAME_FROM < estimate.odds_ratio < SAME_TO
    return writer.say(
        "answer.exposure.unchanged" if same else "answer.exposure.times",
        comparison=named,
        event=event,
        confidence=writer.confidence,
        times=_times(writer, estimate.odds_ratio),
        ratio=ratio(writer, estimate),
        interval=interval(writer, estimate),
        p=p_phrase(writer, estimate.p_value),
        compatible=_compatible(writer, estimate),
    )


def _times(writer: Writer, value: float) -> str:
    if value < 1:
        return writer.numbers.odds_ratio(value)
    return writer.numbers.number(value, 1 if value < 10 else 0)


def _levels(writer: Writer, exposure: tree.Variable, estimates: list[tree.Estimate]) -> str:
    listed = []
    for estimate in estimates:
        if is_hidden(estimate):
            listed.append(f"{writer.say('labels.hidden.word')} ({estimate.level})")
        elif estimate.odds_ratio is None:
            listed.append(writer.say("answer.exposure.one_separated", level=estimate.level))
        else:
            listed.append(
                writer.say(
                    "answer.exposure.one_of_several",
                    ratio=ratio(writer, estimate),
                    interval=interval(writer, estimate),
                    level=estimate.level,
                )
            )
    test = writer.joint_test(exposure.name)
    return writer.say(
        "answer.exposure.several",
        label=exposure.label,
        reference=exposure.reference,
        event=writer.event_phrase(),
        listed=listed,
        confidence=writer.confidence,
        p=p_phrase(writer, test.p_value) if test else None,
    )


def _absolute(writer: Writer, exposure: tree.Variable) -> str | None:
    """The two shares with the event, where the design gives them and nothing is hidden."""
    for table in writer.results.tables:
        if table.exposure != exposure.name or writer.share == "none":
            continue
        if table.a is None or table.b is None or table.c is None or table.d is None:
            return None
        first = cells.share(writer, table.a, table.a + table.b).text
        second = cells.share(writer, table.c, table.c + table.d).text
        return writer.say(
            f"answer.absolute.{writer.share}",
            first=_of(writer, first, table.a + table.b),
            second=_of(writer, second, table.c + table.d),
            exposed=table.exposed_label,
            unexposed=table.unexposed_label,
        )
    return None


def _of(writer: Writer, share: str, total: int) -> str:
    count, _, percent = share.partition(" ")
    return writer.say(
        "labels.joining.count_of", count=count, total=writer.numbers.count(total), percent=percent
    )


def _compatible(writer: Writer, estimate: tree.Estimate) -> str:
    """What an interval that holds 1 is compatible with; empty for any other."""
    if not holds_one(estimate):
        return ""
    limit, like = writer.numbers.limit, estimate.odds_ratio
    return writer.say(
        "answer.exposure.compatible",
        lower=None if estimate.lower is None else limit(estimate.lower, like),
        upper=None if estimate.upper is None else limit(estimate.upper, like),
    )


def _basis(writer: Writer, exposures: int) -> str:
    participants = writer.results.participants
    size = writer.results.sample_size
    per_parameter = size.events_per_parameter if size is not None else None
    hidden = participants.hidden
    return writer.say(
        "answer.basis.association",
        exposures=exposures,
        n=writer.numbers.count(participants.analysed, hidden.get("analysed")),
        events=writer.numbers.count(participants.events, hidden.get("events")),
        case_control=writer.case_control,
        covariates=[writer.inline(found.name) for found in writer.of_role("covariate")],
        incomplete=(
            writer.numbers.count(participants.incomplete, hidden.get("incomplete"))
            if participants.incomplete != 0
            else None
        ),
        eligible=(None if participants.eligible is None else writer.numbers.count(participants.eligible)),
        per_parameter=None if per_parameter is None else writer.numbers.number(per_parameter, 1),
    )


def _prediction(writer: Writer) -> list[str]:
    participants, found = writer.results.participants, writer.results.discrimination
    n = writer.numbers.count(participants.analysed, participants.hidden.get("analysed"))
    events = writer.numbers.count(participants.events, participants.hidden.get("events"))
    sentences = []
    if found is None or found.auc is None:
        sentences.append(
            writer.say(
                "answer.prediction.performance_hidden", n=n, events=events, event=writer.event_phrase()
            )
        )
    else:
        sentences.append(
            writer.say(
                "answer.prediction.performance" + ("_case_control" if writer.case_control else ""),
                n=n,
                events=events,
                event=writer.event_phrase(),
                pairs=writer.numbers.percent(100 * found.auc),
                auc=cells.area(writer, found, 2),
            )
        )
    size = writer.results.sample_size
    shrinkage = size.shrinkage if size is not None else None
    sentences.append(
        writer.say(
            "answer.prediction.apparent",
            shrinkage=writer.numbers.number(shrinkage, 2)
            if shrinkage is not None and shrinkage < 1
            else None,
        )
    )
    if size is not None and size.required is not None and size.shortfall is not None:
        sentences.append(
            writer.say(
                f"answer.prediction.size.{'short' if size.shortfall > 0 else 'enough'}",
                required=writer.numbers.count(size.required),
                n=n,
                shortfall=writer.numbers.count(size.shortfall),
            )
        )
    return sentences
