"""Why an event was judged as it was: assignments, windows, constraints and pulls."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from kinegate.question import Answer
from kinegate.tables import Table
from kinegate.v1 import explanation_pb2, fit_pb2, verdict_pb2

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["Explanation", "HypothesisExplanation", "Pull", "WindowExplanation"]

_SHOWN = 5  # assignments in a table


@dataclass(frozen=True)
class WindowExplanation:
    """One window on one assignment, in the unit of its observable."""

    path: str
    """Place in the hypothesis, such as "condition.all_of[0].window"."""
    label: str
    """Name of the window, or its observable with its products."""
    unit: str
    """Unit of the numbers, such as "GeV"."""
    value: float
    """The observable; NaN where it cannot be computed."""
    uncertainty: float | None
    """Its standard deviation; None where there is none."""
    inside: bool
    """The value lies in the window."""
    room: float | None
    """Distance to the nearer limit, negative outside; None without limits."""


@dataclass(frozen=True)
class Pull:
    """One measured parameter of a fit."""

    particle: str
    """Reference of the product, or "beam"."""
    parameter: str
    """Name of the parameter, such as "theta"."""
    unit: str
    """Unit of measured and fitted value."""
    measured: float
    """Measured value."""
    uncertainty: float
    """Its standard deviation."""
    fitted: float
    """Fitted value."""
    pull: float
    """Measured minus fitted value over the standard deviation of that difference."""


class HypothesisExplanation:
    """What one hypothesis made of the event."""

    def __init__(self, message: explanation_pb2.HypothesisExplanation) -> None:
        self.message = message
        """The part of the reply, for what the properties leave out."""

    @property
    def name(self) -> str:
        """Name of the hypothesis."""
        return self.message.name

    @property
    def accepted(self) -> bool:
        """An assignment passes."""
        return self.message.accepted

    @property
    def obstacle(self) -> str:
        """Why no assignment could be tried; empty where one was."""
        return self.message.obstacle

    @property
    def best(self) -> explanation_pb2.AssignmentExplanation | None:
        """The assignment of the entry, or else the best that was possible; None for none."""
        listed = self.message.assignments
        marked = next((a for a in listed if a.best), None)
        return marked or next(iter(listed), None)

    def windows(self, assignment: int | None = None) -> list[WindowExplanation]:
        """Return the windows of an assignment, by its place in the list; of the best without."""
        chosen = self._chosen(assignment)
        return [] if chosen is None else [_window(w) for w in chosen.windows]

    @property
    def fit(self) -> explanation_pb2.FitExplanation | None:
        """The fit of the best assignment; None without one."""
        best = self.best
        return best.fit if best is not None and best.HasField("fit") else None

    @property
    def pulls(self) -> list[Pull]:
        """Pulls of the best assignment's fit; empty unless it converged."""
        fit = self.fit
        if fit is None:
            return []
        return [
            Pull(p.name, x.name, x.unit, x.measured, x.uncertainty, x.fitted, x.pull)
            for p in fit.particles
            for x in p.parameters
            if x.HasField("pull")
        ]

    def _chosen(self, assignment: int | None) -> explanation_pb2.AssignmentExplanation | None:
        return self.best if assignment is None else self.message.assignments[assignment]

    def tables(self) -> list[Table]:
        """Return the assignments, then windows, constraints and pulls of the best one."""
        verdict = "accepts" if self.accepted else "does not accept"
        title = f"{self.name} {verdict}: {self.message.reaction}"
        if self.obstacle or self.best is None:
            return [Table(title, note=self.obstacle or "no assignment")]
        count = self.message.assignment_count
        rows = [_assignment(a, self.message.products) for a in self.message.assignments[:_SHOWN]]
        columns = ("objects", "beam row", "passes", "fit", "probability")
        return [Table(title, columns, rows, f"{count} assignments tried"), *self._details()]

    def _details(self) -> list[Table]:
        tables = []
        if windows := self.windows():
            rows = [
                [
                    w.label,
                    _number(w.value, w.unit),
                    "" if w.uncertainty is None else _number(w.uncertainty, w.unit, 2),
                    "inside" if w.inside else "OUTSIDE",
                    "" if w.room is None else _number(w.room, w.unit, 3),
                ]
                for w in windows
            ]
            columns = ("window", "value", "spread", "", "room to the limit")
            tables.append(Table("", columns, rows))
        if self.fit is not None:
            rows = [
                [c.name, _number(c.before, c.unit, 4), _number(c.after, c.unit, 2)]
                for c in self.fit.constraints
            ]
            tables.append(Table("", ("constraint", "before the fit", "after"), rows))
        if self.pulls:
            rows = [
                [
                    p.particle,
                    p.parameter,
                    f"{_number(p.measured, p.unit, 5)} +- {_number(p.uncertainty, p.unit, 2)}",
                    _number(p.fitted, p.unit, 5),
                    f"{p.pull:+.2f}",
                ]
                for p in self.pulls
            ]
            columns = ("particle", "parameter", "measured", "fitted", "pull")
            tables.append(Table("", columns, rows))
        return tables


class Explanation(Answer[explanation_pb2.ExplainVerdictResponse]):
    """The verdict on one event laid open; it is that of a judge stream to the last bit."""

    @property
    def digest(self) -> str:
        """Digest of the selection that judged, in hexadecimal."""
        return self.message.selection_digest

    @property
    def event_id(self) -> int:
        """Id of the event."""
        return self.message.event_id

    @property
    def status(self) -> str:
        """Status of the event, such as "JUDGED"."""
        return verdict_pb2.EventStatus.Name(self.message.status).removeprefix("EVENT_STATUS_")

    @property
    def gate(self) -> bool:
        """The gate's decision."""
        return self.message.gate

    @property
    def hypotheses(self) -> dict[str, HypothesisExplanation]:
        """What each hypothesis made of the event, by name; empty unless it was judged."""
        return {h.name: HypothesisExplanation(h) for h in self.message.hypotheses}

    def tables(self) -> list[Table]:
        """Return the verdict, then every hypothesis."""
        decision = "accepted" if self.gate else "not accepted"
        title = f"event {self.event_id}: {self.status.lower()}, {decision} by the gate"
        rows = [
            [h.name, "yes" if h.accepted else "no", h.obstacle] for h in self.hypotheses.values()
        ]
        head = Table(title, ("hypothesis", "accepts", "obstacle"), rows)
        return [head, *(t for h in self.hypotheses.values() for t in h.tables())]


def _window(message: explanation_pb2.WindowExplanation) -> WindowExplanation:
    limits = [
        getattr(message, name) for name in ("above_min", "below_max") if message.HasField(name)
    ]
    return WindowExplanation(
        message.path,
        message.label,
        message.unit,
        message.value,
        message.uncertainty if message.HasField("uncertainty") else None,
        message.inside,
        min(limits) if limits else None,
    )


def _assignment(
    message: explanation_pb2.AssignmentExplanation, products: Sequence[str]
) -> list[str]:
    pairs = zip(products, message.objects, strict=True)
    fit = message.fit if message.HasField("fit") else None
    status = "" if fit is None else fit_pb2.FitStatus.Name(fit.status)
    probable = fit is not None and fit.HasField("probability")
    return [
        ", ".join(f"{product}={row}" for product, row in pairs if row >= 0),
        "" if message.beam_row < 0 else str(message.beam_row),
        "yes" if message.passed else "no",
        status.removeprefix("FIT_STATUS_").lower(),
        f"{fit.probability:.4f}" if fit is not None and probable else "",
    ]


def _number(value: float, unit: str, digits: int = 6) -> str:
    return f"{value:.{digits}g} {unit}".rstrip()
