"""pandas and Arrow, where they are installed."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any, Final

import numpy as np

from kinegate.errors import ArgumentError, UsageError

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
            f"{module} is not installed; pip install 'kinegate[{extra}]' brings it"
        ) from None


def events_to_pandas(events: Events) -> Any:
    """Make a DataFrame of the objects."""
    pandas = needed("pandas")
    counts = np.diff(events.offsets)
    event_ids = np.repeat(events.event_ids, counts)
    within = np.arange(len(event_ids)) - np.repeat(events.offsets[:-1], counts)
    index = pandas.MultiIndex.from_arrays([event_ids, within], names=["event_id", "object"])
    return pandas.DataFrame({**events.values, "class": events.classes}, index=index)


def verdicts_to_pandas(verdicts: Verdicts) -> Any:
    """Make a DataFrame of the events."""
    pandas = needed("pandas")
    table: dict[str, Any] = {"status": verdicts.status_names, "gate": verdicts.gate}
    table |= {f"accepted {name}": column for name, column in verdicts.accepted.items()}
    table |= {f"best {name}": verdicts.best_names(name) for name in verdicts.best}
    return pandas.DataFrame(table, index=pandas.Index(verdicts.event_ids, name="event_id"))


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
