"""Weights of a simulated channel, from which its unweighting bound is chosen."""

from __future__ import annotations

from typing import TYPE_CHECKING

from kinegate.generation import generation_message
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import generation_pb2

if TYPE_CHECKING:
    from kinegate.generation import GenerationLike

__all__ = ["Bound", "bound"]


class Bound(Answer[generation_pb2.MeasureBoundResponse]):
    """Weights of a channel as fractions of their analytic ceiling.

    >>> weights = client.bound({"channels": [{"reaction": "omega -> pi+ pi- pi0"}]}, draws=10_000)
    >>> 0 < weights.mean < weights.largest <= 1
    True
    """

    @property
    def draws(self) -> int:
        """Number of draws."""
        return self.message.draw_count

    @property
    def largest(self) -> float:
        """Largest weight; with some room above it serves as the channel's bound."""
        return self.message.largest

    @property
    def mean(self) -> float:
        """Mean weight."""
        return self.message.mean

    @property
    def efficiency(self) -> float:
        """Share of the draws that unweighting keeps with the largest weight as bound."""
        return self.mean / self.largest if self.largest else 0.0

    def tables(self) -> list[Table]:
        """Return the weights."""
        rows = [
            ["largest weight", f"{self.largest:.6g}"],
            ["mean weight", f"{self.mean:.6g}"],
            ["kept with this bound", f"{self.efficiency:.2%}"],
            ["kept with bound 1", f"{self.mean:.2%}"],
        ]
        return [Table(f"weights of {self.draws} draws", (), rows)]


def bound(source: GenerationLike, channel: int = 0, draws: int = 100_000) -> Question[Bound]:
    """Ask for the weights of a channel of a generation.

    Args:
        source: A mapping in the form of a generation's file, or a message.
        channel: Position of the channel, from 0.
        draws: Number of draws, up to 10,000,000.

    >>> generation = {"channels": [{"reaction": "D+ -> K- pi+ pi+ pi0"}]}
    >>> client.bound(generation, draws=20_000).efficiency > 0.1
    True
    """
    request = generation_pb2.MeasureBoundRequest(
        generation=generation_message(source), channel_index=channel, draw_count=draws
    )
    return Question("GenerationService", "MeasureBound", request, lambda r: Bound(r[0]))
