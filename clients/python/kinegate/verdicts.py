"""Verdicts as numpy columns."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final, Self

import numpy as np

from kinegate import columns, frames
from kinegate.errors import BlockRejected, FieldViolation
from kinegate.parts import join_offsets
from kinegate.tables import Table
from kinegate.v1 import verdict_pb2

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from kinegate.selection import Hypothesis

__all__ = ["Entries", "Observable", "Verdicts"]

_EXPIRED: Final = int(verdict_pb2.EVENT_STATUS_EXPIRED)
_STATUS_NAMES: Final = np.array(
    [name.removeprefix("EVENT_STATUS_") for name in verdict_pb2.EventStatus.keys()],  # noqa: SIM118
    object,
)


@dataclass(frozen=True)
class Entries:
    """One row for each combination of event, hypothesis and beam candidate.

    Columns of shape (entries,) unless said otherwise; most of them view the reply.
    """

    offsets: NDArray[np.int32]
    """First entry of each event and the total at the end, shape (events + 1,)."""
    hypothesis: NDArray[np.int16]
    """Index of the hypothesis in the selection."""
    beam_row: NDArray[np.int16]
    """Beam candidate within the event; -1 where the hypothesis uses none."""
    weight: NDArray[np.float64]
    """1, or the weight of the candidate's time window."""
    accepted: NDArray[np.bool_]
    """The assignment passes every condition."""
    assignments_tried: NDArray[np.int32]
    """Number of assignments tried."""
    assignment_offsets: NDArray[np.int32]
    """First assignment element of each entry and the total, shape (entries + 1,)."""
    assignments: NDArray[np.int16]
    """Object within the event for each product, depth first; -1 for none."""
    observable_offsets: NDArray[np.int32]
    """First observable of each entry and the total, shape (entries + 1,)."""
    observables: NDArray[np.float64]
    """Recorded values in the unit of the observable; NaN means not computed."""

    @property
    def events(self) -> NDArray[np.intp]:
        """Row of the event of each entry, shape (entries,)."""
        return np.repeat(np.arange(len(self.offsets) - 1), np.diff(self.offsets))


@dataclass(frozen=True)
class Observable:
    """A recorded observable: one value for each entry of a hypothesis."""

    values: NDArray[np.float64]
    """Values in the unit of the observable (GeV, GeV squared, radian, ns, m)."""
    weights: NDArray[np.float64]
    """Weights of the entries."""
    events: NDArray[np.intp]
    """Rows of the events, to look up what belongs to them."""
    entries: NDArray[np.intp]
    """Rows of the entries."""


