"""What every section of a description has in common, and how a key is declared."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from pydantic import BaseModel, ConfigDict, Field, JsonValue


class Section(BaseModel):
    """Base of every mapping in a description: unknown keys are errors, values do not change."""

    model_config = ConfigDict(extra="forbid", frozen=True, populate_by_name=True)


def key(
    means: str,
    *,
    example: str,
    default: Any = ...,
    factory: Callable[[], Any] | None = None,
    otherwise: str = "",
    alias: str | None = None,
) -> Any:
    """Declare a key.

    Parameters
    ----------
    means : str
        What the key says, for a person who writes a description.
    example : str
        YAML from the top of a description down to the key.
    default, factory
        As pydantic takes them; without either the key is required.
    otherwise : str
        What holds where the key is not given, in words.
    alias : str, optional
        The key as it is written, where Python reserves that word.
    """
    about: dict[str, JsonValue] = {"example": example, "otherwise": otherwise}
    if factory is not None:
        return Field(default_factory=factory, alias=alias, description=means, json_schema_extra=about)
    return Field(default, alias=alias, description=means, json_schema_extra=about)
