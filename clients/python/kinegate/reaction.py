"""Reactions: whether a channel is open, how far above threshold, where products go."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final, Unpack

from kinegate.channel import (
    Limits,
    Range,
    energies,
    is_open,
    limit_rows,
    product_limits,
    state_name,
)
from kinegate.enums import word
from kinegate.errors import ArgumentError
from kinegate.initial import Beams, initial_state
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.units import format_energy
from kinegate.v1 import reaction_pb2

if TYPE_CHECKING:
    from collections.abc import Sequence

    from kinegate.v1 import kinematics_pb2


__all__ = ["Reaction", "reaction"]


_INITIAL: Final = {
    "beam": reaction_pb2.INITIAL_PARTICLE_BEAM,
    "target": reaction_pb2.INITIAL_PARTICLE_TARGET,
}


class Reaction(Answer[reaction_pb2.DescribeReactionResponse]):
    """A reaction at an energy. Energies in GeV; None stands for what does not exist.

    >>> answer = client.reaction("gamma p -> K+ Lambda", beam="1.2 GeV")
    >>> answer.state, round(answer.excess_energy, 4), list(answer.products)
    ('OPEN', 0.1604, ['K+', 'Lambda'])
    """

    @property
    def text(self) -> str:
        """The reaction as understood."""
        return self.message.reaction

    @property
    def state(self) -> str:
        """OPEN, OPEN_THROUGH_WIDTH, AT_THRESHOLD or CLOSED; ON_POINT or OFF_POINT for one body.

        UNSPECIFIED where no energy was given.
        """
        return state_name(self.message)

    @property
    def is_open(self) -> bool:
        """The reaction can happen at the energy given."""
        return is_open(self.state)

    @property
    def threshold(self) -> float | None:
        """Total energy of the beam at threshold with nominal masses."""
        threshold = self.message.threshold
        return threshold.total_energy_gev if threshold.HasField("total_energy_gev") else None

    @property
    def threshold_uncertainty(self) -> float | None:
        """Uncertainty of `threshold` from the masses."""
        threshold = self.message.threshold
        has = threshold.HasField("energy_uncertainty_gev")
        return threshold.energy_uncertainty_gev if has else None

    @property
    def threshold_kinetic(self) -> float | None:
        """Kinetic energy of the beam at threshold."""
        threshold = self.message.threshold
        return threshold.kinetic_energy_gev if threshold.HasField("kinetic_energy_gev") else None

    @property
    def threshold_sqrt_s(self) -> float | None:
        """Energy in the centre-of-mass frame at threshold: the sum of the product masses."""
        return self.message.threshold.sqrt_s_gev if self.message.HasField("threshold") else None

    @property
    def sqrt_s(self) -> float | None:
        """Energy in the centre-of-mass frame."""
        motion = self.message.centre_of_mass
        return motion.sqrt_s_gev if self.message.HasField("centre_of_mass") else None

    @property
    def excess_energy(self) -> float | None:
        """Energy above threshold in the centre-of-mass frame; negative below."""
        return (
            self.message.excess_energy_gev if self.message.HasField("excess_energy_gev") else None
        )

    @property
    def missing_beam_energy(self) -> float | None:
        """Energy that the beam lacks to the threshold; None where open."""
        has = self.message.HasField("beam_energy_deficit_gev")
        return self.message.beam_energy_deficit_gev if has else None

    @property
    def products(self) -> dict[str, Limits]:
        """Where each product can go, by its reference; empty where closed."""
        return {p.product: product_limits(p) for p in self.message.products}

    @property
    def subset_masses(self) -> dict[tuple[str, ...], Range]:
        """Invariant masses that groups of products can have, by their references."""
        return {tuple(s.products): energies(s.mass) for s in self.message.subset_masses}

    @property
    def momentum_transfers(self) -> dict[str, tuple[float, float]]:
        """Forward and backward end of each t in GeV squared, such as "t(beam, K+)"."""
        return {
            _transfer_name(t): (t.t_forward_gev2, t.t_backward_gev2)
            for t in self.message.momentum_transfers
        }

    def tables(self) -> list[Table]:
        """Return the summary, and the limits where the channel is open."""
        tables = [Table(f"{self.text}   {self.state.replace('_', ' ')}", (), self._summary())]
        if self.message.products:
            columns = (
                "product",
                "momentum (c.m.)",
                "energy (lab)",
                "momentum (lab)",
                "angle (lab)",
            )
            tables.append(Table("", columns, limit_rows(self.products.values())))
        if self.message.momentum_transfers:
            rows = [
                [name, f"{forward:.6g} GeV^2", f"{backward:.6g} GeV^2"]
                for name, (forward, backward) in self.momentum_transfers.items()
            ]
            tables.append(Table("", ("momentum transfer", "forward", "backward"), rows))
        notes = [self.message.frame, *self.message.remarks]
        table = f"particle table {self.message.table_version}"
        last = tables.pop()
        note = "; ".join([*filter(None, notes), table])
        return [*tables, Table(last.title, last.columns, last.rows, note)]

    def _summary(self) -> list[list[str]]:
        rows = []
        if self.sqrt_s is not None:
            motion = self.message.centre_of_mass
            rows.append(["sqrt(s)", format_energy(self.sqrt_s)])
            text = f"moves at beta {motion.beta:.6f}, gamma {motion.gamma:.6f}"
            rows.append(["centre of mass", text])
        if self.threshold_sqrt_s is not None:
            rows.append(["threshold", f"sqrt(s) {format_energy(self.threshold_sqrt_s)}"])
        if self.threshold is not None:
            spread = format_energy(self.threshold_uncertainty or 0.0, 2)
            rows.append(["", f"beam energy {format_energy(self.threshold)} +- {spread}"])
        if self.excess_energy is not None:
            rows.append(["excess energy", f"{format_energy(self.excess_energy)} in sqrt(s)"])
        if self.missing_beam_energy is not None:
            rows.append(["beam energy missing", format_energy(self.missing_beam_energy)])
        return rows


def reaction(
    text: str | kinematics_pb2.Reaction,
    *,
    phase_space_volume: bool = False,
    momentum_transfers: Sequence[tuple[str, Sequence[str]]] = (),
    **beams: Unpack[Beams],
) -> Question[Reaction]:
    """Ask whether a reaction is open and where its products go.

    Args:
        text: The reaction, such as "gamma p -> K+ Lambda, Lambda -> p pi-"; a comma adds
            the decay of a product. Or its structured form.
        phase_space_volume: Also give the volume of phase space.
        momentum_transfers: Which t are wanted, as ("beam" or "target", products); by
            default all between an initial particle and one product.
        beams: How the initial particles move, see :class:`kinegate.initial.Beams`.
            Without them only the threshold on a target at rest is answered.

    >>> answer = client.reaction("gamma p -> K+ Lambda", beam="1.2 GeV")
    >>> answer.threshold
    0.91108...
    >>> answer.products["Lambda"].angle.high / kinegate.units.DEGREE
    27.10...
    """
    request = reaction_pb2.DescribeReactionRequest(with_phase_space_volume=phase_space_volume)
    if isinstance(text, str):
        request.reaction = text
    else:
        request.structured_reaction.CopyFrom(text)
    state = initial_state(text if isinstance(text, str) else text.initial, beams)
    if state.WhichOneof("kind"):
        request.initial_state.CopyFrom(state)
    for initial, products in momentum_transfers:
        if initial not in _INITIAL:
            message = f"{initial!r} is neither of {' and '.join(map(repr, _INITIAL))}"
            raise ArgumentError(message, "momentum_transfers", initial)
        request.momentum_transfers.add(initial=_INITIAL[initial], products=products)
    return Question("ReactionService", "DescribeReaction", request, lambda r: Reaction(r[0]))


def _transfer_name(message: reaction_pb2.MomentumTransferLimits) -> str:
    initial = word(reaction_pb2.InitialParticle, message.initial).lower()
    return f"t({initial}, {' '.join(message.products)})"
