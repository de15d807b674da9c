"""What the authors' own words claim: causes, risks, verdicts by P. The words looked for are English."""

from __future__ import annotations

import re
from collections.abc import Iterator

from fourfold.findings.entry import CONCERN, Entry, Noticed
from fourfold.results import tree

_CAUSAL = re.compile(
    r"\b(?<!side )(?<!adverse )effects? of\b|\bimpact of\b|\bcaus(?:al|ation)\b|\bcaused by\b"
    r"|\bcauses of\b(?! death)"
    r"|\b(?:leads?|leading|led) to\b|\bresults? in\b|\bprevent(?:s|ed|ing)\b|\bprotects?\b|\bprotective\b"
    r"|\battributable to\b|\b(?:reduc|increas|lower|rais)es (?:the )?(?:risk|odds)\b",
    re.IGNORECASE,
)
# A label names a thing; only what states a cause outright is looked for there.
_CAUSAL_IN_LABEL = re.compile(
    r"\b(?<!side )(?<!adverse )effects? of\b|\bcaused by\b|\bprotective\b|\bharmful\b", re.IGNORECASE
)
_RISK = re.compile(
    r"\brelative risks?\b|\brisk ratios?\b|\babsolute risks?\b"
    r"|\b(?:times|twice|half|fold) (?:as|more|less) likely\b|\b(?:more|less) likely\b|\blikelier\b",
    re.IGNORECASE,
)
_ZERO = re.compile(r"\bp(?:[- ]?values?)?\s*(?:=|of|was|is)\s*0?\.0+(?!\d)", re.IGNORECASE)
_VERDICT = re.compile(
    r"\b(?:statistically |non-?|in)significan(?:t|ce|tly)\b|\bnot (?:statistically )?significant\b"
    r"|\b(?:trend(?:ed|ing)?|approach(?:ed|ing)?) (?:towards? )?significance\b|\bp\s*[<>]\s*0?\.05\b",
    re.IGNORECASE,
)


def _prose(results: tree.Results) -> Iterator[tuple[str, str]]:
    """Where the authors wrote something in sentences, and what."""
    yield "title", results.study.title
    for item, text in results.study.stated.items():
        yield f"item {item}", text


def _quoted(pattern: re.Pattern[str], texts: Iterator[tuple[str, str]]) -> list[dict[str, str]]:
    return [
        {"where": where, "words": found.group()} for where, text in texts if (found := pattern.search(text))
    ]


def risk_words(results: tree.Results) -> list[dict[str, str]]:
    """Words that speak of risks or likelihoods where only odds were estimated."""
    return _quoted(_RISK, _prose(results))


def causal_words(results: tree.Results) -> Noticed | None:
    labels = ((variable.label, variable.label) for variable in results.variables)
    found = [*_quoted(_CAUSAL, _prose(results)), *_quoted(_CAUSAL_IN_LABEL, labels)]
    return Noticed(CONCERN, {"found": found}) if found else None


def p_zero(results: tree.Results) -> Noticed | None:
    found = _quoted(_ZERO, _prose(results))
    return Noticed(CONCERN, {"found": found}) if found else None


def p_threshold(results: tree.Results) -> Noticed | None:
    found = _quoted(_VERDICT, _prose(results))
    return Noticed(CONCERN, {"found": found}) if found else None


ENTRIES = (
    Entry(
        id="CAU-words",
        section="results",
        source="STROBE item 20 (Vandenbroucke et al. 2007, PLoS Med 4:e297); "
        "Haber et al. 2022, Am J Epidemiol 191:2084-97",
        rule=causal_words,
    ),
    Entry(
        id="P-zero",
        section="results",
        source="SAMPL guidelines (Lang & Altman 2015, Int J Nurs Stud 52:5-9)",
        rule=p_zero,
    ),
    Entry(
        id="P-threshold",
        section="results",
        source="Wasserstein & Lazar 2016, Am Stat 70:129-33",
        rule=p_threshold,
    ),
)
