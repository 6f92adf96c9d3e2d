"""The names of the columns of events."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from kinegate.errors import ArgumentError

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

__all__ = ["COORDINATES", "MASKS", "coordinate_set"]

COORDINATES: Final[Mapping[str, tuple[str, ...]]] = {
    "energy_momentum": ("energy_gev", "px_gev", "py_gev", "pz_gev"),
    "momentum_mass": ("px_gev", "py_gev", "pz_gev", "mass_gev"),
    "transverse_momentum": ("transverse_momentum_gev", "pseudorapidity", "phi_rad", "mass_gev"),
    "momentum_angles": ("momentum_gev", "theta_rad", "phi_rad"),
    "momentum_slopes": ("momentum_gev", "slope_x", "slope_y"),
}
"""The coordinate sets with their columns, such as momentum_mass: px_gev, py_gev, ..."""

MASKS: Final = ("measured_mask", "species_mask")
"""The columns of bits that an object may have beside its coordinates."""


def coordinate_set(names: Sequence[str], others: Sequence[str]) -> str:
    """Return the coordinate set whose columns are there; the first, where they are several.

    >>> coordinate_set(["class", "momentum_gev", "theta_rad"], ["class"])
    Traceback (most recent call last):
    kinegate.errors.ArgumentError: no column phi_rad; beside class the columns of ...
    """
    missing = {
        chosen: [name for name in (*others, *columns) if name not in names]
        for chosen, columns in COORDINATES.items()
    }
    chosen = min(missing, key=lambda n: len(missing[n]))
    if missing[chosen]:
        known = "; ".join(", ".join(columns) for columns in COORDINATES.values())
        raise ArgumentError(
            f"no column {', '.join(missing[chosen])}; beside {', '.join(others)} the columns of "
            f"one coordinate set are needed: {known}"
        )
    return chosen
