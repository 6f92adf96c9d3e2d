"""How the initial particles of a reaction move."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypedDict

from kinegate import units
from kinegate.errors import ArgumentError, shortened
from kinegate.v1 import kinematics_pb2

if TYPE_CHECKING:
    from collections.abc import Sequence

    from kinegate.units import Quantity

__all__ = ["Beams", "beam_motion", "initial_state"]


class Beams(TypedDict, total=False):
    """The arguments that say how initial particles move.

    A beam alone strikes a target at rest; two beams meet head on unless `angle` says
    otherwise. Energies are floats in GeV or texts with a unit; the total energy of a
    photon may also be given by its wavelength or frequency, such as "532 nm".

    >>> arguments: kinegate.Beams = {"beam": "532 nm", "beam2": "150 GeV"}
    >>> client.reaction("gamma gamma -> e+ e-", **arguments).is_open
    True
    """

    beam: Quantity
    """Total energy of the first particle."""
    beam_kinetic: Quantity
    """Kinetic energy of the first particle, in place of `beam`."""
    beam_momentum: Quantity
    """Momentum of the first particle, in place of `beam`."""
    beam2: Quantity
    """Total energy of the second particle, which is at rest without it."""
    beam2_kinetic: Quantity
    """Kinetic energy of the second particle, in place of `beam2`."""
    beam2_momentum: Quantity
    """Momentum of the second particle, in place of `beam2`."""
    angle: Quantity
    """Angle between the directions of two beams, in radian; pi is head on."""
    sqrt_s: Quantity
    """Energy in the centre-of-mass frame, in place of beams."""
    four_momenta: tuple[Sequence[float], Sequence[float]]
    """(E, px, py, pz) of both initial particles in GeV, in place of beams."""


def initial_state(particles: str | Sequence[str], beams: Beams) -> kinematics_pb2.InitialState:
    """Make the message of an initial state; without arguments it is empty.

    `particles` is a reaction text or the two names on its left: a photon may be given by
    its wavelength.
    """
    if unknown := set(beams) - set(Beams.__annotations__):
        known = ", ".join(Beams.__annotations__)
        raise ArgumentError(f"unknown argument {min(unknown)!r}; known: {known}", min(unknown))
    names = particles.partition("->")[0].split() if isinstance(particles, str) else list(particles)
    photon = [name == "gamma" for name in [*names, "", ""]]
    beam1 = _named_motion(beams, "beam", photon=photon[0])
    beam2 = _named_motion(beams, "beam2", photon=photon[1])
    ways = [bool(beam1 or beam2 or "angle" in beams), "sqrt_s" in beams, "four_momenta" in beams]
    if sum(ways) > 1:
        raise ArgumentError("beams, sqrt_s and four_momenta say the same thing; give one of them")
    if "sqrt_s" in beams:
        return kinematics_pb2.InitialState(sqrt_s_gev=units.energy(beams["sqrt_s"]))
    if "four_momenta" in beams:
        first, second = map(_four_momentum, beams["four_momenta"])
        return kinematics_pb2.InitialState(
            two_four_momenta=kinematics_pb2.TwoFourMomenta(first=first, second=second)
        )
    if beam1 is None:
        if beam2 or "angle" in beams:
            raise ArgumentError("beam2 and angle need beam")
        return kinematics_pb2.InitialState()
    if beam2 is None:
        if "angle" in beams:
            raise ArgumentError("angle needs beam2: a target at rest has no direction")
        return kinematics_pb2.InitialState(beam_on_target=kinematics_pb2.BeamOnTarget(beam=beam1))
    two = kinematics_pb2.TwoBeams(beam1=beam1, beam2=beam2)
    if "angle" in beams:
        two.angle_between_beams_rad = units.angle(beams["angle"])
    return kinematics_pb2.InitialState(two_beams=two)


def beam_motion(
    name: str,
    total: Quantity | None,
    kinetic: Quantity | None,
    momentum: Quantity | None,
    *,
    photon: bool = False,
) -> kinematics_pb2.BeamMotion | None:
    """Make the message of one motion from the one quantity that is given, if any."""
    if sum(q is not None for q in (total, kinetic, momentum)) > 1:
        raise ArgumentError(
            f"{name}, {name}_kinetic and {name}_momentum say the same thing; give one"
        )
    if total is not None:
        read = units.photon_energy if photon else units.energy
        return kinematics_pb2.BeamMotion(total_energy_gev=read(total))
    if kinetic is not None:
        return kinematics_pb2.BeamMotion(kinetic_energy_gev=units.energy(kinetic))
    if momentum is not None:
        return kinematics_pb2.BeamMotion(momentum_gev=units.energy(momentum))
    return None


def _named_motion(beams: Beams, name: str, *, photon: bool) -> kinematics_pb2.BeamMotion | None:
    given: dict[str, Quantity] = dict(beams)  # type: ignore[arg-type]  # the others are not read
    return beam_motion(
        name,
        given.get(name),
        given.get(f"{name}_kinetic"),
        given.get(f"{name}_momentum"),
        photon=photon,
    )


def _four_momentum(components: Sequence[float]) -> kinematics_pb2.FourMomentum:
    if len(components) != 4:  # noqa: PLR2004  # (E, px, py, pz)
        message = f"{shortened(components)} is not (E, px, py, pz)"
        raise ArgumentError(message, "four_momenta", components)
    energy, px, py, pz = components
    return kinematics_pb2.FourMomentum(energy_gev=energy, px_gev=px, py_gev=py, pz_gev=pz)
