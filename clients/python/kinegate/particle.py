"""Particles: masses, lifetimes and quantum numbers of the server's table."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from kinegate import units
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import particle_pb2

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

__all__ = ["Particle", "Particles", "particle", "particles"]


class Particle(Answer[particle_pb2.Particle]):
    """One row of the particle table.

    >>> lambda0 = client.particle("Lambda")
    >>> lambda0.mass, lambda0.charge, lambda0.spin
    (1.115683, 0.0, 0.5)
    """

    @property
    def name(self) -> str:
        """Canonical name, used in reaction texts."""
        return self.message.name

    @property
    def number(self) -> int:
        """Monte Carlo particle number of the Review of Particle Physics."""
        return self.message.particle_number

    @property
    def mass(self) -> float:
        """Mass in GeV."""
        return self.message.mass_gev

    @property
    def mass_uncertainty(self) -> float | None:
        """Uncertainty of the mass in GeV; None where exact by convention."""
        has = self.message.HasField("mass_uncertainty_gev")
        return self.message.mass_uncertainty_gev if has else None

    @property
    def width(self) -> float | None:
        """Total width in GeV; 0 for a stable particle, None where not known."""
        return self.message.width_gev if self.message.HasField("width_gev") else None

    @property
    def mean_life(self) -> float | None:
        """Mean life at rest in second; None where stable or not known."""
        return self.message.mean_life_s if self.message.HasField("mean_life_s") else None

    @property
    def charge(self) -> float:
        """Charge in units of the positron's."""
        return self.message.charge_thirds / 3

    @property
    def spin(self) -> float:
        """Spin in units of hbar."""
        return self.message.spin_doubled / 2

    @property
    def antiparticle(self) -> str:
        """Name of the antiparticle; the own name where it is its own antiparticle."""
        return self.message.antiparticle_name

    def tables(self) -> list[Table]:
        """Return the row."""
        spread = self.mass_uncertainty
        mass = units.format_energy(self.mass, 9)
        rows = [
            ["mass", mass if spread is None else f"{mass} +- {units.format_energy(spread, 2)}"],
            ["charge", f"{self.charge:+.3g}"],
            ["spin", f"{self.spin:g}"],
        ]
        if self.mean_life is not None:
            rows.append(["mean life", units.format_time(self.mean_life)])
        if self.width:
            rows.append(["width", units.format_energy(self.width, 5)])
        rows.append(["antiparticle", self.antiparticle])
        rows.append(["source", self.message.source])
        return [Table(f"{self.name}, {self.message.description}, number {self.number}", (), rows)]


class Particles(Answer[particle_pb2.ListParticlesResponse]):
    """Rows of the particle table; a sequence.

    >>> [p.name for p in client.particles("eta")]
    [...'eta'...]
    """

    def __len__(self) -> int:
        return len(self.message.particles)

    def __getitem__(self, index: int) -> Particle:
        return Particle(self.message.particles[index])

    def __iter__(self) -> Iterator[Particle]:
        return map(Particle, self.message.particles)

    def tables(self) -> list[Table]:
        """Return the rows."""
        rows = [
            [
                p.name,
                str(p.number),
                units.format_energy(p.mass, 8),
                f"{p.charge:+.3g}",
                f"{p.spin:g}",
            ]
            for p in self
        ]
        note = f"particle table {self.message.table_version}"
        return [Table("", ("name", "number", "mass", "charge", "spin"), rows, note)]


def particle(key: str | int) -> Question[Particle]:
    """Ask for a particle by name, alias or Monte Carlo particle number.

    >>> client.particle("Lambda").mass
    1.115683
    >>> client.particle(-211).name
    'pi-'
    """
    request = particle_pb2.GetParticleRequest()
    if isinstance(key, str):
        request.name = key
    else:
        request.particle_number = key
    return Question("ParticleService", "GetParticle", request, lambda r: Particle(r[0].particle))


def particles(contains: str = "") -> Question[Particles]:
    """Ask for all particles, or those with a text in their name or an alias.

    >>> client.particles("Sigma")[0].name
    'Sigma-'
    """
    request = particle_pb2.ListParticlesRequest(page_size=500, name_contains=contains)
    return Question(
        "ParticleService",
        "ListParticles",
        request,
        lambda pages: Particles(_joined(pages)),
    )


def _joined(pages: Sequence[Any]) -> particle_pb2.ListParticlesResponse:
    whole = particle_pb2.ListParticlesResponse(table_version=pages[0].table_version)
    for page in pages:
        whole.particles.extend(page.particles)
    return whole
