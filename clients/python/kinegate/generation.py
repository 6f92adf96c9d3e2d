"""Simulated events: what was generated, as truth and as a detector measured it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final, Self

import numpy as np

from kinegate import columns
from kinegate.arguments import checked
from kinegate.errors import ArgumentError, InvalidArgument, shortened
from kinegate.events import Events
from kinegate.faults import Check, fill, parse
from kinegate.parts import join_offsets
from kinegate.question import Question
from kinegate.tables import Table
from kinegate.v1 import generation_pb2

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from kinegate.v1 import event_pb2, truth_pb2

__all__ = ["Generated", "GenerationCheck", "GenerationLike", "Sample", "Truth", "check_generation"]

_FOUR: Final = ("energy_gev", "px_gev", "py_gev", "pz_gev")

GenerationLike = str | Path | Mapping[str, Any] | generation_pb2.Generation
"""A YAML file or its text, or a mapping or a message of the same form."""


@dataclass(frozen=True, eq=False)
class Truth:
    """Events as they happened; columns view the reply.

    The particles of an event are every product and every daughter, depth first in the
    order of the reaction's text; an event of weight 0 has none.

    >>> sample = client.generate({"channels": [{"reaction": "omega -> pi0 gamma"}]}, 100).read()
    >>> photon = sample.truth.row(1)
    >>> len(photon["energy_gev"]), f"{photon['energy_gev'][0]:.1f} GeV"
    (100, '0.4 GeV')
    """

    event_ids: NDArray[np.int64]
    """Number of each event, shape (events,)."""
    channels: NDArray[np.int16]
    """Position of each event's channel in the generation, shape (events,)."""
    weights: NDArray[np.float64]
    """Weights, shape (events,)."""
    initial_state: dict[str, NDArray[np.float64]]
    """energy_gev, px_gev, py_gev, pz_gev of the whole, each of shape (events,)."""
    particle_offsets: NDArray[np.int32]
    """First particle of each event and the total at the end, shape (events + 1,)."""
    particle_numbers: NDArray[np.int64]
    """Monte Carlo particle number, shape (particles,)."""
    momentum: dict[str, NDArray[np.float64]]
    """energy_gev, px_gev, py_gev, pz_gev in the laboratory, each of shape (particles,)."""
    masses: NDArray[np.float64]
    """Mass in this event in GeV, shape (particles,)."""
    parents: NDArray[np.int16]
    """Row of the parent within the event, -1 for none, shape (particles,)."""
    object_particles: NDArray[np.int16] | None
    """Row of the particle behind each measured object, -1 for noise, shape (objects,);
    None without a detector."""
    message: truth_pb2.TruthColumns | None
    """The reply, for vertices, proper times and beam candidates; None for joined blocks."""

    @classmethod
    def from_message(cls, message: truth_pb2.TruthColumns) -> Truth:
        """View the columns of a message."""
        f8 = np.float64
        return cls(
            columns.view(message.event_ids, np.int64),
            columns.view(message.channels, np.int16),
            columns.view(message.weights, f8),
            _four(message.initial_state),
            columns.view(message.particle_offsets, np.int32),
            columns.view(message.particle_numbers, np.int64),
            _four(message.momentum),
            columns.view(message.mass_gev, f8),
            columns.view(message.parents, np.int16),
            columns.view(message.object_particles, np.int16)
            if message.HasField("object_particles")
            else None,
            message,
        )

    @classmethod
    def concatenate(cls, parts: Sequence[Truth]) -> Self:
        """Join the truth of blocks that follow one another."""
        names = ("event_ids", "channels", "weights", "particle_numbers", "masses", "parents")
        joined: dict[str, Any] = {
            name: np.concatenate([getattr(p, name) for p in parts]) for name in names
        }
        behind = [p.object_particles for p in parts]
        seen = [b for b in behind if b is not None]
        joined["object_particles"] = np.concatenate(seen) if len(seen) == len(parts) else None
        for name in ("initial_state", "momentum"):
            found = [getattr(p, name) for p in parts]
            joined[name] = {n: np.concatenate([f[n] for f in found]) for n in _FOUR}
        offsets = join_offsets([p.particle_offsets for p in parts])
        return cls(particle_offsets=offsets, message=None, **joined)

    def row(self, number: int) -> dict[str, NDArray[np.float64]]:
        """Return the momentum of one particle of every event, columns of shape (events,).

        Args:
            number: Its row within the event, as `GenerationStream.products` counts them.
                NaN stands where an event has no such row.
        """
        rows = self.particle_offsets[:-1] + number
        there = rows < self.particle_offsets[1:]
        found: dict[str, NDArray[np.float64]] = {}
        for name, column in self.momentum.items():
            found[name] = np.full(len(rows), np.nan)
            found[name][there] = column[rows[there]]
        return found


