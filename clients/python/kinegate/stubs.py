"""The generated stubs of all services on one channel."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

from kinegate.v1 import (
    decay_pb2_grpc,
    generation_pb2_grpc,
    info_pb2_grpc,
    particle_pb2_grpc,
    photon_pb2_grpc,
    reaction_pb2_grpc,
    selection_pb2_grpc,
)

if TYPE_CHECKING:
    import grpc

__all__ = ["Stubs"]

_FIELDS: Final = {
    "ParticleService": "particle",
    "ReactionService": "reaction",
    "DecayService": "decay",
    "PhotonService": "photon",
    "GenerationService": "generation",
    "SelectionService": "selection",
    "InfoService": "info",
}


class Stubs:
    """One generated stub a service; on an asyncio channel their calls are awaited.

    >>> client.stubs
    <stubs particle, reaction, decay, photon, generation, selection, info>
    >>> from kinegate.v1 import particle_pb2
    >>> request = particle_pb2.GetParticleRequest(name="p")
    >>> client.stubs.particle.GetParticle(request, timeout=10).particle.mass_gev
    0.93827208...
    """

    def __init__(self, channel: grpc.Channel | grpc.aio.Channel) -> None:
        # The generated stubs take either kind of channel; the types tell them apart.
        plain: grpc.Channel = channel  # type: ignore[assignment]
        self.particle = particle_pb2_grpc.ParticleServiceStub(plain)
        """ParticleService."""
        self.reaction = reaction_pb2_grpc.ReactionServiceStub(plain)
        """ReactionService."""
        self.decay = decay_pb2_grpc.DecayServiceStub(plain)
        """DecayService."""
        self.photon = photon_pb2_grpc.PhotonServiceStub(plain)
        """PhotonService."""
        self.generation = generation_pb2_grpc.GenerationServiceStub(plain)
        """GenerationService."""
        self.selection = selection_pb2_grpc.SelectionServiceStub(plain)
        """SelectionService."""
        self.info = info_pb2_grpc.InfoServiceStub(plain)
        """InfoService."""

    def __repr__(self) -> str:
        return f"<stubs {', '.join(_FIELDS.values())}>"

    def rpc(self, service: str, method: str) -> Any:
        """Return the callable of one rpc by the names of the contract."""
        return getattr(getattr(self, _FIELDS[service]), method)
