"""Decays: momenta at rest and in flight, opening angles and flight."""

from __future__ import annotations

from typing import TYPE_CHECKING

from kinegate import units
from kinegate.channel import Limits, Range, angles, energies, is_open, limit_rows, state_name
from kinegate.enums import word
from kinegate.initial import beam_motion
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import decay_pb2, reaction_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    from kinegate.units import Quantity

__all__ = ["Decay", "decay"]


class Decay(Answer[decay_pb2.DescribeDecayResponse]):
    """A decay; energies in GeV, times in second, lengths in metre.

    >>> answer = client.decay("pi0 -> gamma gamma", momentum="1 GeV")
    >>> answer.decay_class, kinegate.units.format_angle(answer.opening_angle.low)
    ('ELECTROMAGNETIC', '15.374 deg')
    """

    @property
    def text(self) -> str:
        """The decay as understood."""
        return self.message.decay

    @property
    def state(self) -> str:
        """OPEN, OPEN_THROUGH_WIDTH, AT_THRESHOLD or CLOSED."""
        return state_name(self.message)

    @property
    def is_open(self) -> bool:
        """The decay can happen."""
        return is_open(self.state)

    @property
    def decay_class(self) -> str:
        """STRONG, ELECTROMAGNETIC or WEAK."""
        return word(reaction_pb2.DecayClass, self.message.decay_class)

    @property
    def released_energy(self) -> float:
        """Parent mass minus daughter masses."""
        return self.message.released_energy_gev

    @property
    def mean_life(self) -> float | None:
        """Mean life at rest; None where stable or not known."""
        parent = self.message.parent
        return parent.mean_life_s if parent.HasField("mean_life_s") else None

    @property
    def mean_flight(self) -> float | None:
        """Mean distance flown before the decay; None where the mean life is."""
        parent = self.message.parent
        return parent.mean_flight_m if parent.HasField("mean_flight_m") else None

    @property
    def surviving_fractions(self) -> list[float]:
        """Fractions of parents that survive to the distances asked for."""
        return list(self.message.surviving_fractions)

    @property
    def opening_angle(self) -> Range | None:
        """Laboratory angle between two daughters, in radian; None unless there are two."""
        has = self.message.HasField("opening_angle")
        return angles(self.message.opening_angle) if has else None

    @property
    def daughters(self) -> dict[str, Limits]:
        """Where each daughter can go, by its reference; empty where closed."""
        return {d.product: _limits(d) for d in self.message.daughters}

    def tables(self) -> list[Table]:
        """Return the summary, and the limits where the decay is open."""
        parent = self.message.parent
        momentum = units.format_energy(parent.momentum_gev)
        rows = [
            ["class", self.decay_class.lower()],
            ["energy released", units.format_energy(self.released_energy)],
            ["parent", f"momentum {momentum}, gamma {parent.gamma:.6g}"],
        ]
        if self.mean_life is not None:
            rows.append(["mean life", units.format_time(self.mean_life, 7)])
        if self.mean_flight is not None:
            rows.append(["mean flight", units.format_length(self.mean_flight, 7)])
        if self.opening_angle is not None:
            low, high = map(units.format_angle, (self.opening_angle.low, self.opening_angle.high))
            rows.append(["opening angle", f"{low} to {high}"])
        title = f"{self.text}   {self.state.replace('_', ' ')}"
        columns = ("daughter", "momentum (rest)", "energy (lab)", "momentum (lab)", "angle (lab)")
        note = f"angles from the parent's direction; particle table {self.message.table_version}"
        limits = Table("", columns, limit_rows(self.daughters.values()), note)
        return [Table(title, (), rows), *([limits] if self.daughters else [])]


def decay(
    text: str,
    *,
    energy: Quantity | None = None,
    kinetic: Quantity | None = None,
    momentum: Quantity | None = None,
    distances: Iterable[Quantity] = (),
) -> Question[Decay]:
    """Ask what energy a decay releases and where its daughters go.

    Args:
        text: The decay, such as "Lambda -> p pi-".
        energy: Total energy of the parent; it is at rest without any of these three.
        kinetic: Kinetic energy of the parent.
        momentum: Momentum of the parent.
        distances: Distances at which the surviving fraction is wanted, in metre.

    >>> answer = client.decay("Lambda -> p pi-", momentum="1 GeV", distances=["5 cm"])
    >>> answer.mean_flight, answer.surviving_fractions
    (0.0703..., [0.4911...])
    """
    request = decay_pb2.DescribeDecayRequest(decay=text, distances_m=map(units.length, distances))
    parent = beam_motion("energy", energy, kinetic, momentum)
    if parent is not None:
        request.parent.CopyFrom(parent)
    return Question("DecayService", "DescribeDecay", request, lambda r: Decay(r[0]))


def _limits(message: decay_pb2.DaughterLimits) -> Limits:
    return Limits(
        message.product,
        message.mass_gev,
        energies(message.rest_frame_energy),
        energies(message.rest_frame_momentum),
        energies(message.laboratory_energy),
        energies(message.laboratory_momentum),
        angles(message.laboratory_angle),
    )
