"""The triangular factor of a tall matrix, block after block: accurate where products would not be."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from fourfold.models.blocks import Blocks
from fourfold.models.centring import Centring
from fourfold.models.lanes import single_threaded_blas

Array = NDArray[np.float64]


def triangular_factor(
    blocks: Blocks,
    centred: Centring | None,
    scale: Array,
    row_weight: Callable[[int], Array] | None = None,
) -> Array:
    """R of the QR decomposition of the centred columns times ``scale``, rows times their weight.

    Only one block is copied at a time.

    Parameters
    ----------
    blocks : Blocks of p columns
    centred : Centring or None
    scale : (p,) float array
    row_weight : callable, optional
        The weights of the rows of a block, by the block's number.

    Returns
    -------
    (p, p) float array, upper triangular.

    References
    ----------
    Golub & Van Loan (2013). Matrix Computations, 4th ed., section 5.2.
    """
    factor = np.zeros((blocks.p, blocks.p))
    with single_threaded_blas():
        for block in range(blocks.n_blocks):
            rows = blocks.array[block, :, : blocks.rows_in(block)]
            if centred is not None:
                rows = rows - centred.centre[:, None]
            rows = rows * scale[:, None]
            if row_weight is not None:
                rows *= row_weight(block)
            factor = np.asarray(np.linalg.qr(np.vstack([factor, rows.T]), mode="r"))
    return factor
