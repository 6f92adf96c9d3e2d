"""Pairs made by photons: of two photons, or of one in the field of a target."""

from __future__ import annotations

from typing import TYPE_CHECKING

from kinegate import units
from kinegate.errors import ArgumentError
from kinegate.photonprocess import (
    ByHelicity,
    PhotonProcess,
    asked,
    barns,
    by_helicity,
    column,
    one_by_helicity,
    optional,
)
from kinegate.tables import Table
from kinegate.v1 import photon_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    import numpy as np
    from numpy.typing import NDArray

    from kinegate.question import Question
    from kinegate.units import Quantity

__all__ = ["FieldPair", "PairCreation", "field_pair", "pair_creation"]


class PairCreation(PhotonProcess):
    """Two photons make a pair; energies in GeV, cross-sections in barn.

    >>> answer = client.pair_creation("e-", photon="1 TeV", photon2="1 eV")
    >>> answer.threshold, answer.beta
    (261.11..., 0.859...)
    """

    @property
    def threshold(self) -> float | None:
        """Energy of the first photon at threshold; None where none reaches it."""
        value: float | None = optional(self.answer, "first_energy_threshold_gev")
        return value

    @property
    def threshold_sqrt_s(self) -> float:
        """Energy in the centre of mass at threshold: twice the mass."""
        return float(self.answer.threshold_sqrt_s_gev)

    @property
    def sqrt_s(self) -> float:
        """Energy in the centre of mass."""
        return float(self.answer.sqrt_s_gev)

    @property
    def excess(self) -> float:
        """S over the square of the pair's mass, minus 1; negative below the threshold."""
        return float(self.answer.relative_excess)

    @property
    def is_open(self) -> bool:
        """The energy is above the threshold."""
        return self.excess > 0

    @property
    def beta(self) -> float:
        """Speed of each particle over that of light in the centre of mass."""
        return float(self.answer.beta)

    @property
    def total(self) -> ByHelicity[float]:
        """Total cross-section, by the helicities of the photons."""
        return one_by_helicity(self.answer.total, "barn")

    @property
    def within(self) -> ByHelicity[float] | None:
        """Cross-section with both particles within `max_cosine`; None unless asked for."""
        if not self.answer.HasField("within_max_cosine"):
            return None
        return one_by_helicity(self.answer.within_max_cosine, "barn")

    @property
    def cosines(self) -> NDArray[np.float64]:
        """The cosines asked for, shape (cosines,)."""
        return column(self.answer.differentials, "cosine")

    @property
    def differential(self) -> ByHelicity[NDArray[np.float64]]:
        """Barn per steradian of either particle at the cosines, shape (cosines,)."""
        return by_helicity(self.answer.differentials, "barn_per_sr")

    @property
    def totals(self) -> ByHelicity[NDArray[np.float64]]:
        """Totals at the `totals_at` asked for, shape (energies,)."""
        return by_helicity(self.answer.totals, "barn")

    @property
    def peak(self) -> tuple[float, float] | None:
        """Largest total without polarisation as (sqrt(s), barn); None for spin 0."""
        if not self.answer.HasField("peak"):
            return None
        return self.answer.peak.sqrt_s_gev, self.answer.peak.unpolarised_barn

    def tables(self) -> list[Table]:
        """Return the summary, and the angles asked for."""
        rows = [
            ["sqrt(s)", units.format_energy(self.sqrt_s)],
            ["threshold", f"sqrt(s) {units.format_energy(self.threshold_sqrt_s)}"],
        ]
        if self.threshold is not None:
            rows.append(["", f"first photon {units.format_energy(self.threshold)}"])
        rows.append(["speed in the centre of mass", f"{self.beta:.6f}"])
        rows += [["cross-section", _helicities(self.total)]]
        if self.within is not None:
            rows.append(["within the cosine", _helicities(self.within)])
        if self.peak is not None:
            text = f"{barns(self.peak[1])} at sqrt(s) {units.format_energy(self.peak[0])}"
            rows.append(["largest", text])
        state = "OPEN" if self.is_open else "BELOW THRESHOLD"
        summary = Table(f"gamma gamma -> {self.particle} and antiparticle   {state}", (), rows)
        if not len(self.cosines):
            return [Table(summary.title, (), rows, self.note)]
        shown = zip(self.cosines, *vars(self.differential).values(), strict=True)
        angles = [[f"{c:.5g}", *(f"{barns(x)}/sr" for x in of)] for c, *of in shown]
        columns = ("cosine", "unpolarised", "equal helicities", "opposite helicities")
        return [summary, Table("", columns, angles, self.note)]


