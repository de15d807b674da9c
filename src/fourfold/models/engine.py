"""Which code sums the likelihood: numpy, or a compiled pass where it is installed and pays."""

from __future__ import annotations

import importlib.util
import sys
from typing import Protocol, cast

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

COMPILED = "fourfold.models.compiled"

LOADING_PAYS_FROM = 100_000_000
"""Numbers in a design from which an analysis wins back the half second that numba takes to load.

A compiled pass saves about 1.5 ns a number and core; an analysis makes some three or four passes
over its largest design for each of two fits.
"""

LOADED_PAYS_FROM = 2_000_000
"""The same once numba is loaded."""


class AddBlocks(Protocol):
    """Adds gradient and information of blocks ``first`` to ``last - 1``; gives the log-likelihood."""

    def __call__(
        self,
        array: Array,
        n: int,
        first: int,
        last: int,
        rows: int,
        stride: int,
        event: NDArray[np.bool_],
        counts: NDArray[np.int64] | Array,
        offset: Array,
        coefficients: Array,
        with_information: bool,
        gradient: Array,
        information: Array,
        /,
    ) -> float: ...


def installed() -> bool:
    """Whether the compiled pass can be used here at all."""
    return importlib.util.find_spec("numba") is not None


def choose(engine: str, numbers: int) -> bool:
    """Whether to use the compiled pass.

    Parameters
    ----------
    engine : str
        ``numpy``, ``compiled`` or ``auto``.
    numbers : int
        Rows times columns.

    Raises
    ------
    ValueError
        For another word, or ``compiled`` where numba is not installed.
    """
    if engine == "numpy":
        return False
    if engine == "compiled":
        if not installed():
            raise ValueError("the compiled engine needs numba: install fourfold[fast]")
        return True
    if engine != "auto":
        raise ValueError(f"engine is {engine!r}; expected numpy, compiled or auto")
    pays_from = LOADED_PAYS_FROM if COMPILED in sys.modules else LOADING_PAYS_FROM
    return numbers >= pays_from and installed()


def compiled_pass() -> AddBlocks:
    """The compiled pass, loaded at the first call."""
    return cast(AddBlocks, importlib.import_module(COMPILED).add_blocks)