@dataclass(frozen=True, eq=False)
class Verdicts:
    """The verdicts on events; columns of shape (events,)."""

    hypotheses: list[Hypothesis]
    """The hypotheses of the selection, in its order."""
    ids: NDArray[np.int64]
    """Event ids."""
    digest: str
    """Digest of the selection that judged, in hexadecimal."""
    sequence: int
    """Number of the block."""
    statuses: NDArray[np.uint8]
    """Status of each event, numbers of EventStatus; `status_names` has them in words."""
    gate: NDArray[np.bool_]
    """The gate decision: after prescale, veto, shadow, and the policy for late events."""
    accepted: dict[str, NDArray[np.bool_]]
    """Acceptance by each hypothesis, before prescale, veto and shadow."""
    best: dict[str, NDArray[np.int16]]
    """Best hypothesis of each group as an index; -1 where none accepts."""
    entries: Entries | None
    """Entries, as asked for; None for none."""

    @classmethod
    def from_message(
        cls,
        message: verdict_pb2.VerdictBlock,
        hypotheses: list[Hypothesis],
        groups: Sequence[str],
        ids: NDArray[np.int64],
        *,
        accept_late: bool = True,
    ) -> Self:
        """Read a verdict block; columns are viewed, bits unpacked.

        Raises:
            BlockRejected: The server refused the whole block.
        """
        if message.HasField("rejected"):
            why = message.rejected
            raise BlockRejected(
                f"block {message.sequence} was rejected: {why.message}",
                code="INVALID_ARGUMENT",
                reason=why.reason,
                violations=[FieldViolation(why.field, why.message)] if why.field else (),
            )
        count = message.event_count
        statuses = columns.view(message.statuses, np.uint8)
        gate = columns.bits(message.gate, count)
        late = statuses == _EXPIRED
        # A late event was not judged; the policy decides, not the bit that it came with.
        gate = gate | late if accept_late else gate & ~late
        names = [h.name for h in hypotheses]
        labels = [*groups, *(f"group {i}" for i in range(len(groups), len(message.groups)))]
        return cls(
            hypotheses,
            ids,
            message.selection_digest,
            message.sequence,
            statuses,
            gate,
            {
                name: columns.bits(h.accepted, count)
                for name, h in zip(names, message.hypotheses, strict=True)
            },
            {
                label: columns.view(g.best, np.int16)
                for label, g in zip(labels, message.groups, strict=True)
            },
            _entries(message.entries) if message.HasField("entries") else None,
        )

    @classmethod
    def concatenate(cls, parts: Sequence[Verdicts]) -> Self:
        """Join the verdicts on blocks into those on the sample.

        >>> sample = kinegate.Events.read_csv("../../testdata/open/dimuon_2011A.csv")
        >>> stream = client.judge(sample, "../../testdata/selections/dimuon.yaml")
        >>> int(Verdicts.concatenate([v for block, v in stream]).accepted["Z"].sum())
        2316
        """
        if not parts:
            raise ValueError("no verdicts to join")
        first = parts[0]
        entries = [p.entries for p in parts]
        found = [e for e in entries if e is not None]
        return cls(
            first.hypotheses,
            np.concatenate([p.ids for p in parts]),
            parts[-1].digest,
            first.sequence,
            np.concatenate([p.statuses for p in parts]),
            np.concatenate([p.gate for p in parts]),
            {n: np.concatenate([p.accepted[n] for p in parts]) for n in first.accepted},
            {n: np.concatenate([p.best[n] for p in parts]) for n in first.best},
            _joined(found) if len(found) == len(parts) else None,
        )

    def __len__(self) -> int:
        return len(self.statuses)

    @property
    def late(self) -> NDArray[np.bool_]:
        """Events that were not judged in time."""
        return np.equal(self.statuses, _EXPIRED)

    @property
    def status_names(self) -> NDArray[np.object_]:
        """Status of each event in words, such as "JUDGED"."""
        names: NDArray[np.object_] = _STATUS_NAMES[self.statuses]
        return names

    def best_names(self, group: str) -> NDArray[np.object_]:
        """Return the name of the best hypothesis of a group; empty where none accepts."""
        names = np.array([*(h.name for h in self.hypotheses), ""], object)
        found: NDArray[np.object_] = names[self.best[group]]
        return found

    def observable(self, hypothesis: str, label: str) -> Observable:
        """Return a recorded observable of a hypothesis, one value for each entry.

        >>> sample = kinegate.Events.read_csv("../../testdata/open/dimuon_2011A.csv").cut(0, 100)
        >>> verdict = client.judge_block(sample, "../../testdata/selections/dimuon.yaml")
        >>> mass = verdict.observable("dimuon", "M")
        >>> bool(abs(mass.values / sample.extra["M"][mass.events] - 1).max() < 1e-4)
        True
        """
        if self.entries is None:
            raise ValueError("no entries came along; judge with entries='accepted' or 'all'")
        names = [h.name for h in self.hypotheses]
        if hypothesis not in names:
            raise KeyError(f"no hypothesis {hypothesis!r}; known: {', '.join(names)}")
        index = names.index(hypothesis)
        labels = self.hypotheses[index].observables
        if label not in labels:
            known = ", ".join(labels) or "none"
            raise KeyError(f"{hypothesis!r} records no observable {label!r}; recorded: {known}")
        rows = np.flatnonzero(self.entries.hypothesis == index)
        values = self.entries.observables[
            self.entries.observable_offsets[rows] + labels.index(label)
        ]
        return Observable(values, self.entries.weight[rows], self.entries.events[rows], rows)

    def to_pandas(self) -> Any:
        """Return a pandas DataFrame of the events: status, gate, acceptance, best."""
        return frames.verdicts_to_pandas(self)

    def entries_to_pandas(self) -> Any:
        """Return a pandas DataFrame of the entries, observables as columns."""
        return frames.entries_to_pandas(self)

    def entries_to_arrow(self) -> Any:
        """Return an Arrow table of the entries, observables as columns."""
        return frames.entries_to_arrow(self)

    def table(self) -> Table:
        """Return how many events each hypothesis accepts."""
        count = max(len(self), 1)
        rows = [
            [name, str(column.sum()), f"{column.sum() / count:.2%}"]
            for name, column in self.accepted.items()
        ]
        passed = f"{len(self)} events; the gate accepts {self.gate.sum()}"
        late = f", {self.late.sum()} late" if self.late.any() else ""
        columns_ = ("hypothesis", "accepted", "share")
        return Table(passed + late, columns_, rows, f"selection digest {self.digest[:16]}...")

    def __repr__(self) -> str:
        return str(self.table())

    def _repr_html_(self) -> str:
        return self.table()._repr_html_()


def _entries(message: verdict_pb2.EntryColumns) -> Entries:
    return Entries(
        columns.view(message.offsets, np.int32),
        columns.view(message.hypothesis_indices, np.int16),
        columns.view(message.beam_rows, np.int16),
        columns.view(message.weights, np.float64),
        columns.view(message.statuses, np.uint8) == int(verdict_pb2.ENTRY_STATUS_ACCEPTED),
        columns.view(message.assignments_tried, np.int32),
        columns.view(message.assignment_offsets, np.int32),
        columns.view(message.assignments, np.int16),
        columns.view(message.observable_offsets, np.int32),
        columns.view(message.observables, np.float64),
    )


def _joined(parts: Sequence[Entries]) -> Entries:
    joined: dict[str, NDArray[Any]] = {}
    for name in Entries.__dataclass_fields__:
        found = [getattr(p, name) for p in parts]
        joined[name] = join_offsets(found) if name.endswith("offsets") else np.concatenate(found)
    return Entries(**joined)
