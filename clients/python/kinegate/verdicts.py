"""Verdicts as numpy columns."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final, Self

import numpy as np

from kinegate import columns, frames
from kinegate.enums import words
from kinegate.errors import ArgumentError, BlockRejected, FieldViolation
from kinegate.parts import join_offsets
from kinegate.tables import Table
from kinegate.v1 import fit_pb2, verdict_pb2

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from kinegate.selection import Hypothesis

__all__ = ["Entries", "Fits", "Observable", "Verdicts"]

_EXPIRED: Final = int(verdict_pb2.EVENT_STATUS_EXPIRED)


@dataclass(frozen=True)
class Entries:
    """One row for each combination of event, hypothesis and beam candidate.

    Columns of shape (entries,) unless said otherwise; most of them view the reply.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv").cut(0, 100)
    >>> entries = client.judge_block(sample, "testdata/selections/dimuon.yaml").entries
    >>> entries.offsets[:3], entries.accepted.all()
    (array([0, 2, 4], dtype=int32), ...True...)
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
    assignment_counts: NDArray[np.int32]
    """Number of assignments tried."""
    assignment_offsets: NDArray[np.int32]
    """First assignment element of each entry and the total, shape (entries + 1,)."""
    assignments: NDArray[np.int16]
    """Object within the event for each product, depth first; -1 for none."""
    observable_offsets: NDArray[np.int32]
    """First observable of each entry and the total, shape (entries + 1,)."""
    observables: NDArray[np.float64]
    """Recorded values in the unit of the observable; NaN means not computed."""
    uncertainties: NDArray[np.float64] | None = None
    """Standard deviations of the observables; None unless a hypothesis asks for them."""
    fit_failed: NDArray[np.bool_] | None = None
    """The best assignment was not accepted because its fit failed; None without fits."""
    fit_statuses: NDArray[np.uint8] | None = None
    """How each fit ended, numbers of FitStatus, 0 without one; None without fits."""
    chi_square: NDArray[np.float64] | None = None
    """Chi-square, the minimum only where the fit converged; None without fits."""
    degrees_of_freedom: NDArray[np.int16] | None = None
    """Degrees of freedom of each fit; None without fits."""
    probability: NDArray[np.float64] | None = None
    """Probability of a larger chi-square, NaN unless converged; None without fits."""
    iteration_counts: NDArray[np.int16] | None = None
    """Steps of each fit; None without fits."""

    @property
    def events(self) -> NDArray[np.intp]:
        """Row of the event of each entry, shape (entries,)."""
        return np.repeat(np.arange(len(self.offsets) - 1), np.diff(self.offsets))


@dataclass(frozen=True)
class Observable:
    """A recorded observable: one value for each entry of a hypothesis.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv").cut(0, 100)
    >>> verdict = client.judge_block(sample, "testdata/selections/dimuon.yaml")
    >>> mass = verdict.observable("Z", "M")
    >>> bool((mass.values >= 80).all()), len(mass.values) == len(mass.weights)
    (True, True)
    """

    values: NDArray[np.float64]
    """Values in the unit of the observable (GeV, GeV squared, radian, ns, m)."""
    weights: NDArray[np.float64]
    """Weights of the entries."""
    events: NDArray[np.intp]
    """Rows of the events, to look up what belongs to them."""
    entries: NDArray[np.intp]
    """Rows of the entries."""
    uncertainties: NDArray[np.float64] | None = None
    """Standard deviations of the values; None unless a hypothesis asks for them."""


@dataclass(frozen=True)
class Fits:
    """The fits of a hypothesis: one row for each of its entries.

    Here there is one, of two ``photons``, which ``pions`` binds to the mass of a pi0.

    >>> fits = client.judge_block(photons, pions).fits("pi0")
    >>> fits.degrees_of_freedom, fits.converged, bool(0 < fits.probability[0] < 1)
    (array([1], dtype=int16), array([ True]), True)
    """

    chi_square: NDArray[np.float64]
    """Chi-square; the minimum only where the fit converged."""
    degrees_of_freedom: NDArray[np.int16]
    """Degrees of freedom."""
    probability: NDArray[np.float64]
    """Probability of a larger chi-square; NaN unless the fit converged."""
    converged: NDArray[np.bool_]
    """The fit found its minimum."""
    status_names: NDArray[np.object_]
    """How each fit ended in words, such as "CONVERGED"."""
    iteration_counts: NDArray[np.int16]
    """Steps of each fit."""
    weights: NDArray[np.float64]
    """Weights of the entries."""
    events: NDArray[np.intp]
    """Rows of the events, to look up what belongs to them."""
    entries: NDArray[np.intp]
    """Rows of the entries."""


