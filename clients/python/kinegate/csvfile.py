"""Files of measured leptons as CSV."""

from __future__ import annotations

import csv
from typing import TYPE_CHECKING, Any, Final

import numpy as np

if TYPE_CHECKING:
    from os import PathLike

    from numpy.typing import NDArray

__all__ = ["read"]

# Class of tracks by charge, and mass and species bit by particle number of a lepton.
# Masses are those of the Review of Particle Physics; a hypothesis' own mass wins.
_CLASSES: Final = {1: 2, -1: 3}
_LEPTONS: Final = {11: (0.000510998951, 1), 13: (0.1056583755, 2)}


def read(path: str | PathLike[str]) -> dict[str, Any]:
    """Read the arguments of `Events.of` from a file."""
    with open(path, newline="", encoding="utf-8") as file:  # noqa: PTH123  # any path
        lines = csv.reader(file)
        names = next(lines)
        rows = list(lines)
    table = {name: [row[i] for row in rows] for i, name in enumerate(names)}
    tracks = [n for n in range(1, 65) if f"px{n}" in table]
    if not tracks:
        raise ValueError(f"{path}: no column px1, so no tracks")

    def gathered(name: str) -> NDArray[np.float64]:
        try:
            return np.array([table.pop(f"{name}{n}") for n in tracks], np.float64).T
        except KeyError as error:
            raise ValueError(f"{path}: no column {error}") from None

    charges = gathered("Q")
    # Without numbers the tracks are muons, as the detector identified them.
    numbers = np.abs(gathered("PID")) if f"PID{tracks[0]}" in table else np.full_like(charges, 13)
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
        events["ids"] = np.array(table.pop("Event"), np.int64)
    events["extra"] = {name: _column(values) for name, values in table.items()}
    return events


def _column(values: list[str]) -> NDArray[Any]:
    try:
        return np.array(values, np.float64)
    except ValueError:
        return np.array(values)
