"""pandas and Arrow, where they are installed."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any, Final

import numpy as np

from kinegate.arguments import array
from kinegate.coordinates import COORDINATES, MASKS, coordinate_set
from kinegate.errors import ArgumentError, UsageError, shortened

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from kinegate.events import Events
    from kinegate.verdicts import Verdicts

__all__: list[str] = []

_EXTRAS: Final = {"pyarrow": "arrow", "matplotlib": "plot", "pandas": "pandas"}


def needed(module: str) -> Any:
    """Import an optional package, or say how to get it."""
    try:
        return importlib.import_module(module)
    except ImportError:
        extra = _EXTRAS[module.partition(".")[0]]
        raise UsageError(
            f"{module} is not installed; the extra {extra!r} of this package brings it: "
            f"pip install './clients/python[{extra}]' in a clone of the repository"
        ) from None


def events_to_pandas(events: Events) -> Any:
    """Make a DataFrame of the objects."""
    pandas = needed("pandas")
    counts = np.diff(events.offsets)
    event_ids = np.repeat(events.event_ids, counts)
    within = np.arange(len(event_ids)) - np.repeat(events.offsets[:-1], counts)
    index = pandas.MultiIndex.from_arrays([event_ids, within], names=["event_id", "object"])
    masks = {name: mask for name in MASKS if (mask := getattr(events, name)) is not None}
    return pandas.DataFrame({**events.values, "class": events.classes, **masks}, index=index)


def events_from_frame(frame: Any) -> dict[str, Any]:
    """Return the arguments that make events from rows of objects."""
    if not hasattr(frame, "reset_index"):
        raise ArgumentError(f"{shortened(frame)} is not a pandas DataFrame", "frame", frame)
    named = [name for name in frame.index.names if name is not None]
    if named:
        frame = frame.reset_index(level=named)
    chosen = coordinate_set(list(frame.columns), ("event_id", "class"))
    whole = {name: frame[name].to_numpy() for name in frame.columns}
    event_ids = array("event_id", whole["event_id"], np.int64)
    starts = _first_rows(event_ids, whole.get("object"))
    arguments: dict[str, Any] = {
        "classes": whole["class"],
        "offsets": np.append(starts, len(event_ids)).astype(np.int32),
        "event_ids": event_ids[starts],
    }
    return arguments | {n: whole[n] for n in (*COORDINATES[chosen], *MASKS) if n in whole}


def _first_rows(event_ids: NDArray[np.int64], objects: Any) -> NDArray[np.intp]:
    """Return the first row of each event; rows of one event must follow one another."""
    if objects is None:
        starts = np.flatnonzero(np.diff(event_ids, prepend=event_ids[:1] - 1))
        torn = len(np.unique(event_ids[starts])) < len(starts)
    else:
        # One event id may stand for several events, as in files of several runs.
        places = array("object", objects, np.int64)
        starts = np.flatnonzero(places == 0)
        first = np.zeros(len(places), np.intp)
        first[starts] = starts
        first = np.maximum.accumulate(first)
        torn = bool(np.any(places != np.arange(len(places)) - first)) or bool(
            np.any(event_ids != event_ids[first])
        )
    if torn:
        raise ArgumentError(
            "the rows of an event do not follow one another, with objects 0, 1, ...; sort by "
            "event_id and object",
            "frame",
        )
    return starts


def verdicts_table(verdicts: Verdicts) -> dict[str, NDArray[Any]]:
    """Make columns of the events."""
    table: dict[str, NDArray[Any]] = {
        "event_id": verdicts.event_ids,
        "status": verdicts.status_names,
        "gate": verdicts.gate,
    }
    table |= {f"accepted {name}": column for name, column in verdicts.accepted.items()}
    table |= {f"best {name}": verdicts.best_names(name) for name in verdicts.best}
    return table


def verdicts_to_pandas(verdicts: Verdicts) -> Any:
    """Make a DataFrame of the events."""
    return needed("pandas").DataFrame(verdicts_table(verdicts)).set_index("event_id")


def verdicts_to_arrow(verdicts: Verdicts) -> Any:
    """Make an Arrow table of the events."""
    return needed("pyarrow").table(verdicts_table(verdicts))


def entries_table(verdicts: Verdicts) -> dict[str, NDArray[Any]]:
    """Make columns of the entries, observables by label; NaN where one is not recorded."""
    entries = verdicts.entries
    if entries is None:
        raise ArgumentError("the verdicts carry no entries; judge with entries='accepted' or 'all'")
    names = np.array([h.name for h in verdicts.hypotheses], object)
    table: dict[str, NDArray[Any]] = {
        "event_id": verdicts.event_ids[entries.events],
        "hypothesis": names[entries.hypothesis],
        "beam_row": entries.beam_row,
        "weight": entries.weight,
    }
    for name in ("chi_square", "degrees_of_freedom", "probability"):
        if (of_fit := getattr(entries, name)) is not None:
            table[name] = of_fit
    for hypothesis in verdicts.hypotheses:
        for label in hypothesis.observables:
            column = table.setdefault(label, np.full(len(entries.weight), np.nan))
            found = verdicts.observable(hypothesis.name, label)
            column[found.entries] = found.values
            if found.uncertainties is not None:
                spread = table.setdefault(f"{label} uncertainty", np.full(len(column), np.nan))
                spread[found.entries] = found.uncertainties
    return table


def entries_to_pandas(verdicts: Verdicts) -> Any:
    """Make a DataFrame of the entries."""
    return needed("pandas").DataFrame(entries_table(verdicts))


def entries_to_arrow(verdicts: Verdicts) -> Any:
    """Make an Arrow table of the entries."""
    return needed("pyarrow").table(entries_table(verdicts))
