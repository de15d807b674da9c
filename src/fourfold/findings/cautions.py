"""Which standing cautions a study carries; their words are in the language files."""

from __future__ import annotations

STANDING = ("statistical-not-individual", "association-not-causation", "defer-to-local", "qualified-person")

BY_DESIGN = {
    "case-control": ("case-control-no-risk",),
    "cross-sectional": ("cross-sectional-no-order",),
    "survey": ("cross-sectional-no-order",),
}

BY_PURPOSE = {"prediction": ("prediction-not-validated",)}


def for_study(design: str, purpose: str) -> list[str]:
    """Ids of the cautions of a study, the standing ones first."""
    return [*STANDING, *BY_DESIGN.get(design, ()), *BY_PURPOSE.get(purpose, ())]
