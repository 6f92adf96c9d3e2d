"""Optional parts of events: beam candidates, vertices, clusters, polarisation.

A part is a dataclass whose members are the columns of its message, by the same names.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TYPE_CHECKING, Any, Final, Self

import numpy as np

from kinegate import columns
from kinegate.errors import ArgumentError

if TYPE_CHECKING:
    from collections.abc import Sequence

    from google.protobuf.message import Message
    from numpy.typing import NDArray

__all__ = ["BeamCandidates", "ClusterPositions", "Polarisation", "VertexGroups", "Vertices"]

# Columns that are no float64, and how many numbers a row has where it is not one.
_WHOLE: Final = ("offsets", "groups")
_TRIANGLE: Final = 6


@dataclass(frozen=True)
class Part:
    """What all parts have in common; members of None are left out of the message."""

    def write(self, message: Message) -> None:
        """Write the columns into the part's message."""
        message.SetInParent()
        for member in fields(self):
            column = getattr(self, member.name)
            if column is not None:
                kind = np.int32 if member.name in _WHOLE else np.float64
                setattr(message, member.name, columns.encode(column, kind))

    @classmethod
    def read(cls, message: Any) -> Self:
        """View the columns of the part's message; nothing is copied."""
        return cls(**{member.name: _view(message, member.name) for member in fields(cls)})

    def cut(self, events: slice, objects: slice) -> Self:
        """Return the part of a range of events with its objects."""
        raise NotImplementedError

    @classmethod
    def join(cls, parts: Sequence[Self]) -> Self:
        """Join the parts of samples that follow one another."""
        return cls(**{member.name: _join(parts, member.name) for member in fields(cls)})

    def row_counts(self, events: int, objects: int) -> dict[str, int]:
        """Return how many rows each column must have."""
        raise NotImplementedError

    def check(self, name: str, events: int, objects: int) -> None:
        """Raise ArgumentError where the length of a column does not match."""
        for member, rows in self.row_counts(events, objects).items():
            column = getattr(self, member)
            if column is not None and len(column) != rows:
                raise ArgumentError(f"{len(column)} rows, {rows} are needed", f"{name}.{member}")

    def _rows(self, ranges: dict[str, slice]) -> dict[str, Any]:
        """Cut each column to its range."""
        given = {name: getattr(self, name) for name in ranges}
        return {name: None if c is None else c[ranges[name]] for name, c in given.items()}


@dataclass(frozen=True)
class BeamCandidates(Part):
    """Tagged beam candidates, event after event.

    >>> tagged = kinegate.BeamCandidates(
    ...     offsets=np.array([0, 2, 3], np.int32), energy_gev=np.array([1.2, 1.3, 2.0]),
    ...     sigma_gev=np.full(3, 0.0014), time_ns=np.array([0.1, 7.0, -0.2]))
    >>> tagged.cut(slice(0, 1), slice(0, 2)).energy_gev
    array([1.2, 1.3])
    """

    offsets: NDArray[np.int32]
    """First candidate of each event and the total at the end, shape (events + 1,)."""
    energy_gev: NDArray[np.float64]
    """Energy, shape (candidates,)."""
    sigma_gev: NDArray[np.float64]
    """Standard deviation of the energy, shape (candidates,)."""
    time_ns: NDArray[np.float64]
    """Time minus the event's own, shape (candidates,)."""

    def cut(self, events: slice, objects: slice) -> Self:
        """Return the part of a range of events with its objects."""
        del objects
        offsets, rows = cut_offsets(self.offsets, events)
        names = ("energy_gev", "sigma_gev", "time_ns")
        return type(self)(offsets=offsets, **self._rows(dict.fromkeys(names, rows)))

    def row_counts(self, events: int, objects: int) -> dict[str, int]:
        """Return how many rows each column must have."""
        del objects
        rows = int(self.offsets[-1])
        return {"offsets": events + 1, "energy_gev": rows, "sigma_gev": rows, "time_ns": rows}


@dataclass(frozen=True)
class Vertices(Part):
    """Event vertices.

    >>> vertex = kinegate.Vertices(
    ...     x_m=np.zeros(2), y_m=np.zeros(2), z_m=np.array([0.01, -0.02]))
    >>> vertex.cut(slice(1, 2), slice(2, 4)).z_m
    array([-0.02])
    """

    x_m: NDArray[np.float64]
    """x in metre, shape (events,)."""
    y_m: NDArray[np.float64]
    """y in metre, shape (events,)."""
    z_m: NDArray[np.float64]
    """z in metre, shape (events,)."""
    covariance_m2: NDArray[np.float64] | None = None
    """Upper triangles in square metre, shape (events, 6); None where not known."""

    def cut(self, events: slice, objects: slice) -> Self:
        """Return the part of a range of events with its objects."""
        del objects
        return type(self)(**self._rows({m.name: events for m in fields(self)}))

    def row_counts(self, events: int, objects: int) -> dict[str, int]:
        """Return how many rows each column must have."""
        del objects
        return {m.name: events for m in fields(self)}