@dataclass(frozen=True, eq=False)
class Verdicts:
    """The verdicts on events; columns of shape (events,).

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv").cut(0, 100)
    >>> verdict = client.judge_block(sample, "testdata/selections/dimuon.yaml")
    >>> len(verdict), verdict.accepted["dimuon"].sum()
    (100, ...100...)
    """

    hypotheses: list[Hypothesis]
    """The hypotheses of the selection, in its order."""
    event_ids: NDArray[np.int64]
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
        event_ids: NDArray[np.int64],
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
            event_ids,
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

        >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
        >>> stream = client.judge(sample, "testdata/selections/dimuon.yaml")
        >>> int(Verdicts.concatenate([v for block, v in stream]).accepted["Z"].sum())
        2316
        """
        if not parts:
            raise ArgumentError("no verdicts to join")
        first = parts[0]
        meanings = [(p.hypotheses, list(p.best)) for p in parts]
        if any(m != meanings[0] for m in meanings):
            raise ArgumentError("verdicts of selections with other hypotheses cannot be joined")
        entries = [p.entries for p in parts]
        found = [e for e in entries if e is not None]
        return cls(
            first.hypotheses,
            np.concatenate([p.event_ids for p in parts]),
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
        return words(verdict_pb2.EventStatus, self.statuses)

    def best_names(self, group: str) -> NDArray[np.object_]:
        """Return the name of the best hypothesis of a group; empty where none accepts."""
        names = np.array([*(h.name for h in self.hypotheses), ""], object)
        if group not in self.best:
            known = ", ".join(self.best) or "none"
            raise ArgumentError(f"no group {group!r}; known: {known}", "group", group)
        found: NDArray[np.object_] = names[self.best[group]]
        return found

    def observable(self, hypothesis: str, label: str) -> Observable:
        """Return a recorded observable of a hypothesis, one value for each entry.

        >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv").cut(0, 100)
        >>> verdict = client.judge_block(sample, "testdata/selections/dimuon.yaml")
        >>> mass = verdict.observable("dimuon", "M")
        >>> bool(abs(mass.values / sample.extra["M"][mass.events] - 1).max() < 1e-4)
        True
        """
        entries, index = self._entries_of(hypothesis)
        labels = self.hypotheses[index].observables
        if label not in labels:
            known = ", ".join(labels) or "none"
            message = f"{hypothesis!r} records no observable {label!r}; recorded: {known}"
            raise ArgumentError(message, "label", label)
        rows = np.flatnonzero(entries.hypothesis == index)
        places = entries.observable_offsets[rows] + labels.index(label)
        spreads = None if entries.uncertainties is None else entries.uncertainties[places]
        return Observable(
            entries.observables[places], entries.weight[rows], entries.events[rows], rows, spreads
        )

    def fits(self, hypothesis: str) -> Fits:
        """Return the fits of a hypothesis, one for each of its entries."""
        entries, index = self._entries_of(hypothesis)
        if (
            self.hypotheses[index].degrees_of_freedom is None
            or entries.fit_statuses is None
            or entries.chi_square is None
            or entries.degrees_of_freedom is None
            or entries.probability is None
            or entries.iteration_counts is None
        ):
            raise ArgumentError(f"{hypothesis!r} has no fit", "hypothesis", hypothesis)
        rows = np.flatnonzero(entries.hypothesis == index)
        statuses = entries.fit_statuses[rows]
        return Fits(
            entries.chi_square[rows],
            entries.degrees_of_freedom[rows],
            entries.probability[rows],
            statuses == int(fit_pb2.FIT_STATUS_CONVERGED),
            words(fit_pb2.FitStatus, statuses),
            entries.iteration_counts[rows],
            entries.weight[rows],
            entries.events[rows],
            rows,
        )

    def _entries_of(self, hypothesis: str) -> tuple[Entries, int]:
        if self.entries is None:
            raise ArgumentError("no entries came along; judge with entries='accepted' or 'all'")
        names = [h.name for h in self.hypotheses]
        if hypothesis not in names:
            message = f"no hypothesis {hypothesis!r}; known: {', '.join(names)}"
            raise ArgumentError(message, "hypothesis", hypothesis)
        return self.entries, names.index(hypothesis)

    def to_pandas(self) -> Any:
        """Return a pandas DataFrame of the events: status, gate, acceptance, best."""
        return frames.verdicts_to_pandas(self)

    def to_arrow(self) -> Any:
        """Return an Arrow table of the events: event_id, status, gate, acceptance, best.

        >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv").cut(0, 100)
        >>> verdict = client.judge_block(sample, "testdata/selections/dimuon.yaml")
        >>> verdict.to_arrow().column_names[:4]
        ['event_id', 'status', 'gate', 'accepted dimuon']
        """
        return frames.verdicts_to_arrow(self)

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
        columns.view(message.assignment_counts, np.int32),
        columns.view(message.assignment_offsets, np.int32),
        columns.view(message.assignments, np.int16),
        columns.view(message.observable_offsets, np.int32),
        columns.view(message.observables, np.float64),
        **_fit_columns(message),
    )


def _fit_columns(message: verdict_pb2.EntryColumns) -> dict[str, NDArray[Any]]:
    """View the columns that are there only where a hypothesis of the selection asks for them."""
    found: dict[str, NDArray[Any]] = {}
    if message.HasField("observable_uncertainties"):
        found["uncertainties"] = columns.view(message.observable_uncertainties, np.float64)
    if message.HasField("fits"):
        fits = message.fits
        failed = int(verdict_pb2.ENTRY_STATUS_FIT_FAILED)
        found |= {
            "fit_failed": np.equal(columns.view(message.statuses, np.uint8), failed),
            "fit_statuses": columns.view(fits.statuses, np.uint8),
            "chi_square": columns.view(fits.chi_squares, np.float64),
            "degrees_of_freedom": columns.view(fits.degrees_of_freedom, np.int16),
            "probability": columns.view(fits.probabilities, np.float64),
            "iteration_counts": columns.view(fits.iteration_counts, np.int16),
        }
    return found


def _joined(parts: Sequence[Entries]) -> Entries:
    joined: dict[str, Any] = {}
    for name in Entries.__dataclass_fields__:
        found = [column for p in parts if (column := getattr(p, name)) is not None]
        if len(found) == len(parts):
            join = join_offsets if name.endswith("offsets") else np.concatenate
            joined[name] = join(found)
    return Entries(**joined)
