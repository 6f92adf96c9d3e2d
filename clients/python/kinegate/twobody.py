"""Two-body kinematics: where both products go when one quantity of one is given."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final, Unpack

import numpy as np

from kinegate.arguments import integer
from kinegate.channel import is_open, product_limits, state_name
from kinegate.errors import ArgumentError, shortened
from kinegate.initial import Beams, initial_state
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.units import angle, energy, format_angle, format_energy, plain
from kinegate.v1 import twobody_pb2

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable

    from numpy.typing import NDArray

    from kinegate.channel import Limits
    from kinegate.units import Quantity

__all__ = ["TwoBody", "two_body"]

# The variables of which one may be given: the field, and how a value is read.
_VARIABLES: Final[dict[str, tuple[str, Callable[[Quantity], float]]]] = {
    "angle": ("laboratory_angles_rad", angle),
    "rest_angle": ("centre_of_mass_angles_rad", angle),
    "rest_cosine": ("centre_of_mass_cosines", plain),
    "energy": ("laboratory_total_energies_gev", energy),
    "kinetic": ("laboratory_kinetic_energies_gev", energy),
    "momentum": ("laboratory_momenta_gev", energy),
    "t": ("t_values_gev2", plain),
    "t_prime": ("t_prime_values_gev2", plain),
}


class TwoBody(Answer[twobody_pb2.SolveTwoBodyResponse]):
    """Limits of both products and a solution for each value asked for.

    >>> answer = client.two_body("gamma p -> K+ Lambda", beam="1.2 GeV")
    >>> kinegate.units.format_angle(answer.largest_angles["Lambda"])
    '27.105 deg'
    """

    @property
    def state(self) -> str:
        """State of the channel with nominal masses, such as "OPEN"."""
        return state_name(self.message)

    @property
    def is_open(self) -> bool:
        """The reaction can happen at the energy given."""
        return is_open(self.state)

    @property
    def products(self) -> dict[str, Limits]:
        """Where each product can go, by its reference; empty where closed."""
        return {p.limits.product: product_limits(p.limits) for p in self.message.products}

    @property
    def largest_angles(self) -> dict[str, float]:
        """Largest laboratory angle of each product in radian."""
        return {p.limits.product: p.max_laboratory_angle_rad for p in self.message.products}

    def column(self, name: str, product: int = 0, branch: int = 0) -> NDArray[np.float64]:
        """Return one member of all solutions, shape (values,); NaN where there is none.

        Args:
            name: A member of TwoBodyOutgoing, such as "laboratory_momentum_gev", or of
                TwoBodyBranch, such as "t_gev2".
            product: 0 for the first product, 1 for the second.
            branch: 0 for the branch of the larger laboratory momentum, 1 for the other.

        >>> solution = client.two_body("gamma p -> K+ Lambda", beam="1.2 GeV",
        ...                            product="Lambda", given={"angle": ["0 deg", "20 deg"]})
        >>> solution.column("laboratory_momentum_gev", product=1)
        array([1.208..., 0.967...])
        """
        branch = integer("branch", branch, lowest=0)
        if product not in (0, 1):
            raise ArgumentError(f"{shortened(product)} is neither 0 nor 1", "product", product)
        return np.array([_member(s, name, product, branch) for s in self.message.solutions])

    def tables(self) -> list[Table]:
        """Return the solutions, or the limits where no values were given."""
        title = f"{self.message.reaction}   {self.state.replace('_', ' ')}"
        if not self.message.solutions:
            rows = [[name, format_angle(a)] for name, a in self.largest_angles.items()]
            return [Table(title, ("product", "largest angle (lab)"), rows, self.message.frame)]
        names = list(self.products)
        columns = ["value", "branch", "t"]
        columns += [f"{what} {name}" for name in names for what in ("momentum", "angle")]
        rows = [
            [f"{i}", f"{k}", f"{b.t_gev2:.6g} GeV^2"]
            + [
                text
                for p in b.products
                for text in (
                    format_energy(p.laboratory_momentum_gev, 6),
                    format_angle(p.laboratory_angle_rad),
                )
            ]
            for i, s in enumerate(self.message.solutions)
            for k, b in enumerate(s.branches)
        ]
        return [Table(title, columns, rows, f"laboratory; {self.message.frame}")]


def two_body(
    text: str,
    *,
    product: str = "",
    given: dict[str, Iterable[Quantity]] | None = None,
    **beams: Unpack[Beams],
) -> Question[TwoBody]:
    """Ask where both products of a two-body reaction go.

    Args:
        text: A reaction with two products, such as "gamma p -> K+ Lambda".
        product: Reference of the product that the values belong to; the first by default.
        given: At most one variable with up to 4,000 values: "angle" in the laboratory,
            "rest_angle" or "rest_cosine" in the centre of mass, "energy", "kinetic" or
            "momentum" in the laboratory, "t" or "t_prime" in GeV squared.
        beams: How the initial particles move, see :class:`kinegate.initial.Beams`.

    >>> answer = client.two_body("gamma p -> p pi0", beam="1.2 GeV", given={"rest_cosine": [0]})
    >>> answer.column("laboratory_momentum_gev")
    array([0.989...])
    """
    request = twobody_pb2.SolveTwoBodyRequest(reaction=text, product=product)
    request.initial_state.CopyFrom(initial_state(text, beams))
    for name, values in (given or {}).items():
        if name not in _VARIABLES:
            known = ", ".join(_VARIABLES)
            raise ArgumentError(f"unknown variable {name!r}; known: {known}", "given", name)
        field, read = _VARIABLES[name]
        getattr(request, field).extend([read(v) for v in values])
    return Question("ReactionService", "SolveTwoBody", request, lambda r: TwoBody(r[0]))


def _member(solution: twobody_pb2.TwoBodySolution, name: str, product: int, branch: int) -> float:
    if branch >= len(solution.branches):
        return float("nan")
    owner: Any = solution.branches[branch]
    if name not in owner.DESCRIPTOR.fields_by_name:
        owner = owner.products[product]
    field = owner.DESCRIPTOR.fields_by_name.get(name)
    if field is None:
        known = ", ".join(
            [*solution.branches[branch].DESCRIPTOR.fields_by_name, *owner.DESCRIPTOR.fields_by_name]
        )
        raise ArgumentError(f"unknown member {name!r}; known: {known}", "name", name)
    absent = field.has_presence and not owner.HasField(name)
    return float("nan") if absent else float(getattr(owner, name))
