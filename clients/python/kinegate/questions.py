"""Every question that can be asked; clients get one method of each."""

from kinegate.annihilation import annihilation
from kinegate.backscatter import backscatter
from kinegate.compton import compton
from kinegate.dalitz import dalitz
from kinegate.decay import decay
from kinegate.detector import check_detector
from kinegate.generation import check_generation
from kinegate.info import info
from kinegate.motion import motion
from kinegate.openchannels import open_channels
from kinegate.paircreation import field_pair, pair_creation
from kinegate.particle import particle, particles
from kinegate.photonfield import photon_field
from kinegate.reaction import reaction
from kinegate.selection import check
from kinegate.twobody import two_body

__all__ = [
    "annihilation",
    "backscatter",
    "check",
    "check_detector",
    "check_generation",
    "compton",
    "dalitz",
    "decay",
    "field_pair",
    "info",
    "motion",
    "open_channels",
    "pair_creation",
    "particle",
    "particles",
    "photon_field",
    "reaction",
    "two_body",
]
