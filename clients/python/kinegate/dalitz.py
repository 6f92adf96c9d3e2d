"""The boundary of the region that three bodies reach in the masses of their pairs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Unpack

import numpy as np

from kinegate import units
from kinegate.channel import state_name
from kinegate.initial import Beams, initial_state
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.v1 import dalitz_pb2

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from kinegate.units import Quantity

__all__ = ["Boundary", "Dalitz", "dalitz"]


@dataclass(frozen=True)
class Boundary:
    """The closed curve at one energy: masses squared of pairs in GeV squared.

    >>> boundary = client.dalitz("omega -> pi+ pi- pi0").boundaries[0]
    >>> bool(boundary.first_second.min() > 0.279**2)
    True
    """

    sqrt_s: float
    """Energy in the rest frame of the three bodies, GeV."""
    state: str
    """OPEN, AT_THRESHOLD or CLOSED; the curve is empty when closed."""
    first_second: NDArray[np.float64]
    """Mass squared of the first and the second body, shape (points,)."""
    second_third: NDArray[np.float64]
    """Mass squared of the second and the third body, shape (points,)."""
    first_third: NDArray[np.float64]
    """Mass squared of the first and the third body, shape (points,)."""


class Dalitz(Answer[dalitz_pb2.TraceDalitzBoundaryResponse]):
    """Boundaries at one or several energies; `kinegate.plot.dalitz` draws them.

    >>> client.dalitz("omega -> pi+ pi- pi0").bodies
    ['pi+', 'pi-', 'pi0']
    """

    @property
    def bodies(self) -> list[str]:
        """References of the first, second and third body."""
        return list(self.message.products)

    @property
    def boundaries(self) -> list[Boundary]:
        """One boundary for each energy; their columns view the reply without a copy."""
        return [
            Boundary(
                b.sqrt_s_gev,
                state_name(b),
                np.frombuffer(b.first_second_gev2, "<f8"),
                np.frombuffer(b.second_third_gev2, "<f8"),
                np.frombuffer(b.first_third_gev2, "<f8"),
            )
            for b in self.message.boundaries
        ]

    def tables(self) -> list[Table]:
        """Return the ranges of the masses of the pairs."""
        pairs = ((0, 1, "first_second"), (1, 2, "second_third"), (0, 2, "first_third"))
        columns = ["sqrt(s)", "state"]
        columns += [f"M2({self.bodies[i]}, {self.bodies[j]})" for i, j, _ in pairs]
        rows = []
        for b in self.message.boundaries:
            spans = [getattr(b, name) for _, _, name in pairs]
            cells = [f"{s.min_gev2:.6g} to {s.max_gev2:.6g} GeV^2" for s in spans]
            rows.append([units.format_energy(b.sqrt_s_gev), state_name(b), *cells])
        return [Table(self.message.process, columns, rows)]


def dalitz(
    text: str,
    *,
    at_sqrt_s: Iterable[Quantity] = (),
    resolution: float = 0.0,
    **beams: Unpack[Beams],
) -> Question[Dalitz]:
    """Ask for the boundary of a decay to three bodies, or of a reaction to three products.

    Args:
        text: The process, such as "omega -> pi+ pi- pi0" or "gamma p -> p pi+ pi-".
        at_sqrt_s: Energies in the centre of mass at which a reaction's boundary is wanted.
        resolution: Largest distance between neighbours as a fraction of the extent.
        beams: Initial state of a reaction, in place of `at_sqrt_s`.

    >>> boundary = client.dalitz("omega -> pi+ pi- pi0").boundaries[0]
    >>> float(boundary.first_second.max() ** 0.5)
    0.6476...
    """
    request = dalitz_pb2.TraceDalitzBoundaryRequest(
        process=text, sqrt_s_gev=map(units.energy, at_sqrt_s), resolution=resolution
    )
    state = initial_state(text, beams)
    if state.WhichOneof("kind"):
        request.initial_state.CopyFrom(state)
    return Question("DecayService", "TraceDalitzBoundary", request, lambda r: Dalitz(r[0]))
