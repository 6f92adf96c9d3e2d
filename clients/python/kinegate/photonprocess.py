"""What the answers on processes with real photons have in common."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Generic, TypeVar

import numpy as np

from kinegate.question import Answer, Question
from kinegate.units import format_cross_section
from kinegate.v1 import photon_pb2

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from numpy.typing import NDArray

__all__ = ["ByHelicity", "PhotonProcess"]

T = TypeVar("T")
A = TypeVar("A")


@dataclass(frozen=True)
class ByHelicity(Generic[T]):
    """A quantity by the helicities of two photons; a float or an array, as its owner says.

    >>> total = client.pair_creation("e-", sqrt_s="2 MeV").total
    >>> bool(abs((total.equal + total.opposite) / 2 / total.unpolarised - 1) < 1e-15)
    True
    """

    unpolarised: T
    """Photons without polarisation: half of each of the others."""
    equal: T
    """Equal helicities: total helicity 0 along the photons."""
    opposite: T
    """Opposite helicities: total helicity 2."""


class PhotonProcess(Answer[photon_pb2.DescribePhotonProcessResponse]):
    """What every process has: its particle, and what the answer leaves out.

    >>> client.field_pair("mu-", target="p").mass
    0.1056583755
    """

    @property
    def answer(self) -> Any:
        """The member of the reply that belongs to the process."""
        return getattr(self.message, self.message.WhichOneof("answer") or "")

    @property
    def particle(self) -> str:
        """The particle by its canonical name."""
        return str(self.answer.particle)

    @property
    def mass(self) -> float:
        """Mass of the particle in GeV."""
        return float(self.answer.mass_gev)

    @property
    def omissions(self) -> list[str]:
        """What the answer leaves out, in sentences."""
        return list(self.message.omissions)

    @property
    def note(self) -> str:
        """The line below the tables: what is left out, and the particle table."""
        table = f"Particle table {self.message.table_version}."
        return " ".join([*self.omissions, table])


def asked(kind: Callable[[Any], A], **process: Any) -> Question[A]:
    """Make the question about a process, a member of the request."""
    request = photon_pb2.DescribePhotonProcessRequest(**process)
    return Question("PhotonService", "DescribePhotonProcess", request, lambda r: kind(r[0]))


def by_helicity(messages: Sequence[Any], unit: str) -> ByHelicity[NDArray[np.float64]]:
    """Read messages with a member for each combination of helicities as three columns."""
    return ByHelicity(*(column(messages, f"{name}_{unit}") for name in _NAMES))


def one_by_helicity(message: Any, unit: str) -> ByHelicity[float]:
    """Read a message with a member for each combination of helicities."""
    return ByHelicity(*(getattr(message, f"{name}_{unit}") for name in _NAMES))


_NAMES = ("unpolarised", "equal", "opposite")


def column(messages: Sequence[Any], name: str) -> NDArray[np.float64]:
    """Return one member of all messages; NaN where it is absent."""
    return np.array([optional(m, name, np.nan) for m in messages])


def optional(message: Any, name: str, absent: Any = None) -> Any:
    """Return a member, or what stands for it where it is absent."""
    field = message.DESCRIPTOR.fields_by_name[name]
    return absent if field.has_presence and not message.HasField(name) else getattr(message, name)


def barns(value: float | None) -> str:
    """Write a cross-section; infinite where it is absent."""
    return "infinite" if value is None else format_cross_section(value)
