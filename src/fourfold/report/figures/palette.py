"""The colours of figures and pages, and what each class of mark looks like on light and on dark.

One table says how every class of mark is painted. The canvas writes it as presentation attributes
(what a PDF renderer reads) and :func:`css` writes the same table as custom properties (what lets a
page restyle the same SVG for a dark screen), so that the two cannot drift apart.

Every text colour has at least 4.5:1 and every mark at least 3:1 against its page (WCAG 2.2, success
criteria 1.4.3 and 1.4.11); the colours of marks stay apart under simulated protanopia, deuteranopia
and tritanopia (matrices of Machado, Oliveira and Fernandes 2009, severity 1). Colour never stands
alone: outline or fill, shape, place and words say the same.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

LIGHT: Mapping[str, str] = MappingProxyType(
    {
        "page": "#ffffff",
        "ink": "#1b1f24",
        "muted": "#59626b",
        "grid": "#dde1e4",
        "outline": "#76828c",
        "tint": "#e8ecee",
        "accent": "#14566e",
        "event": "#a8351f",
        "third": "#b07d00",
        "fourth": "#7d5ba6",
    }
)
"""Colours on paper and on a light screen."""

DARK: Mapping[str, str] = MappingProxyType(
    {
        "page": "#15191d",
        "ink": "#e8e5df",
        "muted": "#a2abb3",
        "grid": "#343b41",
        "outline": "#85919b",
        "tint": "#2a3136",
        "accent": "#7cc0d8",
        "event": "#f08a6c",
        "third": "#c79a2a",
        "fourth": "#9a6fd0",
    }
)
"""The same roles on a dark screen."""

TEXT = ("ink", "muted", "accent", "event")
"""Roles that may colour words on the page."""

MARKS = ("accent", "event", "third", "fourth", "outline")
"""Roles that may colour a mark whose colour says something."""

STYLES: Mapping[str, Mapping[str, str]] = MappingProxyType(
    {
        "ink": {"fill": "ink"},
        "muted": {"fill": "muted"},
        "accent": {"fill": "accent"},
        "event": {"fill": "event"},
        "on-event": {"fill": "page"},
        "axis": {"fill": "none", "stroke": "muted"},
        "grid": {"fill": "none", "stroke": "grid"},
        "rule": {"fill": "none", "stroke": "ink"},
        "cut": {"fill": "none", "stroke": "page"},
        "box": {"fill": "page", "stroke": "outline"},
        "tint": {"fill": "tint"},
        "area": {"fill": "tint", "stroke": "outline"},
        "outline": {"fill": "none", "stroke": "outline"},
        "point": {"fill": "page", "stroke": "ink"},
        "accent-line": {"fill": "none", "stroke": "accent"},
        "accent-hollow": {"fill": "page", "stroke": "accent"},
        "crude": {"fill": "page", "stroke": "outline"},
        "band": {"fill": "accent", "fill-opacity": "0.16"},
        "series-1": {"fill": "none", "stroke": "accent"},
        "series-2": {"fill": "none", "stroke": "event"},
        "series-3": {"fill": "none", "stroke": "third"},
        "series-4": {"fill": "none", "stroke": "fourth"},
    }
)
"""Class of mark -> its paint: a role of the palette, or a plain SVG value."""

PREFIX = "ff-"
"""Set before each class so that a page's own classes never collide with a figure's."""


def attributes(style: str) -> dict[str, str]:
    """Give the presentation attributes of a class of mark, in the colours of paper.

    Parameters
    ----------
    style : str
        A key of :data:`STYLES`.

    Raises
    ------
    KeyError
        If no such class exists.
    """
    painted = {"class": PREFIX + style}
    for name, value in STYLES[style].items():
        painted[name] = LIGHT.get(value, value)
    return painted


def css() -> str:
    """Give the style sheet by which a page recolours its figures for a dark screen.

    Roles become custom properties (``--figure-ink`` and so on) on ``:root``, dark where the reader
    asks for dark on a screen and where the root carries ``data-theme="dark"``; ``data-theme="light"``
    keeps light. Print is always light.
    """
    dark = _properties(DARK)
    restyled = []
    for style, paints in STYLES.items():
        body = ";".join(f"{name}:var(--figure-{value})" for name, value in paints.items() if value in LIGHT)
        if body:
            restyled.append(f"svg.{PREFIX}figure .{PREFIX}{style}{{{body}}}")
    # A renderer for print skips the whole screen block and keeps the presentation attributes.
    return "\n".join(
        [
            f":root{{{_properties(LIGHT)}}}",
            "@media screen{",
            f'@media (prefers-color-scheme:dark){{:root:not([data-theme="light"]){{{dark}}}}}',
            f':root[data-theme="dark"]{{{dark}}}',
            *restyled,
            "}",
            "",
        ]
    )


def _properties(colours: Mapping[str, str]) -> str:
    return ";".join(f"--figure-{role}:{colour}" for role, colour in colours.items())
