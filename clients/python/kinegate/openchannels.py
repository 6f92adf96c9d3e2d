"""Open channels: every final state that the conservation laws allow at an energy."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Unpack

from kinegate.channel import state_name
from kinegate.errors import ArgumentError
from kinegate.initial import Beams, initial_state
from kinegate.question import Answer, Question
from kinegate.tables import Table
from kinegate.units import format_energy
from kinegate.v1 import channels_pb2

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

__all__ = ["OpenChannel", "OpenChannels", "open_channels"]

_SHOWN = 40


@dataclass(frozen=True)
class OpenChannel:
    """One final state; energies in GeV.

    >>> client.open_channels("gamma p", beam="1.2 GeV")[0].name
    '...'
    """

    products: tuple[str, ...]
    """Names of the products, by mass."""
    state: str
    """OPEN or AT_THRESHOLD; CLOSED for what opens next."""
    excess_energy: float
    """Energy above threshold in the centre-of-mass frame."""
    threshold: float | None
    """Total energy of the beam at threshold; None where no energy of it opens the channel."""
    threshold_uncertainty: float | None
    """Uncertainty of `threshold` from the masses."""
    threshold_sqrt_s: float
    """Energy in the centre-of-mass frame at threshold."""

    @property
    def name(self) -> str:
        """The products in one text."""
        return " ".join(self.products)


class OpenChannels(Answer[channels_pb2.ListOpenChannelsResponse]):
    """The open channels at an energy, by the sum of their masses; a sequence.

    >>> channels = client.open_channels("gamma p", beam="1.2 GeV", max_bodies=2)
    >>> len(channels) == channels.total_count, channels.complete
    (True, True)
    """

    @property
    def channels(self) -> list[OpenChannel]:
        """The channels."""
        return [_channel(c) for c in self.message.channels]

    @property
    def total_count(self) -> int:
        """Number of open channels, those left off included."""
        return self.message.channel_count

    @property
    def next_to_open(self) -> OpenChannel | None:
        """The closed channel that opens next."""
        has = self.message.HasField("next_to_open")
        return _channel(self.message.next_to_open) if has else None

    @property
    def complete(self) -> bool:
        """The list holds every channel of as many bodies as were asked for."""
        return self.message.complete

    @property
    def sqrt_s(self) -> float:
        """Energy in the centre-of-mass frame."""
        return self.message.centre_of_mass.sqrt_s_gev

    def __len__(self) -> int:
        return len(self.message.channels)

    def __getitem__(self, index: int) -> OpenChannel:
        return _channel(self.message.channels[index])

    def __iter__(self) -> Iterator[OpenChannel]:
        return iter(self.channels)

    def tables(self) -> list[Table]:
        """Return the channels, the first ones of many."""
        rows = [
            [
                c.name,
                c.state.replace("_", " "),
                "none" if c.threshold is None else format_energy(c.threshold),
                format_energy(c.excess_energy, 5),
            ]
            for c in self.channels[:_SHOWN]
        ]
        title = f"{self.total_count} open channels at sqrt(s) {format_energy(self.sqrt_s)}"
        notes = []
        if self.total_count > _SHOWN:
            notes.append(f"the first {min(_SHOWN, len(self))} are shown")
        if (following := self.next_to_open) is not None:
            notes.append(f"next to open: {following.name}")
        if not self.complete:
            notes.append(f"complete up to {self.message.complete_body_count} bodies only")
        columns = ("channel", "state", "beam energy at threshold", "excess energy")
        return [Table(title, columns, rows, "; ".join(notes))]


def open_channels(
    initial: str,
    *,
    max_bodies: int = 2,
    min_bodies: int = 2,
    products: Sequence[str] = (),
    ignored_laws: Sequence[str] = (),
    spin_c_bose: bool = False,
    most: int = 1000,
    **beams: Unpack[Beams],
) -> Question[OpenChannels]:
    """Ask for every channel that is open at an energy.

    Args:
        initial: The two initial particles, such as "gamma p".
        max_bodies: Largest number of bodies, 1 to 5.
        min_bodies: Least number of bodies, 1 to 5.
        products: Particles of which channels are made; by default what is stable against
            the strong decay, with eta, omega, eta' and phi.
        ignored_laws: Laws that are not applied, such as "strangeness".
        spin_c_bose: Also apply what spin, C and Bose symmetry forbid.
        most: Largest number of channels to fetch.
        beams: How the initial particles move, see :class:`kinegate.initial.Beams`.

    >>> channels = client.open_channels("gamma p", beam="1.2 GeV")
    >>> channels[-1].name, channels.next_to_open.name
    ('omega p', "p eta'")
    """
    state = initial_state(initial, beams)
    request = channels_pb2.ListOpenChannelsRequest(
        initial_particles=initial.partition("->")[0].split(),
        initial_state=state if state.WhichOneof("kind") else None,
        products=products,
        min_body_count=min_bodies,
        max_body_count=max_bodies,
        ignored_laws=[_law(name) for name in ignored_laws],
        with_spin_c_bose=spin_c_bose,
        page_size=max(0, min(most, 1000)),
    )
    return Question(
        "ReactionService",
        "ListOpenChannels",
        request,
        lambda pages: OpenChannels(_joined(pages, most)),
        lambda pages: sum(len(p.channels) for p in pages) >= most,
    )


def _law(name: str) -> channels_pb2.ConservationLaw:
    key = f"CONSERVATION_LAW_{name.upper().replace(' ', '_').replace('-', '_')}"
    known = channels_pb2.ConservationLaw.keys()[1:]
    if key not in known:
        names = ", ".join(
            k.removeprefix("CONSERVATION_LAW_").lower().replace("_", " ") for k in known
        )
        raise ArgumentError(f"{name!r} is none of {names}", "ignored_laws", name)
    law: channels_pb2.ConservationLaw = getattr(channels_pb2, key)
    return law


def _joined(pages: Sequence[Any], most: int) -> channels_pb2.ListOpenChannelsResponse:
    whole = channels_pb2.ListOpenChannelsResponse()
    whole.CopyFrom(pages[0])
    for page in pages[1:]:
        whole.channels.extend(page.channels)
    del whole.channels[most:]
    whole.next_page_token = pages[-1].next_page_token
    return whole


def _channel(message: channels_pb2.OpenChannel) -> OpenChannel:
    threshold = message.threshold
    has = threshold.HasField("total_energy_gev")
    return OpenChannel(
        tuple(message.products),
        state_name(message),
        message.excess_energy_gev,
        threshold.total_energy_gev if has else None,
        threshold.energy_uncertainty_gev if has else None,
        threshold.sqrt_s_gev,
    )
