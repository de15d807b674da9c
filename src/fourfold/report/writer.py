"""What every part of the report writes with: the results, their numbers and their words."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from fourfold.report.assets import language_file
from fourfold.report.cleaned import cleaned
from fourfold.report.numbers import Numbers
from fourfold.report.words import Words
from fourfold.results import tree

RISK_DESIGNS = ("cohort",)
PREVALENCE_DESIGNS = ("cross-sectional", "survey")


@dataclass(frozen=True)
class Writer:
    """Results of one study with the language they are told in.

    Everything a reader will see passes through ``numbers`` (rounding, hiding) and ``words``.
    """

    results: tree.Results
    numbers: Numbers
    words: Words

    @classmethod
    def of(cls, results: tree.Results) -> Writer:
        """A writer for ``results``, whose strings are first made safe to show."""
        safe = cleaned(results)
        words = language_file(safe.analysis.language, "labels")
        numbers = Numbers(
            smallest_count=safe.analysis.smallest_count,
            fewer_than=words["hidden"]["fewer_than"],
            hidden_word=words["hidden"]["word"],
            absent=words["absent"],
            between=words["joining"]["to"],
        )
        labels = {variable.name: variable.label for variable in safe.variables}
        given = words["designs"][safe.study.design]
        return cls(safe, numbers, Words(safe.analysis.language, numbers, labels, given))

    def say(self, key: str, /, **values: Any) -> str:
        """A text of the language, filled; see `Words.say`."""
        return self.words.say(key, **values)

    def phrase(self, text: str) -> str:
        """A rule or method that the results name, in the language's words where it has them."""
        known = self.words.entry("labels.phrases").get(text)
        return text if known is None else self.words.fill(known)

    @cached_property
    def variables(self) -> dict[str, tree.Variable]:
        return {variable.name: variable for variable in self.results.variables}

    @cached_property
    def outcome(self) -> tree.Variable:
        return next(variable for variable in self.results.variables if variable.role == "outcome")

    @property
    def case_control(self) -> bool:
        """Does sampling depend on the outcome, so that no risk may be printed?"""
        return self.results.study.design == "case-control"

    @property
    def prediction(self) -> bool:
        return self.results.study.purpose == "prediction"

    @property
    def share(self) -> str:
        """What the share with the event is called: ``risk``, ``prevalence`` or ``none``."""
        if self.results.study.design in RISK_DESIGNS:
            return "risk"
        return "prevalence" if self.results.study.design in PREVALENCE_DESIGNS else "none"

    @property
    def leading(self) -> tuple[str, ...]:
        """Role whose estimates answer the question."""
        return ("predictor",) if self.prediction else ("exposure",)

    @cached_property
    def confidence(self) -> str:
        """``95`` or ``97.5``, without a trailing zero."""
        return f"{self.results.analysis.confidence:g}"

    def label(self, name: str) -> str:
        """A variable's label as written."""
        return self.variables[name].label if name in self.variables else name

    def inline(self, name: str) -> str:
        """A variable's label as it stands in a sentence."""
        return self.words.inline(self.label(name))

    def event_phrase(self) -> str:
        """What the odds are odds of, in a sentence."""
        if self.case_control:
            return self.say("labels.event.case")
        return self.inline(self.outcome.name)

    def parameter(self, name: str, term: str) -> str:
        """A parameter by its variable's label: ``asa: 3`` is printed ``ASA class: 3``."""
        if term not in self.variables or not name.startswith(term):
            return name
        return self.variables[term].label + name.removeprefix(term)

    def of_role(self, *roles: str) -> list[tree.Variable]:
        return [variable for variable in self.results.variables if variable.role in roles]

    def modelled(self) -> list[tree.Variable]:
        """Every variable of the adjusted model."""
        return self.of_role("exposure", "predictor", "covariate")

    def estimates(self, name: str, crude: bool = False) -> list[tree.Estimate]:
        """Estimates of one variable, in order of its levels or contrasts."""
        found = self.results.estimates.crude if crude else self.results.estimates.adjusted
        return [estimate for estimate in found if estimate.term == name]

    def pairs(self, name: str) -> Iterator[tuple[tree.Estimate | None, tree.Estimate]]:
        """Crude beside adjusted estimate of each level or contrast of a variable."""
        crude = {(found.level, _key(found)): found for found in self.estimates(name, crude=True)}
        for adjusted in self.estimates(name):
            yield crude.get((adjusted.level, _key(adjusted))), adjusted

    def joint_test(self, name: str, part: str = "overall") -> tree.TermTest | None:
        """Test of all columns of a term in the adjusted model."""
        for test in self.results.term_tests:
            if test.term == name and test.part == part and test.model == "adjusted":
                return test
        return None


def _key(estimate: tree.Estimate) -> tuple[float, ...] | None:
    return None if estimate.contrast is None else tuple(estimate.contrast)
