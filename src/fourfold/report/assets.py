"""Where the templates, style sheets, fonts and language files are, and their text.

An installed wheel carries them inside the package; a checkout has them at its top level.
"""

from __future__ import annotations

from functools import cache
from pathlib import Path
from typing import Any

import yaml

from fourfold.errors import RenderingError


def templates() -> Path:
    """Folder of templates, in a wheel or in a checkout.

    Raises
    ------
    RenderingError
        If neither place has it: the installation is incomplete.
    """
    package = Path(__file__).resolve().parent.parent
    for folder in (package / "templates", package.parent.parent / "templates"):
        if (folder / "page.html.j2").is_file():
            return folder
    raise RenderingError(
        "The report's templates are missing from this installation.",
        "Install Fourfold again; a copy of src/ alone is not enough.",
    )


@cache
def language_file(language: str, name: str) -> dict[str, Any]:
    """Content of one language file, such as ``labels`` of ``en``.

    Raises
    ------
    RenderingError
        If the language, or this file of it, does not exist.
    """
    path = templates() / "languages" / language / f"{name}.yaml"
    if not path.is_file():
        raise RenderingError(
            f"There is no {name}.yaml for the language {language!r}.",
            "Add it to templates/languages, or choose another `report: {language: ...}`.",
        )
    content = yaml.load(path.read_text(encoding="utf-8"), Loader=_loader())
    return dict(content)


def style(name: str) -> str:
    """Text of one style sheet."""
    return (templates() / "style" / f"{name}.css").read_text(encoding="utf-8")


def _loader() -> type[yaml.SafeLoader]:
    # The C loader reads the same safe subset ten times as fast, where the platform has it.
    return getattr(yaml, "CSafeLoader", yaml.SafeLoader)
