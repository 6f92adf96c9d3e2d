"""Every question that can be asked; clients get one method of each."""

from kinegate.dalitz import dalitz
from kinegate.decay import decay
from kinegate.generation import check_generation
from kinegate.info import info
from kinegate.motion import motion
from kinegate.openchannels import open_channels
from kinegate.particle import particle, particles
from kinegate.photonfield import photon_field
from kinegate.reaction import reaction
from kinegate.selection import check
from kinegate.twobody import two_body

__all__ = [
    "check",
    "check_generation",
    "dalitz",
    "decay",
    "info",
    "motion",
    "open_channels",
    "particle",
    "particles",
    "photon_field",
    "reaction",
    "two_body",
]
