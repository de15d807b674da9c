"""What a drawn figure is, and what every figure must be told about its study."""

from __future__ import annotations

import hashlib
import re
from dataclasses import dataclass
from typing import Any

from fourfold.report.figures.canvas import clean
from fourfold.report.words import Words
from fourfold.results import tree


@dataclass(frozen=True, slots=True)
class Figure:
    """A finished figure.

    Attributes
    ----------
    id : str
        Unique in a report; fit for an anchor.
    title : str
        A few words, without a full stop.
    svg : str
        One SVG element, its ``<title>`` being ``alt``.
    alt : str
        What it shows, in numbers; plain text, not escaped.
    caption : str
        How to read it; plain text, not escaped.
    """

    id: str
    title: str
    svg: str
    alt: str
    caption: str


@dataclass(frozen=True, slots=True)
class Setting:
    """What a figure needs to know beside its data.

    Attributes
    ----------
    words : Words
        The language, with the study's rounding and hiding rules.
    design : str
        Decides the words: risk, prevalence, or neither.
    confidence : float
        Of the intervals, in percent.
    outcome : str
        Label of the outcome.
    """

    words: Words
    design: str = "cohort"
    confidence: float = 95.0
    outcome: str = ""

    @classmethod
    def of(cls, results: tree.Results, words: Words) -> Setting:
        """Take the setting from the results of a study."""
        outcome = next((variable.label for variable in results.variables if variable.role == "outcome"), "")
        return cls(words, results.study.design, results.analysis.confidence, outcome)

    def say(self, key: str, **values: Any) -> str:
        """Give the text at ``key`` of figures.yaml, told the words of the design and the confidence."""
        said = self.words.say(
            f"figures.{key}",
            design=self.words.entry(f"figures.designs.{self.design}"),
            outcome=self.outcome,
            confidence=f"{self.confidence:g}",
            **values,
        )
        return clean(said)

    def share(self, count: int | None, of: int | None) -> str:
        """Write a share of counted people: in percent, or as counts where they are too few for it."""
        numbers = self.words.numbers
        if count is None or not of:
            return numbers.count(None, "derived")
        return numbers.percent(100 * count / of, of) or self.say("few", n=count, of=of)


def slug(*names: str) -> str:
    """Make an anchor from names that come from outside; different names give different anchors."""
    joined = "-".join(names)
    plain = re.sub(r"[^a-z0-9]+", "-", joined.lower()).strip("-")[:48].strip("-")
    if plain == joined:
        return plain
    digest = hashlib.sha256("\x1f".join(names).encode("utf-8", "surrogatepass")).hexdigest()[:6]
    return f"{plain}-{digest}" if plain else digest
