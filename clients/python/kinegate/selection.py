"""Selections: reaction hypotheses and what must hold for each."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

from google.protobuf import json_format

from kinegate.errors import FieldViolation, SelectionFaulty
from kinegate.question import Answer, Question
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
    """How the server understood one hypothesis."""

    name: str
    """Name."""
    reaction: str
    """Reaction in canonical text."""
    products: list[str]
    """References of all products, depth first: the meaning of an entry's assignment."""
    observables: list[str]
    """Labels of the recorded observables."""


@dataclass(frozen=True)
class Selection:
    """A selection that a server has checked, or the name of one that it knows."""

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
        reference = selection_pb2.SelectionReference(name=name, selection_digest=digest)
        return cls(selection_pb2.SelectionSource(named=reference), digest)

    def judging(self, events: Events, entries: str) -> Question[Verdicts]:
        """Make the question that judges one block."""
        request = selection_pb2.JudgeBlockRequest(
            selection=self.source, entries=entry_detail(entries), block=events.to_message()
        )

        def read(replies: Sequence[Any]) -> Verdicts:
            verdict = replies[0].verdict
            return Verdicts.from_message(
                verdict, list(self.hypotheses.values()), self.groups, events.ids
            )

        return Question("SelectionService", "JudgeBlock", request, read)


SelectionLike = str | Path | Mapping[str, Any] | selection_pb2.Selection | Selection
"""A YAML file or its text, a mapping or a message of the same form, or a checked selection."""


class SelectionCheck(Answer[selection_pb2.CheckSelectionResponse]):
    """The result of a check: faults, or a digest and the hypotheses as understood."""

    @property
    def faults(self) -> list[FieldViolation]:
        """Every fault, with its place in the text where there is one."""
        return [
            FieldViolation(f"{f.line}:{f.column}: {f.field}" if f.line else f.field, f.message)
            for f in self.message.faults
        ]

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
        if self.faults:
            lines = "; ".join(f"{f.field}: {f.description}" for f in self.faults)
            raise SelectionFaulty(
                f"the selection has {len(self.faults)} faults: {lines}",
                code="INVALID_ARGUMENT",
                reason="SELECTION_INVALID",
                violations=self.faults,
            )
        source = selection_pb2.SelectionSource(inline=self.message.selection)
        groups = [g.name for g in self.message.selection.groups]
        return Selection(source, self.digest, self.hypotheses, groups)

    def tables(self) -> list[Table]:
        """Return the faults, or the hypotheses."""
        if self.faults:
            rows = [[f.field, f.description] for f in self.faults]
            return [Table(f"{len(rows)} faults", ("field", "fault"), rows)]
        rows = [[h.name, h.reaction, ", ".join(h.observables)] for h in self.hypotheses.values()]
        title = self.message.selection.name
        return [Table(title, ("hypothesis", "reaction", "records"), rows, f"digest {self.digest}")]


def check(source: SelectionLike) -> Question[SelectionCheck]:
    """Ask for every fault of a selection at once; a faulty one is an answer, not an error.

    Args:
        source: A YAML file or its text, a mapping in the same form, or a message.

    >>> for fault in client.check("../../testdata/selections/faulty.yaml").faults:
    ...     print(fault.field)
    2:7: name
    5:5: hypotheses[0].reaction
    11:64: hypotheses[1].condition.window.invariant_mass.max_gev
    """
    request = selection_pb2.CheckSelectionRequest()
    if isinstance(source, Selection):
        request.selection.CopyFrom(source.source.inline)
    elif isinstance(source, selection_pb2.Selection):
        request.selection.CopyFrom(source)
    elif isinstance(source, Mapping):
        json_format.ParseDict(dict(source), request.selection)
    elif isinstance(source, Path) or "\n" not in source:
        # A text of one line is the name of a file: no selection fits on one.
        request.yaml = Path(source).read_text(encoding="utf-8")
    else:
        request.yaml = source
    return Question("SelectionService", "CheckSelection", request, lambda r: SelectionCheck(r[0]))


def outline(messages: Sequence[selection_pb2.HypothesisOutline]) -> dict[str, Hypothesis]:
    """Read how hypotheses were understood."""
    return {
        m.name: Hypothesis(m.name, m.reaction, list(m.products), list(m.observables))
        for m in messages
    }


def entry_detail(entries: str) -> selection_pb2.EntryDetail:
    """Read which entries are wanted."""
    if entries not in _ENTRIES:
        raise ValueError(f"entries: {entries!r} is none of {', '.join(map(repr, _ENTRIES))}")
    detail: selection_pb2.EntryDetail = getattr(selection_pb2, f"ENTRY_DETAIL_{entries.upper()}")
    return detail
