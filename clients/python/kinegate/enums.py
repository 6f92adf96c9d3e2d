"""Values of enums in words."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

__all__ = ["word", "words"]


def word(enum: Any, number: int) -> str:
    """Return a value in words, such as "JUDGED"; its number where a newer server has sent it."""
    if number not in enum.values():
        return str(number)
    name: str = enum.Name(number)
    return name.removeprefix(enum.Name(0).removesuffix("UNSPECIFIED"))


def words(enum: Any, numbers: NDArray[np.uint8]) -> NDArray[np.object_]:
    """Return a column of values in words."""
    known, places = np.unique(numbers, return_inverse=True)
    names: NDArray[np.object_] = np.array([word(enum, int(n)) for n in known], object)[places]
    return names
