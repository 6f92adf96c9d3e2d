"""A photon beam that light makes on a beam of charged leptons."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from kinegate import units
from kinegate.errors import ArgumentError
from kinegate.initial import beam_motion
from kinegate.photonprocess import PhotonProcess, asked, barns, column
from kinegate.tables import Table
from kinegate.v1 import kinematics_pb2, photon_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from kinegate.question import Question
    from kinegate.units import Quantity

__all__ = ["Backscatter", "backscatter"]


class Backscatter(PhotonProcess):
    """Light scattered by a beam; energies in GeV, cross-sections in barn, angles in radian.

    >>> beam = client.backscatter("e-", beam="3 GeV", light="351.1 nm", collimators=["0.1 mrad"])
    >>> beam.fraction_within.round(2)
    array([0.27])
    """

    @property
    def lowest(self) -> float:
        """Smallest energy of a scattered photon."""
        return float(self.answer.min_gev)

    @property
    def edge(self) -> float:
        """Largest energy of a scattered photon."""
        return float(self.answer.max_gev)

    @property
    def mean(self) -> float:
        """Mean energy of the scattered photons."""
        return float(self.answer.mean_gev)

    @property
    def relative_excess(self) -> float:
        """S over the square of the mass, minus 1."""
        return float(self.answer.relative_excess)

    @property
    def total(self) -> float:
        """Total cross-section."""
        return float(self.answer.total_barn)

    @property
    def energies(self) -> NDArray[np.float64]:
        """Energies of the spectrum, shape (energies,)."""
        return column(self.answer.points, "energy_gev")

    @property
    def spectrum(self) -> NDArray[np.float64]:
        """Barn per GeV of the scattered photon at the energies, shape (energies,)."""
        return column(self.answer.points, "differential_barn_per_gev")

    @property
    def angles(self) -> NDArray[np.float64]:
        """Angle of the photon from the total momentum at the energies, shape (energies,)."""
        return column(self.answer.points, "angle_rad")

    @property
    def circular_degree(self) -> NDArray[np.float64]:
        """Mean helicity of the photons at the energies; NaN without polarisation."""
        return column(self.answer.points, "circular_degree")

    @property
    def linear_degree(self) -> NDArray[np.float64]:
        """Their mean linear polarisation at the energies; NaN without polarisation."""
        return column(self.answer.points, "linear_degree")

    @property
    def fraction_within(self) -> NDArray[np.float64]:
        """Fraction of all photons inside each of the collimators, shape (collimators,)."""
        return column(self.answer.angles, "fraction_within")

    @property
    def window_fractions(self) -> NDArray[np.float64]:
        """Fraction of all photons in each of the windows, shape (windows,)."""
        return np.array(self.answer.window_fractions)

    def tables(self) -> list[Table]:
        """Return the summary, and collimators."""
        low, high = units.format_energy(self.lowest), units.format_energy(self.edge)
        rows = [
            ["beam", units.format_energy(self.answer.beam_energy_gev)],
            ["photons", f"{low} to {high}, mean {units.format_energy(self.mean)}"],
            ["cross-section", barns(self.total)],
            ["s over the mass squared, minus 1", f"{self.relative_excess:.6g}"],
        ]
        rows += [
            [
                f"within {units.format_angle(a.angle_rad)}",
                f"{a.fraction_within:.2%}, down to {units.format_energy(a.energy_gev)}",
            ]
            for a in self.answer.angles
        ]
        return [Table(f"light on a beam of {self.particle}", (), rows, self.note)]


def backscatter(  # noqa: PLR0913  # each is a choice of its own
    particle: str = "e-",
    *,
    light: Quantity,
    beam: Quantity | None = None,
    beam_kinetic: Quantity | None = None,
    beam_momentum: Quantity | None = None,
    angle: Quantity | None = None,
    points: int = 0,
    energies: Iterable[Quantity] = (),
    collimators: Iterable[Quantity] = (),
    windows: Iterable[tuple[Quantity, Quantity]] = (),
    polarisation: tuple[float, float, float] | None = None,
) -> Question[Backscatter]:
    """Ask for the photon beam that light makes on a beam of charged leptons.

    Args:
        particle: The lepton of the beam.
        light: Energy of the light's photons, or its wavelength or frequency.
        beam: Total energy of a lepton.
        beam_kinetic: In its place, its kinetic energy.
        beam_momentum: In its place, its momentum.
        angle: Angle between beam and light; head on without it.
        points: The spectrum is wanted at this many energies in equal steps, from the
            lowest to the edge.
        energies: Energies at which the spectrum is wanted besides.
        collimators: Angles within which the fraction of photons is wanted.
        windows: Pairs of energies between which the fraction of photons is wanted.
        polarisation: (helicity of the light, its linear degree, twice the helicity of the
            beam), each within [-1, 1]; head on only.

    >>> client.backscatter("e-", beam="3 GeV", light="351.1 nm").edge
    0.41887...
    """
    motion = beam_motion("beam", beam, beam_kinetic, beam_momentum)
    if motion is None:
        raise ArgumentError("give beam, beam_kinetic or beam_momentum, one of them")
    request = photon_pb2.LaserBackscatter(
        particle=particle,
        beam=motion,
        light_energy_gev=units.photon_energy(light),
        even_energy_count=points,
        energies_gev=map(units.energy, energies),
        angles_rad=map(units.angle, collimators),
        windows=[
            kinematics_pb2.EnergyRange(min_gev=units.energy(low), max_gev=units.energy(high))
            for low, high in windows
        ],
    )
    if angle is not None:
        request.angle_between_beams_rad = units.angle(angle)
    if polarisation is not None:
        circular, linear, of_beam = polarisation
        request.polarisation.circular_degree = circular
        request.polarisation.linear_degree = linear
        request.polarisation.beam_degree = of_beam
    return asked(Backscatter, backscatter=request)
