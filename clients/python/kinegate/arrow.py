"""Events as Arrow tables: one row an event, with lists of its objects inside.

A column of objects is a list column; triangles of covariances are lists of fixed size. The
columns of an optional part carry its name in front, such as beam_energy_gev. Tables from elsewhere
are read by the names of their columns.
"""

from __future__ import annotations

from dataclasses import fields
from typing import TYPE_CHECKING, Any, Final

import numpy as np

from kinegate.coordinates import COORDINATES, MASKS, coordinate_set
from kinegate.errors import ArgumentError, shortened
from kinegate.frames import needed

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import NDArray

    from kinegate.events import Events
    from kinegate.parts import Part

__all__: list[str] = []

_TRIANGLE: Final = 6


def events_to_table(events: Events, parts: Mapping[str, type[Part]]) -> Any:
    """Make a table of one row an event; the columns are viewed, not copied."""
    table = {"event_id": _column(events.event_ids, None)}
    of_objects: dict[str, NDArray[Any]] = {**events.values, "class": events.classes}
    for name in (*MASKS, "covariance"):
        if (column := getattr(events, name)) is not None:
            of_objects[name] = column
    table |= {name: _column(column, events.offsets) for name, column in of_objects.items()}
    for name, kind in parts.items():
        if (part := getattr(events, name)) is not None:
            own = getattr(part, "offsets", None)
            for member in members(kind):
                if (column := getattr(part, member)) is not None:
                    spans = _spans(name, member, events.offsets, own)
                    table[f"{name}_{member}"] = _column(column, spans)
    table |= {f"extra_{name}": _column(column, None) for name, column in events.extra.items()}
    marks = {"coordinates": events.coordinates, "run_number": str(events.run_number)}
    return needed("pyarrow").table(table).replace_schema_metadata(marks)


def events_from_table(table: Any, parts: Mapping[str, type[Part]]) -> dict[str, Any]:
    """Return the arguments that make events; columns of one chunk are viewed, not copied."""
    if not hasattr(table, "schema"):
        raise ArgumentError(f"{shortened(table)} is not an Arrow table", "table", table)
    # What to_arrow notes is a hint alone: a table from elsewhere is known by its columns.
    marks = {k.decode(): v.decode() for k, v in (table.schema.metadata or {}).items()}
    chosen = marks.get("coordinates", "")
    if chosen not in COORDINATES or not {*COORDINATES[chosen], "class"} <= {*table.column_names}:
        chosen = coordinate_set(table.column_names, ["class"])
    whole = {name: _one_chunk(table[name]) for name in table.column_names}
    offsets = _starts("class", whole["class"])
    arguments: dict[str, Any] = {
        "classes": _numbers("class", whole["class"]),
        "offsets": offsets,
        "event_ids": _numbers("event_id", whole["event_id"]) if "event_id" in whole else None,
        "run_number": int(marks.get("run_number", "0")),
        "extra": {
            n.removeprefix("extra_"): _numbers(n, c)
            for n, c in whole.items()
            if n.startswith("extra_")
        },
    }
    for name in (*COORDINATES[chosen], *MASKS, "covariance"):
        if name in whole:
            if not np.array_equal(_starts(name, whole[name]), offsets):
                raise ArgumentError("its lists are not as long as those of class", name)
            arguments[name] = _numbers(name, whole[name])
    for name, kind in parts.items():
        found = {m: whole[f"{name}_{m}"] for m in members(kind) if f"{name}_{m}" in whole}
        if found:
            given = {member: _numbers(member, column) for member, column in found.items()}
            if "offsets" in {f.name for f in fields(kind)}:
                first = next(m for m in found if m != "groups")
                given["offsets"] = _starts(f"{name}_{first}", found[first])
            arguments[name] = kind(**given)
    return arguments


def members(kind: type[Part]) -> list[str]:
    """Return the columns of a part that hold values."""
    return [f.name for f in fields(kind) if f.name != "offsets"]


def _spans(
    part: str, member: str, objects: NDArray[np.int32], own: NDArray[np.int32] | None
) -> NDArray[np.int32] | None:
    """Return the offsets of a member's rows; None for one row an event."""
    if member == "groups" or part == "cluster_position":
        return objects
    return own


def _column(values: NDArray[Any], offsets: NDArray[np.int32] | None) -> Any:
    arrow = needed("pyarrow")
    if values.ndim > 1:
        flat = arrow.array(np.ascontiguousarray(values).ravel())
        column = arrow.FixedSizeListArray.from_arrays(flat, _TRIANGLE)
    else:
        column = arrow.array(values)
    if offsets is None:
        return column
    return arrow.ListArray.from_arrays(arrow.array(offsets), column)


def _one_chunk(column: Any) -> Any:
    return column.chunk(0) if column.num_chunks == 1 else column.combine_chunks()


def _numbers(name: str, values: Any) -> NDArray[Any]:
    """Flatten the lists of a column; triangles of covariances keep their six columns."""
    while hasattr(values, "flatten") and hasattr(values.type, "value_type"):
        values = values.flatten()
    array: NDArray[Any] = values.to_numpy(zero_copy_only=False)
    if "covariance" not in name:
        return array
    if len(array) % _TRIANGLE:
        raise ArgumentError(f"{len(array)} numbers, {_TRIANGLE} each are needed", name)
    return array.reshape(-1, _TRIANGLE)


def _starts(name: str, column: Any) -> NDArray[np.int32]:
    """Return where the list of each event begins."""
    if column.null_count or not hasattr(column.type, "value_type"):
        message = f"a column of {column.type} with {column.null_count} nulls; lists are needed"
        raise ArgumentError(message, name)
    if hasattr(column.type, "list_size"):
        return np.arange(len(column) + 1, dtype=np.int32) * np.int32(column.type.list_size)
    offsets = column.offsets.to_numpy()
    return np.asarray(offsets - offsets[0], np.int32)