@dataclass(frozen=True)
class VertexGroups(Part):
    """Vertices of displaced decays, and which objects come from them.

    >>> late = kinegate.VertexGroups(
    ...     groups=np.array([0, 1, 1], np.int32), offsets=np.array([0, 1], np.int32),
    ...     x_m=np.zeros(1), y_m=np.zeros(1), z_m=np.array([0.05]))
    >>> late.groups  # the last two of three objects come from 5 cm downstream
    array([0, 1, 1], dtype=int32)
    """

    groups: NDArray[np.int32]
    """Group of each object, 0 for the event vertex, shape (objects,)."""
    offsets: NDArray[np.int32]
    """First group of each event and the total at the end, shape (events + 1,)."""
    x_m: NDArray[np.float64]
    """x in metre, shape (groups,)."""
    y_m: NDArray[np.float64]
    """y in metre, shape (groups,)."""
    z_m: NDArray[np.float64]
    """z in metre, shape (groups,)."""
    covariance_m2: NDArray[np.float64] | None = None
    """Upper triangles in square metre, shape (groups, 6); None where not known."""

    def cut(self, events: slice, objects: slice) -> Self:
        """Return the part of a range of events with its objects."""
        offsets, rows = cut_offsets(self.offsets, events)
        names = ("x_m", "y_m", "z_m", "covariance_m2")
        ranges = {"groups": objects, **dict.fromkeys(names, rows)}
        return type(self)(offsets=offsets, **self._rows(ranges))

    def row_counts(self, events: int, objects: int) -> dict[str, int]:
        """Return how many rows each column must have."""
        positions = dict.fromkeys(("x_m", "y_m", "z_m", "covariance_m2"), int(self.offsets[-1]))
        return {"groups": objects, "offsets": events + 1, **positions}


@dataclass(frozen=True)
class ClusterPositions(Part):
    """Where objects hit the calorimeter; NaN where they did not.

    >>> clusters = kinegate.ClusterPositions(
    ...     x_m=np.array([0.3, np.nan]), y_m=np.array([0.4, np.nan]), z_m=np.array([0.9, np.nan]))
    >>> clusters.cut(slice(0, 1), slice(0, 1)).z_m
    array([0.9])
    """

    x_m: NDArray[np.float64]
    """x in metre, shape (objects,)."""
    y_m: NDArray[np.float64]
    """y in metre, shape (objects,)."""
    z_m: NDArray[np.float64]
    """z in metre, shape (objects,)."""

    def cut(self, events: slice, objects: slice) -> Self:
        """Return the part of a range of events with its objects."""
        del events
        return type(self)(**self._rows({m.name: objects for m in fields(self)}))

    def row_counts(self, events: int, objects: int) -> dict[str, int]:
        """Return how many rows each column must have."""
        del events
        return {m.name: objects for m in fields(self)}


@dataclass(frozen=True)
class Polarisation(Part):
    """Polarisation of the beam photon of each event.

    >>> beam = kinegate.Polarisation(
    ...     linear_degree=np.array([0.8]), plane_rad=np.array([0.0]),
    ...     circular_degree=np.array([0.0]))
    >>> beam.linear_degree
    array([0.8])
    """

    linear_degree: NDArray[np.float64]
    """Degree of linear polarisation within [0, 1], shape (events,)."""
    plane_rad: NDArray[np.float64]
    """Azimuth of its plane in radian, shape (events,)."""
    circular_degree: NDArray[np.float64]
    """Degree of circular polarisation within [-1, 1], shape (events,)."""

    def cut(self, events: slice, objects: slice) -> Self:
        """Return the part of a range of events with its objects."""
        del objects
        return type(self)(**self._rows({m.name: events for m in fields(self)}))

    def row_counts(self, events: int, objects: int) -> dict[str, int]:
        """Return how many rows each column must have."""
        del objects
        return {m.name: events for m in fields(self)}


def cut_offsets(offsets: NDArray[np.int32], events: slice) -> tuple[NDArray[np.int32], slice]:
    """Return the offsets of a range of events and the rows that they span."""
    first, last = int(offsets[events.start]), int(offsets[events.stop])
    return offsets[events.start : events.stop + 1] - np.int32(first), slice(first, last)


def join_offsets(parts: Sequence[NDArray[np.int32]]) -> NDArray[np.int32]:
    """Join offsets of samples that follow one another."""
    totals = np.cumsum([0, *(int(p[-1]) for p in parts)])
    shifted = [p[:-1] + t for p, t in zip(parts, totals, strict=False)]
    return np.concatenate([*shifted, totals[-1:]]).astype(np.int32)


def _view(message: Any, name: str) -> NDArray[Any] | None:
    descriptor = message.DESCRIPTOR.fields_by_name[name]
    if descriptor.has_presence and not message.HasField(name):
        return None
    raw = getattr(message, name)
    if name in _WHOLE:
        return columns.view(raw, np.int32)
    column = columns.view(raw, np.float64)
    return column.reshape(-1, _TRIANGLE) if name.startswith("covariance") else column


def _join(parts: Sequence[Part], name: str) -> Any:
    found = [getattr(p, name) for p in parts]
    missing = sum(c is None for c in found)
    if missing == len(found):
        return None
    if missing:
        raise ArgumentError(f"{name} is present in some samples only")
    return join_offsets(found) if name == "offsets" else np.concatenate(found)
