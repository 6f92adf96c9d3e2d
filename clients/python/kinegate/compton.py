"""A photon scattered by a charged lepton, at rest or in flight."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from kinegate import units
from kinegate.initial import beam_motion
from kinegate.photonprocess import PhotonProcess, asked, barns, column, optional
from kinegate.tables import Table
from kinegate.v1 import photon_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from kinegate.question import Question
    from kinegate.units import Quantity

__all__ = ["Compton", "compton"]


class Compton(PhotonProcess):
    """Compton scattering; energies in GeV, cross-sections in barn, angles in radian.

    >>> answer = client.compton("e-", photon="661.657 keV", angles=["60 deg", "180 deg"])
    >>> kinegate.units.format_energy(answer.edge, 4), answer.scattered_energy.round(7)
    ('477.3 keV', array([0.0004016, 0.0001843]))
    """

    @property
    def total(self) -> float:
        """Total cross-section."""
        return float(self.answer.total_barn)

    @property
    def thomson(self) -> float:
        """Its limit for a photon of no energy."""
        return float(self.answer.thomson_barn)

    @property
    def rest_energy_ratio(self) -> float:
        """Energy of the photon in the rest frame of the lepton, over its mass."""
        return float(self.answer.rest_energy_ratio)

    @property
    def edge(self) -> float | None:
        """Largest kinetic energy of the recoil; None for a lepton in flight."""
        return self._at_rest("edge_gev")

    @property
    def backscattered(self) -> float | None:
        """Energy of the photon scattered by 180 degrees; None for a lepton in flight."""
        return self._at_rest("backscattered_gev")

    @property
    def mean_scattered(self) -> float | None:
        """Mean energy of the scattered photon; None for a lepton in flight."""
        return self._at_rest("mean_scattered_gev")

    @property
    def mean_recoil(self) -> float | None:
        """Mean kinetic energy of the recoil; None for a lepton in flight."""
        return self._at_rest("mean_recoil_gev")

    @property
    def angles(self) -> NDArray[np.float64]:
        """The angles asked for, shape (angles,)."""
        return np.array([p.direction.theta_rad for p in self.answer.points])

    @property
    def scattered_energy(self) -> NDArray[np.float64]:
        """Energy of the scattered photon at the angles, shape (angles,)."""
        return column(self.answer.points, "photon_energy_gev")

    @property
    def differential(self) -> NDArray[np.float64]:
        """Barn per steradian of the laboratory at the angles, shape (angles,)."""
        return column(self.answer.points, "differential_barn_per_sr")

    @property
    def recoil_kinetic(self) -> NDArray[np.float64]:
        """Kinetic energy of the recoil, shape (angles,); NaN for a lepton in flight."""
        return column(self.answer.points, "recoil_kinetic_energy_gev")

    @property
    def recoil_angle(self) -> NDArray[np.float64]:
        """Angle of the recoil, shape (angles,); NaN for a lepton in flight."""
        return column(self.answer.points, "recoil_angle_rad")

    @property
    def totals(self) -> NDArray[np.float64]:
        """Totals at the `totals_at` asked for, shape (energies,)."""
        return np.array(self.answer.totals_barn)

    def _at_rest(self, name: str) -> float | None:
        at_rest = optional(self.answer, "at_rest")
        return None if at_rest is None else float(getattr(at_rest, name))

    def tables(self) -> list[Table]:
        """Return the summary, and the angles asked for."""
        rows = [
            ["cross-section", f"{barns(self.total)}; without energy {barns(self.thomson)}"],
            ["photon in the rest frame", f"{self.rest_energy_ratio:.6g} times the mass"],
        ]
        for name, value in (
            ("edge of the recoil", self.edge),
            ("photon at 180 deg", self.backscattered),
            ("mean photon", self.mean_scattered),
            ("mean recoil", self.mean_recoil),
        ):
            if value is not None:
                rows.append([name, units.format_energy(value)])
        title = f"gamma {self.particle} -> gamma {self.particle}"
        if not len(self.angles):
            return [Table(title, (), rows, self.note)]
        shown = zip(self.angles, self.scattered_energy, self.differential, strict=True)
        angles = [
            [units.format_angle(a), units.format_energy(e), f"{barns(x)}/sr"] for a, e, x in shown
        ]
        columns = ("angle", "photon", "cross-section")
        return [Table(title, (), rows), Table("", columns, angles, self.note)]


def compton(  # noqa: PLR0913  # each is a choice of its own
    particle: str = "e-",
    *,
    photon: Quantity,
    angles: Iterable[Quantity] = (),
    energy: Quantity | None = None,
    kinetic: Quantity | None = None,
    momentum: Quantity | None = None,
    angle_between: Quantity | None = None,
    azimuth: Quantity = 0.0,
    totals_at: Iterable[Quantity] = (),
) -> Question[Compton]:
    """Ask how a free charged lepton scatters a photon.

    Args:
        particle: The lepton.
        photon: Energy of the photon, or its wavelength or frequency.
        angles: Angles of the scattered photon that are wanted: from the photon before for
            a lepton at rest, else from the lepton's direction.
        energy: Total energy of a lepton in flight; at rest without any of these three.
        kinetic: Its kinetic energy.
        momentum: Its momentum.
        angle_between: Angle between photon and lepton in flight; head on without it.
        azimuth: Azimuth of `angles` about a lepton in flight, 0 on the photon's side.
        totals_at: Energies of the photon at which totals are wanted besides.

    >>> client.compton("e-", photon="661.657 keV").edge / kinegate.units.KEV
    477.3...
    """
    request = photon_pb2.ComptonScattering(
        particle=particle,
        photon_energy_gev=units.photon_energy(photon),
        directions=[
            photon_pb2.ScatteringDirection(theta_rad=units.angle(a), phi_rad=units.angle(azimuth))
            for a in angles
        ],
        totals_at_photon_energies_gev=map(units.photon_energy, totals_at),
    )
    flight = beam_motion("energy", energy, kinetic, momentum)
    if flight is not None:
        request.flight.CopyFrom(flight)
    if angle_between is not None:
        request.angle_between_beams_rad = units.angle(angle_between)
    return asked(Compton, compton=request)
