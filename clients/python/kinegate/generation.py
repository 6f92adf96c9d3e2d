"""Simulated events: what was generated, as truth and as a detector measured it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
from google.protobuf import json_format

from kinegate import columns
from kinegate.errors import FieldViolation, InvalidArgument
from kinegate.events import Events
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import generation_pb2

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from kinegate.v1 import event_pb2, truth_pb2

__all__ = ["Generated", "GenerationCheck", "GenerationLike", "Sample", "Truth", "check_generation"]

GenerationLike = str | Path | Mapping[str, Any] | generation_pb2.Generation
"""A YAML file or its text, or a mapping or a message of the same form."""


@dataclass(frozen=True, eq=False)
class Truth:
    """Events as they happened; columns view the reply.

    The particles of an event are every product and every daughter, depth first in the
    order of the reaction's text; an event of weight 0 has none.
    """

    ids: NDArray[np.int64]
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
    object_particles: NDArray[np.int16]
    """Row of the particle behind each measured object, -1 for noise, shape (objects,)."""
    message: truth_pb2.TruthColumns
    """The reply itself, for vertices, proper times and beam candidates."""

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
            columns.view(message.object_particles, np.int16),
            message,
        )


@dataclass(frozen=True, eq=False)
class Generated:
    """Consecutive events of a sample."""

    first_event: int
    """Number of the first event."""
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
        return cls(message.first_event, events, truth)


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


def sample(
    source: GenerationLike,
    count: int,
    first: int,
    *,
    truth: bool,
    events_per_block: int,
) -> Sample:
    """Make the state of a stream of simulated events."""
    if count < 0 or first < 0:
        raise ValueError("count and first must be at least 0")
    generation = generation_pb2.Generation()
    if isinstance(source, generation_pb2.Generation):
        generation.CopyFrom(source)
    elif isinstance(source, Mapping):
        json_format.ParseDict(dict(source), generation)
    else:
        raise TypeError("a generation from a file is checked first: client.check_generation(file)")
    return Sample(
        generation_pb2.GenerateEventsRequest(
            generation=generation,
            first_event=first,
            event_count=count,
            block_event_count=events_per_block,
            without_truth=not truth,
        )
    )


class GenerationCheck(Answer[generation_pb2.CheckGenerationResponse]):
    """The result of a check: faults, or a digest and the channels as understood."""

    @property
    def faults(self) -> list[FieldViolation]:
        """Every fault, with its place in the text where there is one."""
        return [
            FieldViolation(f"{f.line}:{f.column}: {f.field}" if f.line else f.field, f.message)
            for f in self.message.faults
        ]

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
        if self.faults:
            lines = "; ".join(f"{f.field}: {f.description}" for f in self.faults)
            raise InvalidArgument(
                f"the generation has {len(self.faults)} faults: {lines}",
                code="INVALID_ARGUMENT",
                violations=self.faults,
            )
        return self.message.generation

    def tables(self) -> list[Table]:
        """Return the faults, or the channels."""
        if self.faults:
            rows = [[f.field, f.description] for f in self.faults]
            return [Table(f"{len(rows)} faults", ("field", "fault"), rows)]
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
    if isinstance(source, generation_pb2.Generation):
        request.generation.CopyFrom(source)
    elif isinstance(source, Mapping):
        json_format.ParseDict(dict(source), request.generation)
    elif isinstance(source, Path) or "\n" not in source:
        request.yaml = Path(source).read_text(encoding="utf-8")
    else:
        request.yaml = source
    return Question(
        "GenerationService", "CheckGeneration", request, lambda r: GenerationCheck(r[0])
    )


def _four(message: event_pb2.EnergyMomentumColumns) -> dict[str, NDArray[np.float64]]:
    names = ("energy_gev", "px_gev", "py_gev", "pz_gev")
    return {name: columns.view(getattr(message, name), np.float64) for name in names}
