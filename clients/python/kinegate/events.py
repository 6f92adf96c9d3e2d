"""Measured events as numpy columns.

Objects follow one another, event after event; `offsets` says where each event begins.
A sample may be of any size; the client cuts it into blocks of the contract's size.
"""

from __future__ import annotations

from dataclasses import dataclass, field, fields, replace
from typing import TYPE_CHECKING, Any, Final, Self

import numpy as np

from kinegate import arrow, columns, csvfile, frames
from kinegate.arguments import array, integer
from kinegate.coordinates import COORDINATES, MASKS
from kinegate.errors import ArgumentError, UsageError, shortened
from kinegate.parts import (
    BeamCandidates,
    ClusterPositions,
    Part,
    Polarisation,
    VertexGroups,
    Vertices,
    cut_offsets,
    join_offsets,
)
from kinegate.v1 import event_pb2

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence
    from os import PathLike

    from numpy.typing import ArrayLike, NDArray

__all__ = ["COORDINATES", "NEGATIVE", "NEUTRAL", "PHOTON", "POSITIVE", "Events"]

PHOTON: Final = int(event_pb2.OBJECT_CLASS_PHOTON)
"""Class of a photon: a calorimeter cluster without a track."""
POSITIVE: Final = int(event_pb2.OBJECT_CLASS_POSITIVE)
"""Class of a track of positive charge."""
NEGATIVE: Final = int(event_pb2.OBJECT_CLASS_NEGATIVE)
"""Class of a track of negative charge."""
NEUTRAL: Final = int(event_pb2.OBJECT_CLASS_NEUTRAL)
"""Class of a neutral object that is no photon."""

_TRIANGLE: Final = 6  # elements of a symmetric matrix of three parameters
_PARTS: Final[Mapping[str, type[Part]]] = {
    "beam": BeamCandidates,
    "vertex": Vertices,
    "vertex_group": VertexGroups,
    "cluster_position": ClusterPositions,
    "polarisation": Polarisation,
}


