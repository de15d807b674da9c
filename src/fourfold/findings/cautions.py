"""Which standing cautions a report carries. Their words are in the language file ``cautions``."""

from __future__ import annotations

STANDING = (
    "statistical-not-individual",
    "association-not-causation",
    "defer-to-local",
    "qualified-person",
)
"""In every report, whatever its design and purpose."""

BY_DESIGN = {
    "case-control": ("case-control-no-risk",),
    "cross-sectional": ("cross-sectional-no-order", "odds-not-risk"),
    "survey": ("cross-sectional-no-order", "survey-sample", "odds-not-risk"),
    "cohort": ("odds-not-risk",),
}
BY_PURPOSE = {
    "prediction": ("prediction-not-validated", "prediction-not-causes"),
}
LAST = ("silence-is-no-proof",)


def for_study(design: str, purpose: str) -> list[str]:
    """Ids of the cautions that apply to a study, in the order in which they are printed.

    Parameters
    ----------
    design : str
        ``cohort``, ``case-control``, ``cross-sectional`` or ``survey``.
    purpose : str
        ``association`` or ``prediction``.
    """
    return [*STANDING, *BY_DESIGN.get(design, ()), *BY_PURPOSE.get(purpose, ()), *LAST]


def all_ids() -> list[str]:
    """Every caution that some study carries, each once."""
    groups = [STANDING, *BY_DESIGN.values(), *BY_PURPOSE.values(), LAST]
    return list(dict.fromkeys(id for group in groups for id in group))
