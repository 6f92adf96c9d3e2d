"""Selections: reaction hypotheses and what must hold for each."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

from kinegate.arguments import checked
from kinegate.errors import ArgumentError, SelectionFaulty, shortened
from kinegate.explanation import Explanation
from kinegate.faults import Check, fill
from kinegate.question import Question
from kinegate.tables import Table
from kinegate.v1 import selection_pb2
from kinegate.verdicts import Verdicts

if TYPE_CHECKING:
    from collections.abc import Sequence

    from kinegate.events import Events

__all__ = ["Hypothesis", "Selection", "SelectionCheck", "SelectionLike", "check"]

_ENTRIES: Final = ("none", "accepted", "all")


@dataclass(frozen=True)
class Hypothesis:
    """How the server understood one hypothesis.

    >>> client.selection("testdata/selections/dimuon.yaml").hypotheses["Z"].products
    ['mu+', 'mu-']
    """

    name: str
    """Name."""
    reaction: str
    """Reaction in canonical text."""
    products: list[str]
    """References of all products, depth first: the meaning of an entry's assignment."""
    observables: list[str]
    """Labels of the recorded observables."""
    degrees_of_freedom: int | None = None
    """Degrees of freedom of the fit; None without a fit."""


@dataclass(frozen=True)
class Selection:
    """A selection that a server has checked, or the name of one that it knows.

    >>> chosen = client.selection("testdata/selections/dimuon.yaml")
    >>> list(chosen.hypotheses), len(chosen.digest)
    (['dimuon', 'Z', 'equal-plus', 'equal-minus'], 64)
    """

    source: selection_pb2.SelectionSource
    """What is sent to judge with it."""
    digest: str = ""
    """Digest in hexadecimal; empty where the newest of a name is meant."""
    hypotheses: dict[str, Hypothesis] = field(default_factory=dict)
    """The hypotheses by name; empty for a named selection until a stream opens."""
    groups: list[str] = field(default_factory=list)
    """Names of the groups of which one hypothesis is best."""

    @classmethod
    def named(cls, name: str, digest: str = "") -> Selection:
        """Stand for a selection that the server knows; the newest unless a digest is given.

        >>> kinegate.Selection.named("night-shift").source.named.name
        'night-shift'
        """
        for field_name, value in (("name", name), ("digest", digest)):
            if not isinstance(value, str):
                raise ArgumentError(f"{shortened(value)} is not a text", field_name, value)
        reference = selection_pb2.SelectionReference(name=name, selection_digest=digest)
        return cls(selection_pb2.SelectionSource(named=reference), digest)

    @checked
    def judging(self, events: Events, entries: str) -> Question[Verdicts]:
        """Make the question that judges one block."""
        request = selection_pb2.JudgeBlockRequest(
            selection=self.source, entries=entry_detail(entries), block=events.to_message()
        )

        def read(replies: Sequence[Any]) -> Verdicts:
            reply = replies[0]
            hypotheses = list(outline(reply.selection.hypotheses).values())
            return Verdicts.from_message(
                reply.verdict, hypotheses, reply.selection.groups, events.event_ids
            )

        return Question("SelectionService", "JudgeBlock", request, read)

    @checked
    def explaining(self, events: Events, event: int, most: int) -> Question[Explanation]:
        """Make the question that lays the verdict on one event open."""
        if not -len(events) <= event < len(events):
            message = f"there is no event {event} of {len(events)}"
            raise ArgumentError(message, "event", event)
        row = event % len(events)
        request = selection_pb2.ExplainVerdictRequest(
            selection=self.source,
            block=events.cut(row, row + 1).to_message(),
            max_assignment_count=most,
        )
        return Question("SelectionService", "ExplainVerdict", request, lambda r: Explanation(r[0]))


SelectionLike = str | Path | Mapping[str, Any] | selection_pb2.Selection | Selection
"""A YAML file or its text, a mapping or a message of the same form, or a checked selection."""


class SelectionCheck(Check[selection_pb2.CheckSelectionResponse]):
    """The result of a check: faults, or a digest and the hypotheses as understood.

    >>> client.check("testdata/selections/dimuon.yaml").hypotheses["Z"].reaction
    '-> mu+ mu-'
    """

    @property
    def digest(self) -> str:
        """Digest of selection, particle table and numerics; empty where there are faults."""
        return self.message.selection_digest

    @property
    def hypotheses(self) -> dict[str, Hypothesis]:
        """The hypotheses as understood, by name; empty where there are faults."""
        return outline(self.message.hypotheses)

    def selection(self) -> Selection:
        """Return the selection, or raise SelectionFaulty with all faults."""
        self.refuse_faults("selection", SelectionFaulty, "SELECTION_INVALID")
        source = selection_pb2.SelectionSource(given=self.message.selection)
        groups = [g.name for g in self.message.selection.groups]
        return Selection(source, self.digest, self.hypotheses, groups)

    def understood(self) -> list[Table]:
        """Return the hypotheses."""
        rows = [[h.name, h.reaction, ", ".join(h.observables)] for h in self.hypotheses.values()]
        title = self.message.selection.name
        return [Table(title, ("hypothesis", "reaction", "records"), rows, f"digest {self.digest}")]


def check(source: SelectionLike) -> Question[SelectionCheck]:
    """Ask for every fault of a selection at once; a faulty one is an answer, not an error.

    Args:
        source: A YAML file or its text, a mapping in the same form, or a message.

    >>> for fault in client.check("testdata/selections/faulty.yaml").faults:
    ...     print(fault.field)
    2:7: name
    5:5: hypotheses[0].reaction
    11:64: hypotheses[1].condition.window.invariant_mass.max_gev
    """
    request = selection_pb2.CheckSelectionRequest()
    given = source.source.given if isinstance(source, Selection) else source
    fill(request, "selection", given)
    return Question("SelectionService", "CheckSelection", request, lambda r: SelectionCheck(r[0]))


def outline(messages: Sequence[selection_pb2.HypothesisOutline]) -> dict[str, Hypothesis]:
    """Read how hypotheses were understood."""
    return {
        m.name: Hypothesis(
            m.name,
            m.reaction,
            list(m.products),
            list(m.observables),
            m.degrees_of_freedom if m.HasField("degrees_of_freedom") else None,
        )
        for m in messages
    }


def entry_detail(entries: str) -> selection_pb2.EntryDetail:
    """Read which entries are wanted."""
    if entries not in _ENTRIES:
        known = ", ".join(map(repr, _ENTRIES))
        raise ArgumentError(f"{entries!r} is none of {known}", "entries", entries)
    detail: selection_pb2.EntryDetail = getattr(selection_pb2, f"ENTRY_DETAIL_{entries.upper()}")
    return detail
