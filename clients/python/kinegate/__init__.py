"""Client of a kinegate server: relativistic kinematics and event selection.

    >>> import kinegate
    >>> with kinegate.start_server() as server, server.connect() as client:
    ...     client.reaction("gamma p -> K+ Lambda", beam="1.2 GeV").threshold
    0.91108...

Numbers are plain floats in GeV (c = 1), radian, metre, second; detector times in ns where
a name says so. Arguments may also be texts with a unit: "850 MeV", "25 deg", "532 nm".

kinegate is a planning and selection tool, never a safety system: no interlock, shielding
or dose decision may rest on it.
"""

from importlib.metadata import PackageNotFoundError, version

from kinegate import plot, questions, units
from kinegate.aio import AsyncClient, AsyncJudgeStream, connect_async
from kinegate.annihilation import Annihilation
from kinegate.backscatter import Backscatter
from kinegate.bound import Bound
from kinegate.channel import Limits, Range
from kinegate.client import Client, connect
from kinegate.compton import Compton
from kinegate.dalitz import Boundary, Dalitz
from kinegate.decay import Decay
from kinegate.detector import DetectorCheck, DetectorLike
from kinegate.errors import (
    ArgumentError,
    BlockRejected,
    Cancelled,
    DeadlineExceeded,
    FailedPrecondition,
    FieldViolation,
    Internal,
    InvalidArgument,
    KinegateError,
    NotFound,
    PermissionDenied,
    ResourceExhausted,
    SelectionFaulty,
    ServerError,
    StreamBroken,
    Unauthenticated,
    Unavailable,
    Unimplemented,
    UsageError,
)
from kinegate.events import COORDINATES, NEGATIVE, NEUTRAL, PHOTON, POSITIVE, Events
from kinegate.explanation import (
    Assignment,
    Explanation,
    HypothesisExplanation,
    Pull,
    WindowExplanation,
)
from kinegate.faults import Check
from kinegate.generation import Generated, GenerationCheck, GenerationLike, Truth
from kinegate.generationstream import AsyncGenerationStream, GenerationStream
from kinegate.info import Info
from kinegate.initial import Beams
from kinegate.judge import JudgeSettings
from kinegate.motion import Motion
from kinegate.openchannels import OpenChannel, OpenChannels
from kinegate.paircreation import FieldPair, PairCreation
from kinegate.particle import Particle, Particles
from kinegate.parts import BeamCandidates, ClusterPositions, Polarisation, VertexGroups, Vertices
from kinegate.photonfield import PhotonField
from kinegate.photonprocess import ByHelicity, PhotonProcess
from kinegate.pulls import Pulls
from kinegate.question import Answer, Question
from kinegate.reaction import Reaction
from kinegate.selection import Hypothesis, Selection, SelectionCheck, SelectionLike
from kinegate.server import LocalServer, find_program, start_server
from kinegate.stream import JudgeStream
from kinegate.stubs import Stubs
from kinegate.tables import Table
from kinegate.twobody import TwoBody
from kinegate.verdicts import Entries, Fits, Observable, Verdicts

try:
    __version__ = version("kinegate")
except PackageNotFoundError:  # a source tree that is not installed
    __version__ = "0"

__all__ = [
    "COORDINATES",
    "NEGATIVE",
    "NEUTRAL",
    "PHOTON",
    "POSITIVE",
    "Annihilation",
    "Answer",
    "ArgumentError",
    "Assignment",
    "AsyncClient",
    "AsyncGenerationStream",
    "AsyncJudgeStream",
    "Backscatter",
    "BeamCandidates",
    "Beams",
    "BlockRejected",
    "Bound",
    "Boundary",
    "ByHelicity",
    "Cancelled",
    "Check",
    "Client",
    "ClusterPositions",
    "Compton",
    "Dalitz",
    "DeadlineExceeded",
    "Decay",
    "DetectorCheck",
    "DetectorLike",
    "Entries",
    "Events",
    "Explanation",
    "FailedPrecondition",
    "FieldPair",
    "FieldViolation",
    "Fits",
    "Generated",
    "GenerationCheck",
    "GenerationLike",
    "GenerationStream",
    "Hypothesis",
    "HypothesisExplanation",
    "Info",
    "Internal",
    "InvalidArgument",
    "JudgeSettings",
    "JudgeStream",
    "KinegateError",
    "Limits",
    "LocalServer",
    "Motion",
    "NotFound",
    "Observable",
    "OpenChannel",
    "OpenChannels",
    "PairCreation",
    "Particle",
    "Particles",
    "PermissionDenied",
    "PhotonField",
    "PhotonProcess",
    "Polarisation",
    "Pull",
    "Pulls",
    "Question",
    "Range",
    "Reaction",
    "ResourceExhausted",
    "Selection",
    "SelectionCheck",
    "SelectionFaulty",
    "SelectionLike",
    "ServerError",
    "StreamBroken",
    "Stubs",
    "Table",
    "Truth",
    "TwoBody",
    "Unauthenticated",
    "Unavailable",
    "Unimplemented",
    "UsageError",
    "Verdicts",
    "VertexGroups",
    "Vertices",
    "WindowExplanation",
    "__version__",
    "connect",
    "connect_async",
    "find_program",
    "plot",
    "questions",
    "start_server",
    "units",
]
