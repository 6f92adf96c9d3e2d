"""Columns of the contract as numpy arrays, viewed without a copy where they arrive."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, TypeVar

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

T = TypeVar("T", bound=np.generic)

__all__ = ["bits", "encode", "view"]


def view(raw: bytes, kind: type[T]) -> NDArray[T]:
    """View the bytes of a column as an array; read-only, since the message owns them.

    >>> import numpy as np
    >>> view(bytes([1, 0, 2, 0]), np.int16)
    array([1, 2], dtype=int16)
    """
    return np.frombuffer(raw, np.dtype(kind).newbyteorder("<"))


def encode(values: ArrayLike, kind: type[Any]) -> bytes:
    r"""Write an array as a column; one copy, which the message needs.

    >>> import numpy as np
    >>> encode([1, 2], np.int16)
    b'\x01\x00\x02\x00'
    """
    return np.ascontiguousarray(values, np.dtype(kind).newbyteorder("<")).tobytes()


def bits(raw: bytes, count: int) -> NDArray[np.bool_]:
    """Unpack one bit an event, least significant first.

    >>> bits(bytes([5]), 3)
    array([ True, False,  True])
    """
    packed = np.frombuffer(raw, np.uint8)
    return np.unpackbits(packed, count=count, bitorder="little").view(np.bool_)
