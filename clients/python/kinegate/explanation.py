"""Why an event was judged as it was: assignments, windows, constraints and pulls."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from kinegate.enums import word
from kinegate.question import Answer
from kinegate.tables import Table
from kinegate.v1 import explanation_pb2, fit_pb2, verdict_pb2

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["Assignment", "Explanation", "HypothesisExplanation", "Pull", "WindowExplanation"]

_SHOWN = 5  # assignments in a table


@dataclass(frozen=True)
class WindowExplanation:
    """One window on one assignment, in the unit of its observable.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    >>> why = client.explain(sample, "testdata/selections/dimuon.yaml")
    >>> why.hypotheses["Z"].best.windows[0]
    WindowExplanation(path='condition.all_of[0].window', ... unit='GeV', value=89.95...)
    """

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
    """One measured parameter of a fit, here of two ``photons`` bound to the mass of a pi0.

    >>> pull = client.explain(photons, pions).hypotheses["pi0"].best.pulls[0]
    >>> pull.particle, pull.parameter, abs(pull.pull) < 5
    ('gamma[0]', 'momentum', True)
    """

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


class Assignment:
    """One assignment of objects to products, with one beam candidate.

    Here it is two ``photons``, which ``pions`` binds to the mass of a pi0.

    >>> best = client.explain(photons, pions).hypotheses["pi0"].best
    >>> best.objects, best.fit_status
    ({'gamma[0]': 0, 'gamma[1]': 1}, 'CONVERGED')
    >>> energy, *momentum = np.add(best.fitted["gamma[0]"], best.fitted["gamma[1]"])
    >>> mass = np.sqrt(energy**2 - np.dot(momentum, momentum))
    >>> bool(abs(mass / client.particle("pi0").mass - 1) < 1e-9)
    True
    """

    def __init__(
        self, message: explanation_pb2.AssignmentExplanation, products: Sequence[str]
    ) -> None:
        self.message = message
        """The part of the reply, for what the properties leave out."""
        self._products = products

    @property
    def objects(self) -> dict[str, int]:
        """Object within the event of each product that one stands for."""
        pairs = zip(self._products, self.message.objects, strict=True)
        return {product: row for product, row in pairs if row >= 0}

    @property
    def beam_row(self) -> int | None:
        """Beam candidate within the event; None where the hypothesis uses none."""
        return None if self.message.beam_row < 0 else self.message.beam_row

    @property
    def passed(self) -> bool:
        """The condition and the fit hold."""
        return self.message.passed

    @property
    def windows(self) -> list[WindowExplanation]:
        """The windows of the condition, then those that are recorded."""
        return [_window(w) for w in self.message.windows]

    @property
    def fit(self) -> explanation_pb2.FitExplanation | None:
        """The fit; None where there is none, and where a window failed before it."""
        return self.message.fit if self.message.HasField("fit") else None

    @property
    def fit_status(self) -> str:
        """How the fit ended, such as "CONVERGED"; empty without one."""
        if self.fit is None:
            return ""
        return word(fit_pb2.FitStatus, self.fit.status)

    @property
    def probability(self) -> float | None:
        """Probability of a larger chi-square; None unless the fit converged."""
        fit = self.fit
        return fit.probability if fit is not None and fit.HasField("probability") else None

    @property
    def pulls(self) -> list[Pull]:
        """Pulls of the measured parameters; empty unless the fit converged."""
        return [
            Pull(p.name, x.name, x.unit, x.measured, x.uncertainty, x.fitted, x.pull)
            for p in (self.fit.particles if self.fit is not None else ())
            for x in p.parameters
            if x.HasField("pull")
        ]

    @property
    def fitted(self) -> dict[str, tuple[float, float, float, float]]:
        """Fitted (E, px, py, pz) in GeV by reference, "beam" and "target" included."""
        particles = self.fit.particles if self.fit is not None else ()
        return {
            p.name: (p.fitted.energy_gev, p.fitted.px_gev, p.fitted.py_gev, p.fitted.pz_gev)
            for p in particles
        }

    def tables(self) -> list[Table]:
        """Return windows, constraints and pulls."""
        tables = []
        if rows := [_window_row(w) for w in self.windows]:
            columns = ("window", "value", "spread", "", "room to the limit")
            tables.append(_filled("", columns, rows))
        if self.fit is not None:
            rows = [
                [c.name, _number(c.before, c.unit, 4), _number(c.after, c.unit, 2)]
                for c in self.fit.constraints
            ]
            tables.append(Table("", ("constraint", "before the fit", "after"), rows))
        if rows := [_pull_row(p) for p in self.pulls]:
            columns = ("particle", "parameter", "measured", "fitted", "pull")
            tables.append(Table("", columns, rows))
        return tables


class HypothesisExplanation:
    """What one hypothesis made of the event.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    >>> why = client.explain(sample, "testdata/selections/dimuon.yaml")
    >>> why.hypotheses["dimuon"].accepted, why.hypotheses["equal-plus"].obstacle
    (True, '...')
    """

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
    def assignments(self) -> list[Assignment]:
        """The assignments, best first; at most as many as were asked for."""
        products = self.message.products
        return [Assignment(a, products) for a in self.message.assignments]

    @property
    def best(self) -> Assignment | None:
        """The assignment of the entry, or else the best that was possible; None for none."""
        listed = self.assignments
        return next((a for a in listed if a.message.best), next(iter(listed), None))

    def tables(self) -> list[Table]:
        """Return the assignments, then windows, constraints and pulls of the best one."""
        verdict = "accepts" if self.accepted else "does not accept"
        title = f"{self.name} {verdict}: {self.message.reaction}"
        best = self.best
        if self.obstacle or best is None:
            return [Table(title, note=self.obstacle or "no assignment")]
        rows = [_assignment_row(a) for a in self.assignments[:_SHOWN]]
        columns = ("objects", "beam row", "passes", "fit", "probability")
        count = self.message.assignment_count
        note = f"{count} {'assignment' if count == 1 else 'assignments'} tried"
        return [_filled(title, columns, rows, note), *best.tables()]


class Explanation(Answer[explanation_pb2.ExplainVerdictResponse]):
    """The verdict on one event laid open; it is that of a judge stream to the last bit.

    >>> sample = kinegate.Events.read_csv("testdata/open/dimuon_2011A.csv")
    >>> why = client.explain(sample, "testdata/selections/dimuon.yaml", event=7)
    >>> why.gate, [name for name, h in why.hypotheses.items() if h.accepted]
    (True, ['dimuon', ...])
    """

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
        return word(verdict_pb2.EventStatus, self.message.status)

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


def _filled(
    title: str, columns: Sequence[str], rows: Sequence[Sequence[str]], note: str = ""
) -> Table:
    """Make a table of the columns that say anything."""
    kept = [k for k in range(len(columns)) if any(row[k] for row in rows)]
    cells = [[row[k] for k in kept] for row in rows]
    return Table(title, [columns[k] for k in kept], cells, note)


def _assignment_row(assignment: Assignment) -> list[str]:
    return [
        ", ".join(f"{product}={row}" for product, row in assignment.objects.items()),
        "" if assignment.beam_row is None else str(assignment.beam_row),
        "yes" if assignment.passed else "no",
        assignment.fit_status.replace("_", " ").lower(),
        "" if assignment.probability is None else f"{assignment.probability:.4f}",
    ]


def _window_row(w: WindowExplanation) -> list[str]:
    return [
        w.label,
        _number(w.value, w.unit),
        "" if w.uncertainty is None else _number(w.uncertainty, w.unit, 2),
        "inside" if w.inside else "OUTSIDE",
        "" if w.room is None else _number(w.room, w.unit, 3),
    ]


def _pull_row(p: Pull) -> list[str]:
    measured = f"{_number(p.measured, p.unit, 5)} +- {_number(p.uncertainty, p.unit, 2)}"
    fitted = _number(p.fitted, p.unit, 5)
    return [p.particle, p.parameter, measured, fitted, f"{p.pull:+.2f}"]


def _number(value: float, unit: str, digits: int = 6) -> str:
    return f"{value:.{digits}g} {unit}".rstrip()
