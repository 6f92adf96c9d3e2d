"""Every question that can be asked; clients get one method of each.

Arguments that do not fit are refused by name.
"""

from kinegate.annihilation import annihilation as _annihilation
from kinegate.arguments import checked
from kinegate.backscatter import backscatter as _backscatter
from kinegate.bound import bound as _bound
from kinegate.compton import compton as _compton
from kinegate.dalitz import dalitz as _dalitz
from kinegate.decay import decay as _decay
from kinegate.detector import check_detector as _check_detector
from kinegate.generation import check_generation as _check_generation
from kinegate.info import info as _info
from kinegate.motion import motion as _motion
from kinegate.openchannels import open_channels as _open_channels
from kinegate.paircreation import field_pair as _field_pair
from kinegate.paircreation import pair_creation as _pair_creation
from kinegate.particle import particle as _particle
from kinegate.particle import particles as _particles
from kinegate.photonfield import photon_field as _photon_field
from kinegate.reaction import reaction as _reaction
from kinegate.selection import check as _check
from kinegate.twobody import two_body as _two_body

__all__ = [
    "annihilation",
    "backscatter",
    "bound",
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

annihilation = checked(_annihilation)
backscatter = checked(_backscatter)
bound = checked(_bound)
compton = checked(_compton)
dalitz = checked(_dalitz)
decay = checked(_decay)
check_detector = checked(_check_detector)
check_generation = checked(_check_generation)
info = checked(_info)
motion = checked(_motion)
open_channels = checked(_open_channels)
field_pair = checked(_field_pair)
pair_creation = checked(_pair_creation)
particle = checked(_particle)
particles = checked(_particles)
photon_field = checked(_photon_field)
reaction = checked(_reaction)
check = checked(_check)
two_body = checked(_two_body)
