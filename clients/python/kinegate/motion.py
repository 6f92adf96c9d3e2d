"""The motion of one particle in every customary form."""

from __future__ import annotations

from typing import TYPE_CHECKING

from kinegate import units
from kinegate.errors import ArgumentError
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import motion_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    from kinegate.units import Quantity

__all__ = ["Motion", "motion"]


class Motion(Answer[motion_pb2.ConvertMotionResponse]):
    """How a particle moves; energies in GeV, None for what does not exist.

    >>> motion = client.motion("K+", momentum="1 GeV")
    >>> round(motion.energy, 4), round(motion.beta, 4)
    (1.1152, 0.8967)
    """

    @property
    def energy(self) -> float:
        """Total energy."""
        return self.message.total_energy_gev

    @property
    def kinetic(self) -> float:
        """Kinetic energy, to full precision however slow."""
        return self.message.kinetic_energy_gev

    @property
    def momentum(self) -> float:
        """Momentum."""
        return self.message.momentum_gev

    @property
    def beta(self) -> float:
        """Speed over that of light."""
        return self.message.beta

    @property
    def one_minus_beta(self) -> float:
        """1 - beta, to full precision however fast."""
        return self.message.one_minus_beta

    @property
    def gamma(self) -> float | None:
        """Lorentz factor; None for a massless particle."""
        return self.message.gamma if self.message.HasField("gamma") else None

    @property
    def rigidity(self) -> float | None:
        """Momentum over charge in GV; None for a neutral particle."""
        return self.message.rigidity_gv if self.message.HasField("rigidity_gv") else None

    @property
    def wavelength(self) -> float | None:
        """Wavelength in vacuum in metre; None for a massive particle."""
        return self.message.wavelength_m if self.message.HasField("wavelength_m") else None

    @property
    def flight_times(self) -> list[float | None]:
        """Time in second over each distance asked for; None for a particle at rest."""
        return [f.time_s if f.HasField("time_s") else None for f in self.message.flights]

    @property
    def cherenkov_angles(self) -> list[float | None]:
        """Angle in radian for each refractive index asked for; None without light."""
        lights = self.message.cherenkov_lights
        return [c.angle_rad if c.HasField("angle_rad") else None for c in lights]

    def tables(self) -> list[Table]:
        """Return the motion, flights and Cherenkov light."""
        rows = [
            ["mass", units.format_energy(self.message.mass_gev)],
            ["total energy", units.format_energy(self.energy)],
            ["kinetic energy", units.format_energy(self.kinetic)],
            ["momentum", units.format_energy(self.momentum)],
            ["beta", f"{self.beta:.9g}"],
        ]
        if self.gamma is not None:
            rows.append(["gamma", f"{self.gamma:.9g}"])
        if self.rigidity is not None:
            rows.append(["rigidity", f"{self.rigidity:.7g} GV"])
        if self.wavelength is not None:
            rows.append(["wavelength", units.format_length(self.wavelength, 7)])
        for flight in self.message.flights:
            distance = units.format_length(flight.distance_m)
            time = units.format_time(flight.time_s, 7) if flight.HasField("time_s") else "never"
            rows.append([f"flight of {distance}", time])
        for light in self.message.cherenkov_lights:
            angle = units.format_angle(light.angle_rad) if light.radiates else "none"
            rows.append([f"light at index {light.refractive_index:.6g}", angle])
        return [Table(self.message.particle or "a body", (), rows)]


def motion(  # noqa: PLR0913  # one argument for each customary form
    particle: str | float,
    *,
    charge_thirds: int = 0,
    energy: Quantity | None = None,
    kinetic: Quantity | None = None,
    momentum: Quantity | None = None,
    beta: float | None = None,
    gamma: float | None = None,
    rigidity: float | None = None,
    wavelength: Quantity | None = None,
    frequency: float | None = None,
    distances: Iterable[Quantity] = (),
    refractive_indices: Iterable[float] = (),
) -> Question[Motion]:
    """Turn one quantity of a particle's motion into all others.

    Args:
        particle: Name of a particle, or the mass of any body in GeV.
        charge_thirds: Charge of a body in thirds of the positron's.
        energy: Total energy.
        kinetic: Kinetic energy.
        momentum: Momentum.
        beta: Speed over that of light.
        gamma: Lorentz factor.
        rigidity: Momentum over charge in GV.
        wavelength: Wavelength of a photon, in metre.
        frequency: Frequency of a photon in hertz.
        distances: Lengths of flight whose times are wanted, in metre.
        refractive_indices: Indices for Cherenkov light.

    >>> client.motion("K+", momentum="1 GeV", distances=["5 m"]).flight_times
    [1.859...e-08]
    """
    request = motion_pb2.ConvertMotionRequest(
        distances_m=map(units.length, distances),
        refractive_indices=refractive_indices,
        charge_thirds=charge_thirds,
    )
    if isinstance(particle, str):
        request.particle = particle
    else:
        request.mass_gev = particle
    given = {
        "total_energy_gev": None if energy is None else units.photon_energy(energy),
        "kinetic_energy_gev": None if kinetic is None else units.energy(kinetic),
        "momentum_gev": None if momentum is None else units.energy(momentum),
        "beta": beta,
        "gamma": gamma,
        "rigidity_gv": rigidity,
        "wavelength_m": None if wavelength is None else units.length(wavelength),
        "frequency_hz": frequency,
    }
    values = {name: value for name, value in given.items() if value is not None}
    if len(values) > 1:
        raise ArgumentError(f"{' and '.join(values)} say the same thing; give one")
    for name, value in values.items():
        setattr(request, name, value)
    return Question("ReactionService", "ConvertMotion", request, lambda r: Motion(r[0]))