@dataclass(frozen=True, eq=False)
class Events:
    """Events in columns; :meth:`of` is the convenient way to make them.

    A slice of events is again events and shares their columns.

    >>> kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    <3000 events, 6000 objects in momentum_mass, with species_mask>
    """

    coordinates: str
    """Name of the coordinate set, a key of :data:`COORDINATES`."""
    values: dict[str, NDArray[np.float64]]
    """Columns of the coordinate set by name, each of shape (objects,)."""
    offsets: NDArray[np.int32]
    """First object of each event and the total at the end, shape (events + 1,)."""
    classes: NDArray[np.uint8]
    """Class of each object, shape (objects,)."""
    event_ids: NDArray[np.int64]
    """Event ids, shape (events,)."""
    run_number: int = 0
    """Run number."""
    measured_mask: NDArray[np.uint8] | None = None
    """Bit k is set where parameter k was measured, shape (objects,); None for all."""
    species_mask: NDArray[np.uint8] | None = None
    """Bit 0 e, 1 mu, 2 pi, 3 K, 4 p, 5 d, shape (objects,); 0 and None are any."""
    covariance: NDArray[np.float64] | None = None
    """Upper triangles of the parameters' covariances, shape (objects, 6)."""
    beam: BeamCandidates | None = None
    """Tagged beam candidates; None where there are none."""
    vertex: Vertices | None = None
    """Event vertices; None where not measured."""
    vertex_group: VertexGroups | None = None
    """Vertices of displaced decays; None where every object is from the event vertex."""
    cluster_position: ClusterPositions | None = None
    """Calorimeter clusters; None where not known."""
    polarisation: Polarisation | None = None
    """Polarisation of the beam; None for none."""
    extra: dict[str, NDArray[Any]] = field(default_factory=dict)
    """Columns of shape (events,) that travel along and are never sent."""

    @classmethod
    def of(
        cls,
        *,
        classes: ArrayLike,
        offsets: ArrayLike | None = None,
        event_ids: ArrayLike | None = None,
        **others: Any,
    ) -> Self:
        """Make events from columns named as in :data:`COORDINATES`.

        Args:
            classes: Class of each object, of the shape of the columns, or of the shape of
                one event where all events are alike.
            offsets: Shape (events + 1,); not needed for columns of shape (events, n),
                which stand for n objects in every event.
            event_ids: Event ids; 0, 1, ... by default.
            others: The columns of one coordinate set, and members of this class.

        >>> events = Events.of(momentum_gev=[[0.5, 0.7], [0.4, 0.8]],
        ...                    theta_rad=[[0.3, 1.2], [0.7, 0.9]],
        ...                    phi_rad=[[0.1, 3.0], [0.2, -2.8]],
        ...                    classes=[PHOTON, PHOTON])
        >>> len(events), events.coordinates, events["theta_rad"][events.offsets[1]:]
        (2, 'momentum_angles', array([0.7, 0.9]))
        """
        members = {f.name for f in fields(cls)}
        for name in others:
            if name not in members and not any(name in names for names in COORDINATES.values()):
                known = ", ".join(sorted(members - {"coordinates", "values"}))
                message = f"unknown; beside the columns of a coordinate set there are {known}"
                raise ArgumentError(message, name)
        given = {k: array(k, v, np.float64) for k, v in others.items() if k not in members}
        chosen = next((n for n, names in COORDINATES.items() if set(names) == set(given)), None)
        if chosen is None:
            known = "; ".join(f"{n}: {', '.join(names)}" for n, names in COORDINATES.items())
            raise ArgumentError(f"columns {', '.join(given)} are no coordinate set; known: {known}")
        shape = next(iter(given.values())).shape
        for name, column in given.items():
            if column.shape != shape:
                raise ArgumentError(f"shape {column.shape}, {shape} is needed", name)
        starts = _offsets(offsets, shape)
        kinds = array("classes", classes, np.uint8)
        try:
            kinds = np.broadcast_to(kinds, shape).ravel()
        except ValueError:
            message = (
                f"shape {kinds.shape} is neither that of the columns, {shape}, nor of one event"
            )
            raise ArgumentError(message, "classes") from None
        events = cls(
            chosen,
            {name: given[name].ravel() for name in COORDINATES[chosen]},
            starts,
            kinds,
            np.arange(len(starts) - 1)
            if event_ids is None
            else array("event_ids", event_ids, np.int64),
            **{k: _member(k, v) for k, v in others.items() if k in members},
        )
        events.check()
        return events

    def check(self) -> None:
        """Raise ArgumentError where the length of a column does not match."""
        events, objects = len(self), len(self.classes)
        if len(self.offsets) == 0 or self.offsets[0] != 0 or np.any(np.diff(self.offsets) < 0):
            raise ArgumentError("offsets must begin with 0 and never fall")
        if self.offsets[-1] != objects:
            raise ArgumentError(
                f"offsets end at {self.offsets[-1]}, but there are {objects} objects"
            )
        rows = dict.fromkeys((*self.values, *MASKS, "covariance"), objects)
        rows |= {"event_ids": events, **dict.fromkeys(self.extra, events)}
        for name, needed in rows.items():
            column = self._column(name)
            if column is not None and len(column) != needed:
                raise ArgumentError(f"{len(column)} rows, {needed} are needed", name)
        for name in _PARTS:
            if (part := getattr(self, name)) is not None:
                part.check(name, events, objects)

    def _column(self, name: str) -> NDArray[Any] | None:
        for owner in (self.values, self.extra):
            if name in owner:
                return owner[name]
        column: NDArray[Any] | None = getattr(self, name)
        return column

    @classmethod
    def read_csv(cls, path: str | PathLike[str]) -> Self:
        """Read events of a fixed number of tracks from a file of measured leptons.

        The first line names the columns: px1, py1, pz1, Q1, PID1 and so on for each track;
        Run and Event; anything else travels along in `extra`. The mass of each lepton
        follows from its PID; without, the tracks are muons.

        >>> Events.read_csv("testdata/open/dimuon_2011A.csv").extra["M"][:2]
        array([89.9557, 88.6081])
        """
        return cls.of(**csvfile.read(path))

    def __len__(self) -> int:
        return len(self.offsets) - 1

    def __getitem__(self, name: str) -> NDArray[np.float64]:
        if name not in self.values:
            raise ArgumentError(
                f"no column {name!r}; there are {', '.join(self.values)}", "name", name
            )
        return self.values[name]

    def __iter__(self) -> Iterator[Any]:
        raise UsageError("iterate over events.blocks(), or over columns")

    def __repr__(self) -> str:
        parts = [n for n in (*MASKS, "covariance", *_PARTS) if getattr(self, n) is not None]
        carries = f", with {', '.join(parts)}" if parts else ""
        return f"<{len(self)} events, {len(self.classes)} objects in {self.coordinates}{carries}>"

    def cut(self, start: int, stop: int) -> Self:
        """Return the events from start up to, not including, stop; columns are shared.

        >>> Events.read_csv("testdata/open/dimuon_2011A.csv").cut(5, 8)
        <3 events, 6 objects in momentum_mass, with species_mask>
        """
        start, stop = integer("start", start), integer("stop", stop)
        start, stop, _ = slice(start, stop).indices(len(self))
        events = slice(start, max(start, stop))
        offsets, objects = cut_offsets(self.offsets, events)
        cut: dict[str, Any] = {}
        for name in (*MASKS, "covariance"):
            column = getattr(self, name)
            cut[name] = None if column is None else column[objects]
        for name in _PARTS:
            part = getattr(self, name)
            cut[name] = None if part is None else part.cut(events, objects)
        return replace(
            self,
            values={name: column[objects] for name, column in self.values.items()},
            offsets=offsets,
            classes=self.classes[objects],
            event_ids=self.event_ids[events],
            extra={name: column[events] for name, column in self.extra.items()},
            **cut,
        )

    def blocks(
        self, events_per_block: int = 1000, candidates_per_block: int | None = None
    ) -> Iterator[Self]:
        """Cut the sample into blocks that share its columns.

        Args:
            events_per_block: Most events a block.
            candidates_per_block: Most beam candidates a block, unless one event has more.

        >>> sample = Events.read_csv("testdata/open/dimuon_2011A.csv")
        >>> [len(block) for block in sample.blocks(1300)]
        [1300, 1300, 400]
        """
        integer("events_per_block", events_per_block, lowest=1)
        start = 0
        while start < len(self):
            stop = min(start + events_per_block, len(self))
            if candidates_per_block is not None and self.beam is not None:
                offsets = self.beam.offsets
                most = int(offsets[start]) + candidates_per_block
                stop = min(stop, int(np.searchsorted(offsets, most, side="right")) - 1)
                stop = max(stop, start + 1)
            yield self.cut(start, stop)
            start = stop

    def to_message(self, sequence: int = 0) -> event_pb2.EventBlock:
        """Make the message of one block.

        >>> sample = Events.read_csv("testdata/open/dimuon_2011A.csv").cut(0, 10)
        >>> back = Events.from_message(sample.to_message())
        >>> bool((back["px_gev"] == sample["px_gev"]).all())
        True
        """
        block = event_pb2.EventBlock(
            sequence=sequence,
            event_ids=columns.encode(self.event_ids, np.int64),
            run_number=self.run_number,
            object_offsets=columns.encode(self.offsets, np.int32),
            object_classes=columns.encode(self.classes, np.uint8),
        )
        coordinates = getattr(block, self.coordinates)
        coordinates.SetInParent()
        for name, column in self.values.items():
            setattr(coordinates, name, columns.encode(column, np.float64))
        for name in MASKS:
            if (mask := getattr(self, name)) is not None:
                getattr(block, name).SetInParent()
                getattr(block, name).masks = columns.encode(mask, np.uint8)
        if self.covariance is not None:
            block.covariance.SetInParent()
            block.covariance.elements = columns.encode(self.covariance, np.float64)
        for name in _PARTS:
            if (part := getattr(self, name)) is not None:
                part.write(getattr(block, name))
        return block

    @classmethod
    def from_message(cls, block: event_pb2.EventBlock) -> Self:
        """View the columns of a message; arrays are read-only.

        The bytes that protobuf hands out are viewed, not copied again.
        """
        chosen = block.WhichOneof("coordinates")
        if chosen is None:
            raise ArgumentError("the block has no coordinates")
        coordinates = getattr(block, chosen)
        present = {f.name: value for f, value in block.ListFields()}
        optional: dict[str, Any] = {
            name: columns.view(present[name].masks, np.uint8) for name in MASKS if name in present
        }
        optional |= {name: _PARTS[name].read(present[name]) for name in _PARTS if name in present}
        if "covariance" in present:
            elements = columns.view(block.covariance.elements, np.float64)
            optional["covariance"] = elements.reshape(-1, 6)
        events = cls(
            chosen,
            {n: columns.view(getattr(coordinates, n), np.float64) for n in COORDINATES[chosen]},
            columns.view(block.object_offsets, np.int32),
            columns.view(block.object_classes, np.uint8),
            columns.view(block.event_ids, np.int64),
            block.run_number,
            **optional,
        )
        events.check()
        return events

    @classmethod
    def concatenate(cls, samples: Sequence[Events]) -> Self:
        """Join samples of the same coordinate set into one.

        >>> sample = Events.read_csv("testdata/open/dimuon_2011A.csv")
        >>> len(Events.concatenate(list(sample.blocks(700))))
        3000
        """
        given: Sequence[Any] = samples
        for sample in given:
            if not isinstance(sample, Events):
                message = f"{shortened(sample)} is not kinegate.Events"
                raise ArgumentError(message, "samples", sample)
        if len({s.coordinates for s in samples}) != 1:
            raise ArgumentError("samples to join must be there, and in one coordinate set")
        first = samples[0]
        optional: dict[str, Any] = {}
        for name in (*MASKS, "covariance", *_PARTS):
            found = [getattr(s, name) for s in samples]
            if all(f is not None for f in found):
                join = _PARTS[name].join if name in _PARTS else np.concatenate
                optional[name] = join(found)
            elif any(f is not None for f in found):
                raise ArgumentError(f"{name} is present in some samples only")
        return cls(
            first.coordinates,
            {n: np.concatenate([s.values[n] for s in samples]) for n in first.values},
            join_offsets([s.offsets for s in samples]),
            np.concatenate([s.classes for s in samples]),
            np.concatenate([s.event_ids for s in samples]),
            first.run_number,
            extra={n: np.concatenate([s.extra[n] for s in samples]) for n in first.extra},
            **optional,
        )

    def to_pandas(self) -> Any:
        """Return a pandas DataFrame of the objects, indexed by event id and object.

        Coordinates, class and masks are columns. An event without objects has no row.

        >>> Events.read_csv("testdata/open/dimuon_2011A.csv").to_pandas().columns.to_list()
        ['px_gev', 'py_gev', 'pz_gev', 'mass_gev', 'class', 'species_mask']
        """
        return frames.events_to_pandas(self)

    @classmethod
    def from_pandas(cls, frame: Any) -> Self:
        """Make events from a pandas DataFrame of one row an object.

        Columns and levels of the index are known by their names: `event_id`; `object`, the
        place in the event from 0, needed only where an event id stands for several events;
        `class`, one of the constants of this module; the columns of one coordinate set, in
        GeV and radian as they are called; `measured_mask` and `species_mask` where there are
        any. The rows of an event follow one another. Other columns are left out.

        >>> import pandas
        >>> frame = pandas.DataFrame({
        ...     "event_id": [7, 7, 9], "class": PHOTON, "momentum_gev": [0.5, 0.7, 0.4],
        ...     "theta_rad": [0.3, 1.2, 0.7], "phi_rad": [0.1, 3.0, 0.2]})
        >>> Events.from_pandas(frame)
        <2 events, 3 objects in momentum_angles>
        """
        return cls.of(**frames.events_from_frame(frame))

    def to_arrow(self) -> Any:
        """Return an Arrow table of one row an event, with lists of its objects inside.

        The lists view the columns without a copy. All optional columns and `extra` go along.

        >>> sample = Events.read_csv("testdata/open/dimuon_2011A.csv")
        >>> len(Events.from_arrow(sample.to_arrow()))
        3000
        """
        return arrow.events_to_table(self, _PARTS)

    @classmethod
    def from_arrow(cls, table: Any) -> Self:
        """Make events from an Arrow table of one row an event, as :meth:`to_arrow` makes it.

        A table from elsewhere will do, by the names of its columns: `class`, lists of the
        constants of this module; the columns of one coordinate set, lists as long, in GeV and
        radian as they are called; `event_id`, else events are counted from 0. `measured_mask`,
        `species_mask`, `covariance` (lists of six numbers an object), columns of parts such as
        `beam_energy_gev`, and numbers `extra_...` go along where they are there. Other columns
        are left out.

        >>> import pyarrow
        >>> table = pyarrow.table({
        ...     "class": [[PHOTON, PHOTON], [PHOTON]], "momentum_gev": [[0.5, 0.7], [0.4]],
        ...     "theta_rad": [[0.3, 1.2], [0.7]], "phi_rad": [[0.1, 3.0], [0.2]]})
        >>> Events.from_arrow(table)
        <2 events, 3 objects in momentum_angles>
        """
        return cls.of(**arrow.events_from_table(table, _PARTS))


def _member(name: str, value: Any) -> Any:
    """Read what is no coordinate: optional columns, parts, and what travels along."""
    if value is None:
        return None
    if name in MASKS:
        return array(name, value, np.uint8)
    if name == "covariance":
        column = array(name, value, np.float64)
        if column.shape[1:] != (_TRIANGLE,):
            message = f"shape {column.shape}, (objects, {_TRIANGLE}) is needed"
            raise ArgumentError(message, name)
        return column
    if name == "run_number":
        return integer(name, value)
    kind = _PARTS.get(name, dict if name == "extra" else object)
    if not isinstance(value, kind):
        raise ArgumentError(f"{shortened(value)} is not {kind.__name__}", name, value)
    return value


def _offsets(given: ArrayLike | None, shape: tuple[int, ...]) -> NDArray[np.int32]:
    if given is not None:
        return array("offsets", given, np.int32)
    if len(shape) != 2:  # noqa: PLR2004  # (events, objects of each)
        raise ArgumentError("columns of shape (objects,) need offsets; of shape (events, n) none")
    return np.arange(shape[0] + 1, dtype=np.int32) * np.int32(shape[1])
