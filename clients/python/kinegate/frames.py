"""pandas and Arrow, where they are installed."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any, Final

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import NDArray

    from kinegate.events import Events
    from kinegate.verdicts import Verdicts

__all__: list[str] = []

_MASKS: Final = ("measured_mask", "species_mask")
_BEAM: Final = ("energy_gev", "sigma_gev", "time_ns")
_EXTRAS: Final = {"pyarrow": "arrow", "matplotlib": "plot", "pandas": "pandas"}


def needed(module: str) -> Any:
    """Import an optional package, or say how to get it."""
    try:
        return importlib.import_module(module)
    except ImportError:
        extra = _EXTRAS[module.partition(".")[0]]
        raise ImportError(
            f"{module} is not installed; pip install 'kinegate[{extra}]' brings it"
        ) from None


def events_to_pandas(events: Events) -> Any:
    """Make a DataFrame of the objects."""
    pandas = needed("pandas")
    counts = np.diff(events.offsets)
    ids = np.repeat(events.ids, counts)
    within = np.arange(len(ids)) - np.repeat(events.offsets[:-1], counts)
    index = pandas.MultiIndex.from_arrays([ids, within], names=["event_id", "object"])
    return pandas.DataFrame({**events.values, "class": events.classes}, index=index)


def events_to_arrow(events: Events) -> Any:
    """Make a table of one row an event."""
    arrow = needed("pyarrow")

    def lists(values: Any, offsets: NDArray[np.int32]) -> Any:
        return arrow.ListArray.from_arrays(arrow.array(offsets), values)

    table = {"event_id": arrow.array(events.ids)}
    of_objects = {**events.values, "class": events.classes}
    of_objects |= {n: c for n in _MASKS if (c := getattr(events, n)) is not None}
    table |= {n: lists(arrow.array(column), events.offsets) for n, column in of_objects.items()}
    if events.covariance is not None:
        triangles = arrow.FixedSizeListArray.from_arrays(arrow.array(events.covariance.ravel()), 6)
        table["covariance"] = lists(triangles, events.offsets)
    if (beam := events.beam) is not None:
        columns = {name: arrow.array(getattr(beam, name)) for name in _BEAM}
        table |= {f"beam_{n}": lists(column, beam.offsets) for n, column in columns.items()}
    table |= {f"extra_{name}": arrow.array(column) for name, column in events.extra.items()}
    marks = {"coordinates": events.coordinates, "run_number": str(events.run_number)}
    return arrow.table(table).replace_schema_metadata(marks)


def events_from_arrow(table: Any, known: Mapping[str, tuple[str, ...]]) -> dict[str, Any]:
    """Return the arguments that make events; columns of one chunk are viewed, not copied."""
    marks = {k.decode(): v.decode() for k, v in (table.schema.metadata or {}).items()}
    coordinates = marks.get("coordinates", "")
    if coordinates not in known:
        raise ValueError(f"coordinates {coordinates!r} of the table are none of {', '.join(known)}")
    whole = {name: _one_chunk(table[name]) for name in table.column_names}

    def numbers(name: str) -> NDArray[Any]:
        values = whole[name]
        while hasattr(values, "flatten") and hasattr(values.type, "value_type"):
            values = values.flatten()
        array: NDArray[Any] = values.to_numpy(zero_copy_only=False)
        return array

    def starts(name: str) -> NDArray[np.int32]:
        offsets = whole[name].offsets.to_numpy()
        return np.asarray(offsets - offsets[0], np.int32)

    arguments: dict[str, Any] = {
        "classes": numbers("class"),
        "offsets": starts("class"),
        "ids": numbers("event_id"),
        "run_number": int(marks.get("run_number", "0")),
        "extra": {n.removeprefix("extra_"): numbers(n) for n in whole if n.startswith("extra_")},
    }
    arguments |= {name: numbers(name) for name in (*known[coordinates], *_MASKS) if name in whole}
    if "covariance" in whole:
        arguments["covariance"] = numbers("covariance").reshape(-1, 6)
    if "beam_energy_gev" in whole:
        beam = {name: numbers(f"beam_{name}") for name in _BEAM}
        arguments["beam"] = {"offsets": starts("beam_energy_gev"), **beam}
    return arguments


def _one_chunk(column: Any) -> Any:
    return column.chunk(0) if column.num_chunks == 1 else column.combine_chunks()


def verdicts_to_pandas(verdicts: Verdicts) -> Any:
    """Make a DataFrame of the events."""
    pandas = needed("pandas")
    table: dict[str, Any] = {"status": verdicts.status_names, "gate": verdicts.gate}
    table |= {f"accepted {name}": column for name, column in verdicts.accepted.items()}
    table |= {f"best {name}": verdicts.best_names(name) for name in verdicts.best}
    return pandas.DataFrame(table, index=pandas.Index(verdicts.ids, name="event_id"))


def entries_table(verdicts: Verdicts) -> dict[str, NDArray[Any]]:
    """Make columns of the entries, observables by label; NaN where one is not recorded."""
    entries = verdicts.entries
    if entries is None:
        raise ValueError("the verdicts carry no entries; judge with entries='accepted' or 'all'")
    names = np.array([h.name for h in verdicts.hypotheses], object)
    table: dict[str, NDArray[Any]] = {
        "event_id": verdicts.ids[entries.events],
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
