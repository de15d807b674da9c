"""Words and keys that a person may well write and that this version does not act on.

Each is refused with what can be done instead, rather than as a misspelling.
"""

from __future__ import annotations

from fourfold.description.outline import NAME, Pattern

# (path of the key, word) -> what can be done instead.
WORDS: dict[tuple[Pattern, str], str] = {
    (("study", "design"), "matched case-control"): (
        "Matched sets are not analysed as such. Write `design: case-control`, put the matching variables "
        "among `covariates:` and state them under `sampling: {matched_on: [...]}`; the report then says that "
        "the matching was not used."
    ),
    (("study", "purpose"), "external validation"): (
        "A published equation cannot be tested on new data by this version. Write `purpose: prediction` to "
        "fit and assess the same predictors in these data."
    ),
    (("analysis", "estimator"), "penalised likelihood"): (
        "Write `estimator: maximum likelihood`. Where a level separates the outcome, the report gives the "
        "one-sided limit in place of an infinite estimate."
    ),
    (("analysis", "estimator"), "conditional likelihood"): (
        "Matched sets are not analysed as such. Write `estimator: maximum likelihood`, put the matching "
        "variables among `covariates:` and state them under `sampling: {matched_on: [...]}`."
    ),
    (("analysis", "standard_errors"), "robust"): "Write `standard_errors: model-based`.",
    (("analysis", "standard_errors"), "clustered"): (
        "Write `standard_errors: model-based` and state the grouping under `sampling: {clusters: ...}`; the "
        "report then says that it was not taken into account."
    ),
    (("analysis", "standard_errors"), "survey"): (
        "Write `standard_errors: model-based` and state the weights under `sampling: {weights: ...}`; the "
        "report then says that they were not used."
    ),
    (("analysis", "missing_data"), "multiple imputation"): (
        "Write `missing_data: complete cases`. The report counts the rows that are lost and tests whether "
        "being incomplete goes with the outcome."
    ),
}

# (path of the key, word) -> how what the word means is written.
SPELLINGS: dict[tuple[Pattern, str], str] = {
    (("variables", NAME, "shape"), "spline"): "Write `shape: {spline: {knots: 4}}`.",
    (("variables", NAME, "shape"), "log"): "Write `shape: log2`; the odds ratio is then per doubling.",
    (("variables", NAME, "kind"), "number"): "Write `kind: quantity`.",
    (("variables", NAME, "kind"), "numeric"): "Write `kind: quantity`.",
    (("variables", NAME, "kind"), "continuous"): "Write `kind: quantity`.",
    (("variables", NAME, "kind"), "ordinal"): "Write `kind: ordered`, with `levels:` from lowest to highest.",
    (("variables", NAME, "kind"), "categorical"): "Write `kind: category`.",
    (("variables", NAME, "kind"), "nominal"): "Write `kind: category`.",
    (
        ("variables", NAME, "kind"),
        "boolean",
    ): "Write `kind: binary`, with the value that means yes as `present:`.",
}

# (path of the section, key) -> what can be done instead.
KEYS: dict[tuple[Pattern, str], str] = {
    ((), "effect_modifiers"): (
        "Effect modification is not estimated by this version. Describe the groups one at a time by "
        "`exclusions:`; a difference between two such reports needs a test of its own."
    ),
    ((), "models"): (
        "One set of `covariates:` is fitted in one run. Write one description for each set and compare the "
        "reports."
    ),
    ((), "outcomes"): "One `outcome:` is explained in one run. Write one description for each outcome.",
    ((), "equation"): (
        "A published equation cannot be tested by this version. Use `purpose: prediction` with `predictors:`."
    ),
    ((), "prevalence"): (
        "A case-control study is not put on an absolute scale by this version; odds ratios need no "
        "prevalence."
    ),
    ((), "counts"): "It stands under `data:`, as in data: {counts: people}.",
    (
        (),
        "weights",
    ): "State sampling weights under `sampling: {weights: ...}`; the analysis does not use them.",
    ((), "strata"): "Put a stratum variable among `covariates:`; survey strata are not used.",
    ((), "cluster"): "State the grouping under `sampling: {clusters: ...}`; the analysis does not use it.",
    ((), "set"): "Matched sets are not analysed as such; see `fourfold keys matched_on`.",
    (
        (),
        "sampling_units",
    ): "State the grouping under `sampling: {clusters: ...}`; the analysis does not use it.",
    (("analysis",), "cluster"): "State the grouping under `sampling: {clusters: ...}`; it is not used.",
    (("analysis",), "weights"): "State sampling weights under `sampling: {weights: ...}`; they are not used.",
    (("analysis",), "strata"): "Put a stratum variable among `covariates:`; survey strata are not used.",
    (
        ("analysis",),
        "sampling_units",
    ): "State the grouping under `sampling: {clusters: ...}`; it is not used.",
    (("analysis",), "set"): "Matched sets are not analysed as such; see `fourfold keys matched_on`.",
    (("analysis",), "imputations"): "Write `missing_data: complete cases`.",
    (("assessment",), "bootstrap"): (
        "Performance is not corrected by resampling in this version; the report gives the shrinkage that the "
        "likelihood ratio implies."
    ),
    (("assessment",), "thresholds"): "Risk thresholds are not assessed by this version.",
    (("disclosure",), "round_to"): "Counts are hidden below `smallest_count:`, not rounded.",
}


def instead(pattern: Pattern, word: str) -> str | None:
    """What to do instead of a word that is not acted on; None for any other."""
    return WORDS.get((pattern, " ".join(word.lower().split())))


def instead_of_key(section: Pattern, key: str) -> str | None:
    """What to do instead of a key that is not acted on; None for any other."""
    return KEYS.get((section, key))
