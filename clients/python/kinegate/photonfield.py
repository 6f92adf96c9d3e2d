"""Fields of photons: how an isotropic field absorbs a photon by creation of pairs."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from kinegate import units
from kinegate.errors import ArgumentError
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import photonfield_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from kinegate.units import Quantity

__all__ = ["PhotonField", "photon_field"]


class PhotonField(Answer[photonfield_pb2.DescribePhotonFieldResponse]):
    """What a field does to photons; energies in GeV, columns of shape (photons,).

    >>> field = client.photon_field(["1 PeV"], temperature=2.7255, distance="1e20 m")
    >>> field.optical_depth.round(3), kinegate.units.format_energy(field.strongest[0], 3)
    (array([0.362]), '2.21 PeV')
    """

    @property
    def density(self) -> float:
        """Photons of the field per cubic metre."""
        return self.message.density_per_m3

    @property
    def energies(self) -> NDArray[np.float64]:
        """Energies of the photons asked for."""
        return np.array([a.photon_energy_gev for a in self.message.absorptions])

    @property
    def absorption(self) -> NDArray[np.float64]:
        """Probability of absorption per metre."""
        return np.array([a.absorption_per_m for a in self.message.absorptions])

    @property
    def mean_free_path(self) -> NDArray[np.float64]:
        """Mean free path in metre; infinite where nothing is absorbed."""
        return np.array(
            [
                a.mean_free_path_m if a.HasField("mean_free_path_m") else np.inf
                for a in self.message.absorptions
            ]
        )

    @property
    def optical_depth(self) -> NDArray[np.float64]:
        """Absorption times the distance asked for: exp(-depth) of the photons pass."""
        return np.array([a.optical_depth for a in self.message.absorptions])

    @property
    def temperature(self) -> float | None:
        """Temperature of a black body at its redshift in kelvin; None for a power law."""
        has = self.message.HasField("temperature_k")
        return self.message.temperature_k if has else None

    @property
    def threshold(self) -> float | None:
        """Energy below which no photon is absorbed; None for a black body."""
        has = self.message.HasField("threshold_gev")
        return self.message.threshold_gev if has else None

    @property
    def strongest(self) -> tuple[float, float] | None:
        """Photon absorbed most as (energy, mean free path in metre); None for a power law."""
        if not self.message.HasField("strongest"):
            return None
        found = self.message.strongest
        return found.photon_energy_gev, found.mean_free_path_m

    def tables(self) -> list[Table]:
        """Return the photons asked for."""
        rows = [
            [
                units.format_energy(a.photon_energy_gev),
                f"{a.absorption_per_m:.5g}",
                f"{a.mean_free_path_kpc:.5g} kpc" if a.HasField("mean_free_path_kpc") else "none",
                f"{a.optical_depth:.5g}",
            ]
            for a in self.message.absorptions
        ]
        title = f"{self.message.particle} pairs in a field of {self.density:.5g} photons per m^3"
        columns = ("photon energy", "absorbed per m", "mean free path", "optical depth")
        return [Table(title, columns, rows, " ".join(self.message.omissions))]


def photon_field(
    energies: Iterable[Quantity],
    *,
    temperature: float | None = None,
    redshift: float = 0.0,
    power_law: tuple[float, Quantity, Quantity, float] | None = None,
    particle: str = "e-",
    distance: Quantity = 0.0,
) -> Question[PhotonField]:
    """Ask how an isotropic field of photons absorbs photons.

    Args:
        energies: Energies of the photons that cross the field, up to 10,000.
        temperature: Temperature of a black body in kelvin at redshift 0.
        redshift: Redshift of the black body.
        power_law: In its place (index, lowest energy, highest energy, photons per cubic
            metre) of a field that falls as energy to the power -index.
        particle: Lepton of the pair that is made: "e-", "mu-" or "tau-".
        distance: Length of the path for the optical depth, in metre.

    >>> field = client.photon_field(["100 TeV", "2 PeV"], temperature=2.725)
    >>> int(field.mean_free_path.argmin())
    1
    """
    request = photonfield_pb2.DescribePhotonFieldRequest(
        particle=particle,
        photon_energies_gev=map(units.energy, energies),
        distance_m=units.length(distance),
    )
    if (temperature is None) == (power_law is None):
        raise ArgumentError("give temperature or power_law, one of them")
    if temperature is not None:
        request.black_body.temperature_k = temperature
        request.black_body.redshift = redshift
    elif power_law is not None:
        index, low, high, density = power_law
        request.power_law.index = index
        request.power_law.min_gev = units.energy(low)
        request.power_law.max_gev = units.energy(high)
        request.power_law.density_per_m3 = density
    return Question("PhotonService", "DescribePhotonField", request, lambda r: PhotonField(r[0]))
