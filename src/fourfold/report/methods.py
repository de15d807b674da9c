"""Methods as they were run: sentences true to the results, ready for a manuscript."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from fourfold.report.writer import Writer
from fourfold.results import tree


@dataclass(frozen=True, slots=True)
class Paragraph:
    """A heading and its sentences; citations are still marked, not numbered."""

    id: str
    heading: str
    sentences: Sequence[str]

    @property
    def text(self) -> str:
        return " ".join(self.sentences)


def methods(writer: Writer) -> list[Paragraph]:
    """Every paragraph of the Methods, in order."""
    found = [
        ("design", _design(writer)),
        ("variables", _variables(writer)),
        ("model", _model(writer)),
        ("missing", _missing(writer)),
        ("measures", _measures(writer)),
        ("assessment", _assessment(writer)),
        ("disclosure", _disclosure(writer)),
        ("software", _software(writer)),
    ]
    return [Paragraph(id, writer.say(f"methods.headings.{id}"), sentences) for id, sentences in found]


def _design(writer: Writer) -> list[str]:
    study, analysis, say = writer.results.study, writer.results.analysis, writer.say
    # Labels stand in quotation marks here: they may be of any grammar.
    exposures = [f"“{found.label}”" for found in writer.of_role("exposure")]
    sentences = [
        say(
            "methods.design.opening",
            design=say(f"methods.designs.{study.design}"),
            setting=study.setting,
            period_from=study.period_from,
            period_to=study.period_to,
        ),
        say(
            f"methods.design.purpose.{study.purpose}",
            exposures=exposures,
            outcome=writer.outcome.label,
        ),
    ]
    reasons = [exclusion.reason for exclusion in writer.results.participants.exclusions]
    key = "exclusions" if reasons else "no_exclusions"
    sentences.append(
        say(f"methods.design.{key}", reasons=[writer.words.inline(reason) for reason in reasons])
    )
    if analysis.counts_variable:
        sentences.append(say("methods.design.counts", name=analysis.counts_variable))
    if analysis.matched_on:
        names = [writer.inline(name) for name in analysis.matched_on]
        sentences.append(say("methods.design.matched", names=names))
    if analysis.clusters_stated:
        sentences.append(say("methods.design.clusters", name=analysis.clusters_stated))
    if analysis.weights_stated:
        sentences.append(say("methods.design.weights", name=analysis.weights_stated))
    if analysis.follow_up:
        sentences.append(say("methods.design.follow_up", statements=analysis.follow_up))
    if analysis.exposure_measured:
        sentences.append(say("methods.design.exposure_measured", when=analysis.exposure_measured))
    return sentences


def _variables(writer: Writer) -> list[str]:
    outcome, analysis, say = writer.outcome, writer.results.analysis, writer.say
    sentences = [say("methods.variables.outcome", outcome=outcome.label, present=outcome.present)]
    modelled = writer.modelled()
    sentences += [_variable(writer, variable) for variable in modelled]
    for variable in modelled:
        if variable.cuts:
            sentences.append(
                say(
                    "methods.variables.bands",
                    label=writer.inline(variable.name),
                    cuts=[writer.numbers.number(cut, None) for cut in variable.cuts],
                    chosen=variable.cuts_chosen,
                )
            )
    sentences.append(say(f"methods.variables.selection.{analysis.selection or 'unstated'}"))
    if analysis.candidates is not None:
        sentences.append(say("methods.variables.candidates", n=writer.numbers.count(analysis.candidates)))
    reasons = [
        say(
            "methods.variables.reason",
            label=writer.inline(found.name),
            reason=writer.words.inline(found.reason),
        )
        for found in writer.of_role("covariate")
        if found.reason
    ]
    if reasons:
        sentences.append(say("methods.variables.reasons", reasons=reasons))
    return sentences


def _variable(writer: Writer, variable: tree.Variable) -> str:
    say, number = writer.say, writer.numbers.number
    if variable.kind == "quantity":
        return say(
            f"methods.variables.{variable.shape}",
            label=variable.label,
            unit=variable.unit,
            per=number(variable.per if variable.per is not None else 1.0, None),
            knots=[number(knot, None) for knot in variable.knots],
        )
    if variable.kind == "binary":
        return say(
            "methods.variables.binary",
            label=variable.label,
            present=variable.present or say("labels.rows.present"),
            reference=variable.reference or say("labels.rows.absent"),
        )
    return say(
        "methods.variables.category",
        label=variable.label,
        reference=variable.reference,
        rule=variable.reference_rule,
    )


def _model(writer: Writer) -> list[str]:
    analysis, model, say = writer.results.analysis, writer.results.model, writer.say
    modelled = [writer.inline(found.name) for found in writer.modelled()]
    sentences = [
        say(
            "methods.model.fit" if len(modelled) > 1 else "methods.model.fit_one",
            estimator=analysis.estimator,
            terms=modelled,
            n=writer.numbers.count(model.n, model.hidden.get("n")),
        ),
        say(
            "methods.model.profile" if analysis.intervals == "profile likelihood" else "methods.model.wald",
            confidence=writer.confidence,
        ),
    ]
    if any(test.df > 1 for test in writer.results.term_tests):
        shaped = [
            writer.inline(test.term)
            for test in writer.results.term_tests
            if test.part == "non-linearity" and test.model == "adjusted"
        ]
        sentences.append(say("methods.model.joint", shaped=shaped))
    if model.separation is None:
        sentences.append(say("methods.model.no_separation"))
    else:
        sentences.append(say("methods.model.separation", kind=model.separation))
    if writer.case_control:
        sentences.append(say("methods.model.intercept_withheld"))
    if not model.converged:
        sentences.append(say("methods.model.not_converged"))
    return sentences


def _missing(writer: Writer) -> list[str]:
    incomplete = writer.results.participants.incomplete
    return [writer.say("methods.missing.none" if incomplete == 0 else "methods.missing.complete_cases")]


def _measures(writer: Writer) -> list[str]:
    sentences = [writer.say("methods.measures.characteristics")]
    if writer.results.tables:
        sentences.append(writer.say(f"methods.measures.{writer.share}"))
    return sentences


def _assessment(writer: Writer) -> list[str]:
    results, say = writer.results, writer.say
    sentences = []
    if results.discrimination is not None:
        sentences.append(say("methods.assessment.discrimination"))
    calibration = results.calibration
    if calibration is not None:
        if calibration.hosmer_lemeshow is not None:
            sentences.append(
                say(
                    "methods.assessment.hosmer_lemeshow",
                    groups=calibration.hosmer_lemeshow.groups,
                    rule=writer.phrase(calibration.hosmer_lemeshow.rule),
                )
            )
        if calibration.brier is not None or calibration.curve:
            sentences.append(
                say("methods.assessment.calibration", method=writer.phrase(calibration.curve_method))
            )
    if results.model.r_squared is not None:
        sentences.append(say("methods.assessment.r_squared"))
    if results.sample_size is not None:
        sentences.append(say("methods.assessment.sample_size", criteria=bool(results.sample_size.criteria)))
    if results.influence is not None:
        sentences.append(say("methods.assessment.influence"))
    if results.collinearity is not None:
        sentences.append(say("methods.assessment.collinearity"))
    sentences.append(say("methods.assessment.apparent"))
    sentences.append(say(f"methods.assessment.guideline.{results.study.purpose}"))
    return sentences


def _disclosure(writer: Writer) -> list[str]:
    analysis = writer.results.analysis
    if analysis.smallest_count <= 1 and not analysis.hide_zero:
        sentences = [writer.say("methods.disclosure.everything")]
    else:
        sentences = [
            writer.say(
                "methods.disclosure.hidden", highest=analysis.smallest_count - 1, hide_zero=analysis.hide_zero
            )
        ]
    if analysis.show_people:
        sentences.append(writer.say("methods.disclosure.people"))
    return sentences


def _software(writer: Writer) -> list[str]:
    provenance = writer.results.provenance
    packages = [f"{name} {version}" for name, version in sorted(provenance.packages.items())]
    return [
        writer.say(
            "methods.software.versions",
            version=provenance.fourfold,
            python=provenance.python,
            packages=packages,
        )
    ]
