"""Contrast and colour-vision separation of the palette, in both themes."""

from __future__ import annotations

import itertools
import re

import numpy as np
import pytest

from fourfold.report.figures import palette

THEMES = {"light": palette.LIGHT, "dark": palette.DARK}

# Machado, Oliveira & Fernandes (2009), IEEE TVCG 15, 1291-1298, severity 1.0, for linear RGB; the
# digits were compared with those of the colorspacious library (machado_et_al_2009_matrix).
VISION = {
    "usual": np.eye(3),
    "protanopia": np.array(
        [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]]
    ),
    "deuteranopia": np.array(
        [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]]
    ),
    "tritanopia": np.array(
        [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.303900]]
    ),
}


def linear(colour: str) -> np.ndarray:
    """Linear RGB of a hex colour (IEC 61966-2-1, sRGB)."""
    channels = np.array([int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)])
    return np.where(channels <= 0.04045, channels / 12.92, ((channels + 0.055) / 1.055) ** 2.4)


def contrast(one: str, other: str) -> float:
    """Contrast ratio of WCAG 2.2."""
    low, high = sorted(float(linear(colour) @ [0.2126, 0.7152, 0.0722]) for colour in (one, other))
    return (high + 0.05) / (low + 0.05)


def lab(rgb: np.ndarray) -> np.ndarray:
    """CIE L*a*b* (D65) of linear RGB."""
    to_xyz = np.array(
        [
            [0.4124564, 0.3575761, 0.1804375],
            [0.2126729, 0.7151522, 0.0721750],
            [0.0193339, 0.1191920, 0.9503041],
        ]
    )
    ratio = to_xyz @ np.clip(rgb, 0, 1) / np.array([0.95047, 1.0, 1.08883])
    f = np.where(ratio > 216 / 24389, np.cbrt(ratio), (24389 / 27 * ratio + 16) / 116)
    return np.array([116 * f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])])


def difference(one: str, other: str, vision: np.ndarray) -> float:
    """CIE 1976 colour difference as an eye with that vision sees it."""
    return float(np.linalg.norm(lab(vision @ linear(one)) - lab(vision @ linear(other))))


def test_contrast_formula_agrees_with_the_published_boundary_grey() -> None:
    # #767676 is the lightest grey that reaches 4.5:1 on white (WCAG 2.2 techniques; common practice).
    assert contrast("#767676", "#ffffff") == pytest.approx(4.54, abs=0.005)
    assert contrast("#000000", "#ffffff") == pytest.approx(21.0)


@pytest.mark.parametrize("matrix", [VISION[name] for name in VISION])
def test_simulation_keeps_white_white(matrix: np.ndarray) -> None:
    # Each row of a simulation for linear RGB sums to 1: greys stay greys (Machado et al. 2009).
    assert matrix.sum(axis=1) == pytest.approx(np.ones(3), abs=2e-6)


@pytest.mark.parametrize("theme", THEMES)
@pytest.mark.parametrize("role", palette.TEXT)
def test_words_reach_four_and_a_half_to_one_on_the_page(theme: str, role: str) -> None:
    # WCAG 2.2, success criterion 1.4.3 (AA, small text).
    colours = THEMES[theme]
    assert contrast(colours[role], colours["page"]) >= 4.5


@pytest.mark.parametrize("theme", THEMES)
def test_words_reach_four_and_a_half_to_one_where_they_may_stand_on_a_fill(theme: str) -> None:
    colours = THEMES[theme]
    assert contrast(colours["ink"], colours["tint"]) >= 4.5
    assert contrast(colours["muted"], colours["tint"]) >= 4.5
    assert contrast(colours["page"], colours["event"]) >= 4.5


@pytest.mark.parametrize("theme", THEMES)
@pytest.mark.parametrize("role", palette.MARKS)
def test_marks_reach_three_to_one_on_the_page(theme: str, role: str) -> None:
    # WCAG 2.2, success criterion 1.4.11 (non-text contrast).
    colours = THEMES[theme]
    assert contrast(colours[role], colours["page"]) >= 3.0


@pytest.mark.parametrize("theme", THEMES)
@pytest.mark.parametrize("vision", VISION)
@pytest.mark.parametrize(("one", "other"), list(itertools.combinations(palette.MARKS, 2)))
def test_marks_stay_apart_for_every_colour_vision(theme: str, vision: str, one: str, other: str) -> None:
    # A difference of 2.3 is just noticeable (Mahy et al. 1994); 15 tells marks apart at a glance.
    colours = THEMES[theme]
    assert difference(colours[one], colours[other], VISION[vision]) >= 15


def test_both_themes_have_the_same_roles() -> None:
    assert list(palette.LIGHT) == list(palette.DARK)
    assert set(palette.TEXT) | set(palette.MARKS) <= set(palette.LIGHT)


def test_style_sheet_restyles_every_class_with_a_colour_that_exists() -> None:
    sheet = palette.css()
    used = set(re.findall(r"var\(--figure-([a-z]+)\)", sheet))
    assert used <= set(palette.LIGHT)
    for style, paints in palette.STYLES.items():
        assert set(palette.attributes(style)) == {"class", *paints}
        assert f"svg.ff-figure .ff-{style}{{" in sheet
    for role in palette.LIGHT:
        assert f"--figure-{role}:{palette.LIGHT[role]}" in sheet
        assert f"--figure-{role}:{palette.DARK[role]}" in sheet
    assert sheet.count("{") == sheet.count("}")
