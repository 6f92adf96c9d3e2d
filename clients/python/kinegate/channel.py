"""What several answers say about a channel: state, ranges and limits of products."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

from kinegate.enums import word
from kinegate.units import format_angle, format_energy
from kinegate.v1 import channel_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    from kinegate.v1 import kinematics_pb2

__all__ = ["Limits", "Range"]

_OPEN = ("OPEN", "OPEN_THROUGH_WIDTH", "ON_POINT")


@dataclass(frozen=True)
class Range:
    """A closed range, in GeV or radian as its owner says.

    >>> 0.2 in kinegate.Range(0.1, 0.3)
    True
    """

    low: float
    """Lower end."""
    high: float
    """Upper end."""

    def __contains__(self, value: float) -> bool:
        return self.low <= value <= self.high


@dataclass(frozen=True)
class Limits:
    """Where one product can go: energies and momenta in GeV, angles in radian.

    >>> kaon = client.reaction("gamma p -> K+ Lambda", beam="1.2 GeV").products["K+"]
    >>> kaon.mass, 0.5 in kaon.momentum
    (0.493677, True)
    """

    product: str
    """Reference of the product, such as "pi0[1]"."""
    mass: float
    """Mass that the limits are for."""
    rest_energy: Range
    """Total energy in the centre-of-mass frame, or the rest frame of a parent."""
    rest_momentum: Range
    """Momentum in that frame."""
    energy: Range
    """Total energy in the laboratory."""
    momentum: Range
    """Momentum in the laboratory."""
    angle: Range
    """Angle in the laboratory, from +z, or from the parent's direction."""


class Channel(Protocol):
    """Any message that carries the state of a channel."""

    @property
    def state(self) -> channel_pb2.ChannelState: ...


def state_name(message: Channel) -> str:
    """Return the name of a state, such as "OPEN"."""
    return word(channel_pb2.ChannelState, message.state)


def is_open(state: str) -> bool:
    """Tell whether a state lets the channel happen."""
    return state in _OPEN


def energies(message: kinematics_pb2.EnergyRange) -> Range:
    """Read a range in GeV."""
    return Range(message.min_gev, message.max_gev)


def angles(message: kinematics_pb2.AngleRange) -> Range:
    """Read a range in radian."""
    return Range(message.min_rad, message.max_rad)


def product_limits(message: channel_pb2.ProductLimits) -> Limits:
    """Read the limits of a product of a reaction."""
    return Limits(
        message.product,
        message.mass_gev,
        energies(message.centre_of_mass_energy),
        energies(message.centre_of_mass_momentum),
        energies(message.laboratory_energy),
        energies(message.laboratory_momentum),
        angles(message.laboratory_angle),
    )


def limit_rows(limits: Iterable[Limits]) -> list[list[str]]:
    """Write limits as rows of a table."""
    return [
        [
            x.product,
            energy_text(x.rest_momentum),
            energy_text(x.energy),
            energy_text(x.momentum),
            angle_text(x.angle),
        ]
        for x in limits
    ]


def energy_text(span: Range) -> str:
    """Write a range of energies."""
    low, high = format_energy(span.low, 5), format_energy(span.high, 5)
    return low if low == high else f"{low} to {high}"


def angle_text(span: Range) -> str:
    """Write a range of angles."""
    return f"{format_angle(span.low)} to {format_angle(span.high)}"
