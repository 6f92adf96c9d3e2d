"""A pair of charged leptons that annihilates to two photons."""

from __future__ import annotations

from typing import TYPE_CHECKING

from kinegate import units
from kinegate.errors import ArgumentError
from kinegate.photonprocess import PhotonProcess, asked, barns, column, optional
from kinegate.tables import Table
from kinegate.v1 import photon_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    import numpy as np
    from numpy.typing import NDArray

    from kinegate.question import Question
    from kinegate.units import Quantity

__all__ = ["Annihilation", "annihilation"]


class Annihilation(PhotonProcess):
    """A pair becomes two photons; energies in GeV, cross-sections in barn.

    A pair at rest has an infinite cross-section, which is None here.

    >>> client.annihilation("e-", kinetic=0).total is None
    True
    """

    @property
    def sqrt_s(self) -> float:
        """Energy in the centre of mass."""
        return float(self.answer.sqrt_s_gev)

    @property
    def beta(self) -> float:
        """Speed of each lepton over that of light in the centre of mass."""
        return float(self.answer.beta)

    @property
    def total(self) -> float | None:
        """Total cross-section, the two photons counted once."""
        value: float | None = optional(self.answer, "total_barn")
        return value

    @property
    def within(self) -> float | None:
        """Cross-section with both photons within `max_cosine`; None unless asked for."""
        value: float | None = optional(self.answer, "within_barn")
        return value

    @property
    def massless_within(self) -> float | None:
        """The same with the mass neglected, as for the luminosity of colliders."""
        value: float | None = optional(self.answer, "massless_within_barn")
        return value

    @property
    def cosines(self) -> NDArray[np.float64]:
        """The cosines asked for, shape (cosines,)."""
        return column(self.answer.differentials, "cosine")

    @property
    def differential(self) -> NDArray[np.float64]:
        """Barn per steradian of either photon at the cosines, shape (cosines,)."""
        return column(self.answer.differentials, "differential_barn_per_sr")

    @property
    def totals(self) -> NDArray[np.float64]:
        """Totals at the `totals_at` asked for, shape (energies,); NaN at threshold."""
        return column(self.answer.totals, "total_barn")

    def tables(self) -> list[Table]:
        """Return the summary, and the angles asked for."""
        rows = [
            ["sqrt(s)", units.format_energy(self.sqrt_s)],
            ["speed in the centre of mass", f"{self.beta:.6f}"],
            ["cross-section", barns(self.total)],
        ]
        if self.within is not None:
            rows.append(["within the cosine", barns(self.within)])
        title = f"{self.particle} and antiparticle -> gamma gamma"
        if not len(self.cosines):
            return [Table(title, (), rows, self.note)]
        angles = [
            [f"{c:.5g}", f"{barns(x)}/sr"]
            for c, x in zip(self.cosines, self.differential, strict=True)
        ]
        columns = ("cosine", "cross-section")
        return [Table(title, (), rows), Table("", columns, angles, self.note)]


def annihilation(
    particle: str = "e-",
    *,
    sqrt_s: Quantity | None = None,
    kinetic: Quantity | None = None,
    cosines: Iterable[float] = (),
    max_cosine: float | None = None,
    totals_at: Iterable[Quantity] = (),
) -> Question[Annihilation]:
    """Ask how a pair of charged leptons annihilates to two photons.

    Args:
        particle: Either lepton.
        sqrt_s: Energy in the centre of mass.
        kinetic: In its place, the kinetic energy of one lepton on the other at rest.
        cosines: Cosines of the angle of either photon in the centre of mass at which the
            differential cross-section is wanted.
        max_cosine: Also give the cross-section with both photons within this cosine.
        totals_at: Values of sqrt(s) at which totals are wanted besides.

    >>> answer = client.annihilation("e-", sqrt_s="10.58 GeV", max_cosine=0.9)
    >>> round(answer.massless_within * 1e12)  # picobarn
    2380
    """
    if (sqrt_s is None) == (kinetic is None):
        raise ArgumentError("give sqrt_s or kinetic, one of them")
    request = photon_pb2.PairAnnihilation(
        particle=particle,
        cosines=cosines,
        max_cosine=max_cosine,
        totals_at_sqrt_s_gev=map(units.energy, totals_at),
    )
    if sqrt_s is not None:
        request.sqrt_s_gev = units.energy(sqrt_s)
    elif kinetic is not None:
        request.kinetic_energy_on_rest_gev = units.energy(kinetic)
    return asked(Annihilation, annihilation=request)