def pair_creation(  # noqa: PLR0913  # each is a choice of its own
    particle: str = "e-",
    *,
    photon: Quantity | None = None,
    photon2: Quantity | None = None,
    angle: Quantity | None = None,
    sqrt_s: Quantity | None = None,
    excess: float | None = None,
    cosines: Iterable[float] = (),
    max_cosine: float | None = None,
    totals_at: Iterable[Quantity] = (),
) -> Question[PairCreation]:
    """Ask how two photons make a pair of charged particles.

    Args:
        particle: Either particle of the pair: a lepton, or one of spin 0 and unit charge,
            which is taken as a point.
        photon: Energy of the first photon, or its wavelength or frequency.
        photon2: Energy of the second photon, likewise.
        angle: Angle between their directions; head on without it.
        sqrt_s: In place of photons, the energy in the centre of mass.
        excess: In place of both, s over the square of the pair's mass, minus 1.
        cosines: Cosines of the angle to the photons in the centre of mass at which the
            differential cross-section is wanted.
        max_cosine: Also give the cross-section with both particles within this cosine.
        totals_at: Values of sqrt(s) at which totals are wanted besides.

    >>> answer = client.pair_creation("e-", photon="150 GeV", photon2="532 nm")
    >>> answer.is_open, kinegate.units.format_energy(answer.threshold, 4)
    (True, '112 GeV')
    >>> round(answer.peak[1], 3)  # barn: 1.70e-25 cm^2, Gould and Schreder 1967
    0.17
    """
    ways = [photon is not None or photon2 is not None, sqrt_s is not None, excess is not None]
    if sum(ways) != 1:
        raise ArgumentError("give photon and photon2, or sqrt_s, or excess, one of them")
    if (photon is None) != (photon2 is None):
        raise ArgumentError("photon and photon2 belong together: a pair needs two photons")
    if angle is not None and photon is None:
        raise ArgumentError("angle needs photon and photon2")
    request = photon_pb2.PairCreation(
        particle=particle,
        cosines=cosines,
        max_cosine=max_cosine,
        totals_at_sqrt_s_gev=map(units.energy, totals_at),
    )
    if photon is not None and photon2 is not None:
        request.two_photons.first_energy_gev = units.photon_energy(photon)
        request.two_photons.second_energy_gev = units.photon_energy(photon2)
        if angle is not None:
            request.two_photons.angle_between_photons_rad = units.angle(angle)
    elif sqrt_s is not None:
        request.sqrt_s_gev = units.energy(sqrt_s)
    elif excess is not None:
        request.relative_excess = excess
    return asked(PairCreation, pair_creation=request)


class FieldPair(PhotonProcess):
    """One photon makes a pair in the field of a target, which takes the recoil.

    >>> client.field_pair("e-", target="p").target_mass
    0.93827208...
    """

    @property
    def threshold(self) -> float:
        """Energy of the photon at threshold in GeV: 2 m (1 + m/M)."""
        return float(self.answer.photon_energy_threshold_gev)

    @property
    def target_mass(self) -> float:
        """Mass of the target in GeV."""
        return float(self.answer.target_mass_gev)

    def tables(self) -> list[Table]:
        """Return the threshold."""
        rows = [
            ["mass of the target", units.format_energy(self.target_mass)],
            ["threshold", f"photon {units.format_energy(self.threshold, 10)}"],
        ]
        title = f"gamma -> {self.particle} and antiparticle in the field of a target"
        return [Table(title, (), rows, self.note)]


def field_pair(
    particle: str = "e-",
    *,
    target: str | None = None,
    target_mass: Quantity | None = None,
) -> Question[FieldPair]:
    """Ask at which energy a photon makes a pair in the field of a target at rest.

    Args:
        particle: Either particle of the pair, any of the table.
        target: The target by name, such as "p" or "e-".
        target_mass: In its place, its mass, such as that of a nucleus.

    >>> client.field_pair("e-", target="p").threshold / kinegate.units.MEV
    1.0225...
    """
    if (target is None) == (target_mass is None):
        raise ArgumentError("give target or target_mass, one of them")
    request = photon_pb2.FieldPairCreation(particle=particle)
    if target is not None:
        request.target_particle = target
    elif target_mass is not None:
        request.target_mass_gev = units.energy(target_mass)
    return asked(FieldPair, field_pair=request)


def _helicities(value: ByHelicity[float]) -> str:
    equal, opposite = barns(value.equal), barns(value.opposite)
    return f"{barns(value.unpolarised)}; helicities equal {equal}, opposite {opposite}"