@dataclass(frozen=True, eq=False)
class Generated:
    """Consecutive events of a sample.

    >>> stream = client.generate({"channels": [{"reaction": "omega -> pi0 gamma"}]}, 1000)
    >>> stream.read()
    <events 0 to 999, truth only>
    """

    first_event: int
    """Number of the first event."""
    event_count: int
    """Number of events."""
    events: Events | None
    """The events as measured, ready to be judged; None without a detector.

    Their `extra` holds "channel" and "weight" of each event where there is truth.
    """
    truth: Truth | None
    """The events as they were; None where they are not wanted."""

    @classmethod
    def from_message(cls, message: generation_pb2.GeneratedBlock) -> Generated:
        """View the columns of a message."""
        truth = Truth.from_message(message.truth) if message.HasField("truth") else None
        events = Events.from_message(message.events) if message.HasField("events") else None
        if events is not None and truth is not None:
            events.extra.update(channel=truth.channels, weight=truth.weights)
        return cls(message.first_event, message.event_count, events, truth)

    @classmethod
    def concatenate(cls, parts: Sequence[Generated]) -> Self:
        """Join blocks that follow one another."""
        if not parts:
            raise ArgumentError("no blocks to join")
        events = [p.events for p in parts if p.events is not None]
        truth = [p.truth for p in parts if p.truth is not None]
        return cls(
            parts[0].first_event,
            sum(map(len, parts)),
            Events.concatenate(events) if events else None,
            Truth.concatenate(truth) if truth else None,
        )

    def __len__(self) -> int:
        return self.event_count

    def __repr__(self) -> str:
        span = f"events {self.first_event} to {self.first_event + len(self) - 1}"
        if self.events is None:
            return f"<{span}, truth only>"
        return f"<{span}{', with truth' if self.truth else ''}: {self.events!r}>"


class Sample:
    """What is left to fetch of a slice of a sample, over all its connections.

    Event i is the same event whoever makes it, so a broken stream goes on with the next.
    """

    def __init__(self, request: generation_pb2.GenerateEventsRequest) -> None:
        self._request = request
        self._next = request.first_event
        self._end = request.first_event + request.event_count
        self.header: generation_pb2.GenerationHeader | None = None
        self.summary: generation_pb2.GenerationSummary | None = None
        self.reconnects = 0

    @property
    def total(self) -> int:
        """Number of events asked for."""
        return self._request.event_count

    def request(self) -> generation_pb2.GenerateEventsRequest:
        """Return the request for what is left."""
        request = generation_pb2.GenerateEventsRequest()
        request.CopyFrom(self._request)
        request.first_event = self._next
        request.event_count = self._end - self._next
        return request

    def take(self, frame: generation_pb2.GenerateEventsResponse) -> Generated | None:
        """Take a frame; returns the events that it carries, if any."""
        kind = frame.WhichOneof("frame")
        if kind == "header":
            self.header = frame.header
        elif kind == "summary":
            self.summary = frame.summary
        elif kind == "block":
            self._next = frame.block.first_event + frame.block.event_count
            return Generated.from_message(frame.block)
        return None


def generation_message(source: GenerationLike) -> generation_pb2.Generation:
    """Make the message of a generation that is not in a file."""
    generation = generation_pb2.Generation()
    if isinstance(source, generation_pb2.Generation):
        generation.CopyFrom(source)
    elif isinstance(source, Mapping):
        parse(source, generation)
    else:
        allowed = "a mapping or a message; a file is checked first: client.generation(file)"
        raise ArgumentError(f"{shortened(source)} is not {allowed}", "generation", source)
    return generation


@checked
def sample(
    source: GenerationLike,
    count: int,
    first: int,
    *,
    truth: bool,
    events_per_block: int,
) -> Sample:
    """Make the state of a stream of simulated events."""
    for name, value in (("count", count), ("first", first)):
        if value < 0:
            raise ArgumentError(f"{value} is not at least 0", name, value)
    return Sample(
        generation_pb2.GenerateEventsRequest(
            generation=generation_message(source),
            first_event=first,
            event_count=count,
            block_event_count=events_per_block,
            without_truth=not truth,
        )
    )


class GenerationCheck(Check[generation_pb2.CheckGenerationResponse]):
    """The result of a check: faults, or a digest and the channels as understood.

    >>> check = client.check_generation({"channels": [{"reaction": "omega -> pi0 gamma"}]})
    >>> check.channels
    {'omega -> pi0 gamma': ['pi0', 'gamma']}
    """

    @property
    def digest(self) -> str:
        """Digest of the generation; empty where there are faults."""
        return self.message.generation_digest

    @property
    def channels(self) -> dict[str, list[str]]:
        """References of the products of each channel, depth first: the rows of its truth."""
        return {c.name: list(c.products) for c in self.message.channels}

    def generation(self) -> generation_pb2.Generation:
        """Return the generation as understood, or raise InvalidArgument with all faults."""
        self.refuse_faults("generation", InvalidArgument)
        return self.message.generation

    def understood(self) -> list[Table]:
        """Return the channels."""
        rows = [[c.name, c.reaction, "; ".join(c.remarks)] for c in self.message.channels]
        title = self.message.generation.name
        return [Table(title, ("channel", "reaction", "remarks"), rows, f"digest {self.digest}")]


def check_generation(source: GenerationLike) -> Question[GenerationCheck]:
    """Ask for every fault of a generation at once; a faulty one is an answer, not an error.

    Args:
        source: A YAML file or its text, a mapping in the same form, or a message.

    >>> client.check_generation({"channels": [{"reaction": "gamma p -> p ata"}]}).faults[0].field
    'channels[0].reaction'
    """
    request = generation_pb2.CheckGenerationRequest()
    fill(request, "generation", source)
    return Question(
        "GenerationService", "CheckGeneration", request, lambda r: GenerationCheck(r[0])
    )


def _four(message: event_pb2.EnergyMomentumColumns) -> dict[str, NDArray[np.float64]]:
    return {name: columns.view(getattr(message, name), np.float64) for name in _FOUR}
