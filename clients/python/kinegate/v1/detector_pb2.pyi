from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class Species(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    SPECIES_UNSPECIFIED: _ClassVar[Species]
    SPECIES_ELECTRON: _ClassVar[Species]
    SPECIES_MUON: _ClassVar[Species]
    SPECIES_PION: _ClassVar[Species]
    SPECIES_KAON: _ClassVar[Species]
    SPECIES_PROTON: _ClassVar[Species]
    SPECIES_DEUTERON: _ClassVar[Species]
SPECIES_UNSPECIFIED: Species
SPECIES_ELECTRON: Species
SPECIES_MUON: Species
SPECIES_PION: Species
SPECIES_KAON: Species
SPECIES_PROTON: Species
SPECIES_DEUTERON: Species

class Detector(_message.Message):
    __slots__ = ("name", "description", "calorimeter", "tracker", "recoil", "neutrals", "tagger", "vertex", "displaced")
    NAME_FIELD_NUMBER: _ClassVar[int]
    DESCRIPTION_FIELD_NUMBER: _ClassVar[int]
    CALORIMETER_FIELD_NUMBER: _ClassVar[int]
    TRACKER_FIELD_NUMBER: _ClassVar[int]
    RECOIL_FIELD_NUMBER: _ClassVar[int]
    NEUTRALS_FIELD_NUMBER: _ClassVar[int]
    TAGGER_FIELD_NUMBER: _ClassVar[int]
    VERTEX_FIELD_NUMBER: _ClassVar[int]
    DISPLACED_FIELD_NUMBER: _ClassVar[int]
    name: str
    description: str
    calorimeter: Calorimeter
    tracker: Tracker
    recoil: DirectionDetector
    neutrals: DirectionDetector
    tagger: Tagger
    vertex: VertexDetector
    displaced: DisplacedVertexDetector
    def __init__(self, name: _Optional[str] = ..., description: _Optional[str] = ..., calorimeter: _Optional[_Union[Calorimeter, _Mapping]] = ..., tracker: _Optional[_Union[Tracker, _Mapping]] = ..., recoil: _Optional[_Union[DirectionDetector, _Mapping]] = ..., neutrals: _Optional[_Union[DirectionDetector, _Mapping]] = ..., tagger: _Optional[_Union[Tagger, _Mapping]] = ..., vertex: _Optional[_Union[VertexDetector, _Mapping]] = ..., displaced: _Optional[_Union[DisplacedVertexDetector, _Mapping]] = ...) -> None: ...

class PolarRange(_message.Message):
    __slots__ = ("min_rad", "max_rad")
    MIN_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_RAD_FIELD_NUMBER: _ClassVar[int]
    min_rad: float
    max_rad: float
    def __init__(self, min_rad: _Optional[float] = ..., max_rad: _Optional[float] = ...) -> None: ...

class Calorimeter(_message.Message):
    __slots__ = ("theta", "radius_m", "from_centre", "spread_z_m", "stochastic", "constant", "noise_gev", "theta_sigma_rad", "phi_sigma_rad", "threshold_gev", "efficiency", "merge_angle_rad", "split_off", "noise")
    THETA_FIELD_NUMBER: _ClassVar[int]
    RADIUS_M_FIELD_NUMBER: _ClassVar[int]
    FROM_CENTRE_FIELD_NUMBER: _ClassVar[int]
    SPREAD_Z_M_FIELD_NUMBER: _ClassVar[int]
    STOCHASTIC_FIELD_NUMBER: _ClassVar[int]
    CONSTANT_FIELD_NUMBER: _ClassVar[int]
    NOISE_GEV_FIELD_NUMBER: _ClassVar[int]
    THETA_SIGMA_RAD_FIELD_NUMBER: _ClassVar[int]
    PHI_SIGMA_RAD_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_GEV_FIELD_NUMBER: _ClassVar[int]
    EFFICIENCY_FIELD_NUMBER: _ClassVar[int]
    MERGE_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    SPLIT_OFF_FIELD_NUMBER: _ClassVar[int]
    NOISE_FIELD_NUMBER: _ClassVar[int]
    theta: PolarRange
    radius_m: float
    from_centre: bool
    spread_z_m: float
    stochastic: float
    constant: float
    noise_gev: float
    theta_sigma_rad: float
    phi_sigma_rad: float
    threshold_gev: float
    efficiency: float
    merge_angle_rad: float
    split_off: SplitOff
    noise: ClusterNoise
    def __init__(self, theta: _Optional[_Union[PolarRange, _Mapping]] = ..., radius_m: _Optional[float] = ..., from_centre: bool = ..., spread_z_m: _Optional[float] = ..., stochastic: _Optional[float] = ..., constant: _Optional[float] = ..., noise_gev: _Optional[float] = ..., theta_sigma_rad: _Optional[float] = ..., phi_sigma_rad: _Optional[float] = ..., threshold_gev: _Optional[float] = ..., efficiency: _Optional[float] = ..., merge_angle_rad: _Optional[float] = ..., split_off: _Optional[_Union[SplitOff, _Mapping]] = ..., noise: _Optional[_Union[ClusterNoise, _Mapping]] = ...) -> None: ...

class SplitOff(_message.Message):
    __slots__ = ("probability", "min_share", "max_share", "min_angle_rad", "max_angle_rad")
    PROBABILITY_FIELD_NUMBER: _ClassVar[int]
    MIN_SHARE_FIELD_NUMBER: _ClassVar[int]
    MAX_SHARE_FIELD_NUMBER: _ClassVar[int]
    MIN_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    probability: float
    min_share: float
    max_share: float
    min_angle_rad: float
    max_angle_rad: float
    def __init__(self, probability: _Optional[float] = ..., min_share: _Optional[float] = ..., max_share: _Optional[float] = ..., min_angle_rad: _Optional[float] = ..., max_angle_rad: _Optional[float] = ...) -> None: ...

class ClusterNoise(_message.Message):
    __slots__ = ("probability", "mean_gev")
    PROBABILITY_FIELD_NUMBER: _ClassVar[int]
    MEAN_GEV_FIELD_NUMBER: _ClassVar[int]
    probability: float
    mean_gev: float
    def __init__(self, probability: _Optional[float] = ..., mean_gev: _Optional[float] = ...) -> None: ...

class Tracker(_message.Message):
    __slots__ = ("theta", "min_momentum_gev", "constant", "per_gev", "angle_sigma_rad", "efficiency", "identify", "confusions")
    THETA_FIELD_NUMBER: _ClassVar[int]
    MIN_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    CONSTANT_FIELD_NUMBER: _ClassVar[int]
    PER_GEV_FIELD_NUMBER: _ClassVar[int]
    ANGLE_SIGMA_RAD_FIELD_NUMBER: _ClassVar[int]
    EFFICIENCY_FIELD_NUMBER: _ClassVar[int]
    IDENTIFY_FIELD_NUMBER: _ClassVar[int]
    CONFUSIONS_FIELD_NUMBER: _ClassVar[int]
    theta: PolarRange
    min_momentum_gev: float
    constant: float
    per_gev: float
    angle_sigma_rad: float
    efficiency: float
    identify: bool
    confusions: _containers.RepeatedCompositeFieldContainer[SpeciesConfusion]
    def __init__(self, theta: _Optional[_Union[PolarRange, _Mapping]] = ..., min_momentum_gev: _Optional[float] = ..., constant: _Optional[float] = ..., per_gev: _Optional[float] = ..., angle_sigma_rad: _Optional[float] = ..., efficiency: _Optional[float] = ..., identify: bool = ..., confusions: _Optional[_Iterable[_Union[SpeciesConfusion, _Mapping]]] = ...) -> None: ...

class SpeciesConfusion(_message.Message):
    __slots__ = ("species", "taken_for", "probability")
    SPECIES_FIELD_NUMBER: _ClassVar[int]
    TAKEN_FOR_FIELD_NUMBER: _ClassVar[int]
    PROBABILITY_FIELD_NUMBER: _ClassVar[int]
    species: Species
    taken_for: Species
    probability: float
    def __init__(self, species: _Optional[_Union[Species, str]] = ..., taken_for: _Optional[_Union[Species, str]] = ..., probability: _Optional[float] = ...) -> None: ...

class DirectionDetector(_message.Message):
    __slots__ = ("theta", "min_momentum_gev", "angle_sigma_rad", "efficiency")
    THETA_FIELD_NUMBER: _ClassVar[int]
    MIN_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    ANGLE_SIGMA_RAD_FIELD_NUMBER: _ClassVar[int]
    EFFICIENCY_FIELD_NUMBER: _ClassVar[int]
    theta: PolarRange
    min_momentum_gev: float
    angle_sigma_rad: float
    efficiency: float
    def __init__(self, theta: _Optional[_Union[PolarRange, _Mapping]] = ..., min_momentum_gev: _Optional[float] = ..., angle_sigma_rad: _Optional[float] = ..., efficiency: _Optional[float] = ...) -> None: ...

class Tagger(_message.Message):
    __slots__ = ("edges_gev", "sigma_gev", "time_sigma_ns")
    EDGES_GEV_FIELD_NUMBER: _ClassVar[int]
    SIGMA_GEV_FIELD_NUMBER: _ClassVar[int]
    TIME_SIGMA_NS_FIELD_NUMBER: _ClassVar[int]
    edges_gev: _containers.RepeatedScalarFieldContainer[float]
    sigma_gev: float
    time_sigma_ns: float
    def __init__(self, edges_gev: _Optional[_Iterable[float]] = ..., sigma_gev: _Optional[float] = ..., time_sigma_ns: _Optional[float] = ...) -> None: ...

class VertexDetector(_message.Message):
    __slots__ = ("sigma_x_m", "sigma_y_m", "sigma_z_m")
    SIGMA_X_M_FIELD_NUMBER: _ClassVar[int]
    SIGMA_Y_M_FIELD_NUMBER: _ClassVar[int]
    SIGMA_Z_M_FIELD_NUMBER: _ClassVar[int]
    sigma_x_m: float
    sigma_y_m: float
    sigma_z_m: float
    def __init__(self, sigma_x_m: _Optional[float] = ..., sigma_y_m: _Optional[float] = ..., sigma_z_m: _Optional[float] = ...) -> None: ...

class DisplacedVertexDetector(_message.Message):
    __slots__ = ("min_distance_m", "sigma_x_m", "sigma_y_m", "sigma_z_m", "efficiency")
    MIN_DISTANCE_M_FIELD_NUMBER: _ClassVar[int]
    SIGMA_X_M_FIELD_NUMBER: _ClassVar[int]
    SIGMA_Y_M_FIELD_NUMBER: _ClassVar[int]
    SIGMA_Z_M_FIELD_NUMBER: _ClassVar[int]
    EFFICIENCY_FIELD_NUMBER: _ClassVar[int]
    min_distance_m: float
    sigma_x_m: float
    sigma_y_m: float
    sigma_z_m: float
    efficiency: float
    def __init__(self, min_distance_m: _Optional[float] = ..., sigma_x_m: _Optional[float] = ..., sigma_y_m: _Optional[float] = ..., sigma_z_m: _Optional[float] = ..., efficiency: _Optional[float] = ...) -> None: ...
