"""What physical quantities cannot be; a wrong call fails at once, with its name and value."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike


def insist_positive(**quantities: ArrayLike) -> None:
    """Insist that every quantity, or each of its values, is above zero.

    Raises
    ------
    ValueError
        If one is not; it is named.
    """
    for name, values in quantities.items():
        array = np.asarray(values, dtype=np.float64)
        if not (array > 0.0).all():
            raise ValueError(f"{name} is not above zero: {values}")


def insist_not_negative(**quantities: ArrayLike) -> None:
    """Insist that every quantity, or each of its values, is zero or more.

    Raises
    ------
    ValueError
        If one is not; it is named.
    """
    for name, values in quantities.items():
        array = np.asarray(values, dtype=np.float64)
        if not (array >= 0.0).all():
            raise ValueError(f"{name} is below zero: {values}")
