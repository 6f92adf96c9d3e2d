"""Files of measured leptons as CSV."""

from __future__ import annotations

import csv
from typing import TYPE_CHECKING, Any, Final

import numpy as np

from kinegate.arguments import text_of
from kinegate.errors import ArgumentError

if TYPE_CHECKING:
    from collections.abc import Mapping
    from os import PathLike

    from numpy.typing import NDArray

__all__ = ["read"]

# Class of tracks by charge, and mass and species bit by particle number of a lepton.
# Masses are those of the Review of Particle Physics; a hypothesis' own mass wins.
_CLASSES: Final = {1: 2, -1: 3}
_LEPTONS: Final = {11: (0.000510998951, 1), 13: (0.1056583755, 2)}


def read(path: str | PathLike[str]) -> dict[str, Any]:
    """Read the arguments of `Events.of` from a file."""
    lines = csv.reader(text_of("path", path).splitlines())
    names = next(lines, [])
    rows = list(lines)
    table = _table(path, names, rows)
    tracks = [n for n in range(1, 65) if f"px{n}" in table]
    if not tracks:
        raise ArgumentError(f"{path}: no column px1, so no tracks")

    def gathered(name: str) -> NDArray[np.float64]:
        try:
            return np.array([table.pop(f"{name}{n}") for n in tracks], np.float64).T
        except KeyError as error:
            raise ArgumentError(f"{path}: no column {error}") from None
        except ValueError as error:
            raise ArgumentError(f"{path}: columns {name}1, ...: {error}") from None

    def known(name: str, numbers: NDArray[np.float64], allowed: Mapping[int, Any]) -> None:
        for number in np.unique(numbers):
            if number not in allowed:
                these = ", ".join(map(str, allowed))
                raise ArgumentError(f"{path}: {name} {number:g} is none of {these}")

    charges = gathered("Q")
    # Without numbers the tracks are muons, as the detector identified them.
    numbers = np.abs(gathered("PID")) if f"PID{tracks[0]}" in table else np.full_like(charges, 13)
    known("charge", charges, _CLASSES)
    known("particle number", numbers, _LEPTONS)
    events: dict[str, Any] = {
        "px_gev": gathered("px"),
        "py_gev": gathered("py"),
        "pz_gev": gathered("pz"),
        "mass_gev": np.vectorize(lambda n: _LEPTONS[int(n)][0], otypes=[float])(numbers),
        "classes": np.vectorize(lambda q: _CLASSES[int(q)], otypes=[np.uint8])(charges),
    }
    mark = np.vectorize(lambda n: _LEPTONS[int(n)][1], otypes=[np.uint8])
    events["species_mask"] = mark(numbers).ravel()
    if "Event" in table:
        events["event_ids"] = _event_ids(path, table.pop("Event"))
    events["extra"] = {name: _column(values) for name, values in table.items()}
    return events


def _table(
    path: str | PathLike[str], names: list[str], rows: list[list[str]]
) -> dict[str, list[str]]:
    for number, row in enumerate(rows, 2):
        if len(row) != len(names):
            message = f"{path}: line {number}: {len(row)} fields, {len(names)} are needed"
            raise ArgumentError(message)
    return {name: [row[i] for row in rows] for i, name in enumerate(names)}


def _event_ids(path: str | PathLike[str], values: list[str]) -> NDArray[np.int64]:
    try:
        return np.array(values, np.int64)
    except (ValueError, OverflowError) as error:
        raise ArgumentError(f"{path}: column Event: {error}") from None


def _column(values: list[str]) -> NDArray[Any]:
    try:
        return np.array(values, np.float64)
    except ValueError:
        return np.array(values)
