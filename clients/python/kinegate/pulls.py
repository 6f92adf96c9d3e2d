"""Pulls of many fits, as columns."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from kinegate.arguments import checked
from kinegate.errors import ArgumentError
from kinegate.tables import Table

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from kinegate.explanation import Explanation

__all__ = ["Pulls", "of_best"]


@dataclass(frozen=True)
class Pulls:
    """Pulls of the best assignment of each event; they should follow the unit normal.

    Here there is one event of two ``photons``, which ``pions`` binds to the mass of a pi0.

    >>> pulls = client.pulls(photons, pions, "pi0")
    >>> list(pulls.columns)[:3], pulls.columns["gamma[0] theta"].shape
    (['gamma[0] momentum', 'gamma[0] theta', 'gamma[0] phi'], (1,))
    """

    hypothesis: str
    """Name of the hypothesis."""
    rows: NDArray[np.intp]
    """Rows of the events, shape (events,)."""
    columns: Mapping[str, NDArray[np.float64]]
    """Pulls by particle and parameter, each of shape (events,); NaN where there is none."""

    def table(self) -> Table:
        """Return number, mean and spread of each."""
        rows = []
        for name, column in self.columns.items():
            seen = column[np.isfinite(column)]
            rows.append([name, str(len(seen)), f"{seen.mean():+.3f}", f"{seen.std():.3f}"])
        title = f"pulls of {self.hypothesis} in {len(self.rows)} events"
        return Table(title, ("parameter", "pulls", "mean", "spread"), rows)

    def __str__(self) -> str:
        return str(self.table())

    __repr__ = __str__

    def _repr_html_(self) -> str:
        return self.table()._repr_html_()


def of_best(hypothesis: str, rows: NDArray[np.intp], explanations: Sequence[Explanation]) -> Pulls:
    """Gather the pulls of the best assignment of each event."""
    columns: dict[str, NDArray[np.float64]] = {}
    for place, why in enumerate(explanations):
        found = why.hypotheses.get(hypothesis)
        best = found.best if found is not None else None
        for pull in best.pulls if best is not None else ():
            name = f"{pull.particle} {pull.parameter}"
            column = columns.setdefault(name, np.full(len(rows), np.nan))
            column[place] = pull.pull
    return Pulls(hypothesis, rows, columns)


@checked
def accepted_rows(
    accepted: Sequence[Mapping[str, NDArray[np.bool_]]], hypothesis: str, most: int
) -> NDArray[np.intp]:
    """Return the rows of the first events that a hypothesis accepts."""
    if accepted and hypothesis not in accepted[0]:
        message = f"no hypothesis {hypothesis!r}; known: {', '.join(accepted[0])}"
        raise ArgumentError(message, "hypothesis", hypothesis)
    parts = [block[hypothesis] for block in accepted] or [np.zeros(0, np.bool_)]
    return np.flatnonzero(np.concatenate(parts))[:most]
