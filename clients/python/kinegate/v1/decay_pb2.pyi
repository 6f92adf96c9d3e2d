from kinegate.v1 import channel_pb2 as _channel_pb2
from kinegate.v1 import dalitz_pb2 as _dalitz_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from kinegate.v1 import reaction_pb2 as _reaction_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class DescribeDecayRequest(_message.Message):
    __slots__ = ("decay", "structured_decay", "parent", "distances_m", "intervals", "opening_angles_rad", "rest_frame_cosines", "laboratory_angles_rad")
    DECAY_FIELD_NUMBER: _ClassVar[int]
    STRUCTURED_DECAY_FIELD_NUMBER: _ClassVar[int]
    PARENT_FIELD_NUMBER: _ClassVar[int]
    DISTANCES_M_FIELD_NUMBER: _ClassVar[int]
    INTERVALS_FIELD_NUMBER: _ClassVar[int]
    OPENING_ANGLES_RAD_FIELD_NUMBER: _ClassVar[int]
    REST_FRAME_COSINES_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ANGLES_RAD_FIELD_NUMBER: _ClassVar[int]
    decay: str
    structured_decay: _kinematics_pb2.Reaction
    parent: _kinematics_pb2.BeamMotion
    distances_m: _containers.RepeatedScalarFieldContainer[float]
    intervals: _containers.RepeatedCompositeFieldContainer[DistanceInterval]
    opening_angles_rad: _containers.RepeatedScalarFieldContainer[float]
    rest_frame_cosines: _containers.RepeatedScalarFieldContainer[float]
    laboratory_angles_rad: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, decay: _Optional[str] = ..., structured_decay: _Optional[_Union[_kinematics_pb2.Reaction, _Mapping]] = ..., parent: _Optional[_Union[_kinematics_pb2.BeamMotion, _Mapping]] = ..., distances_m: _Optional[_Iterable[float]] = ..., intervals: _Optional[_Iterable[_Union[DistanceInterval, _Mapping]]] = ..., opening_angles_rad: _Optional[_Iterable[float]] = ..., rest_frame_cosines: _Optional[_Iterable[float]] = ..., laboratory_angles_rad: _Optional[_Iterable[float]] = ...) -> None: ...

class DistanceInterval(_message.Message):
    __slots__ = ("from_m", "to_m")
    FROM_M_FIELD_NUMBER: _ClassVar[int]
    TO_M_FIELD_NUMBER: _ClassVar[int]
    from_m: float
    to_m: float
    def __init__(self, from_m: _Optional[float] = ..., to_m: _Optional[float] = ...) -> None: ...

class DescribeDecayResponse(_message.Message):
    __slots__ = ("decay", "state", "decay_class", "released_energy_gev", "released_energy_uncertainty_gev", "parent", "daughters", "opening_angle", "surviving_fractions", "table_version", "limit_masses", "decaying_fractions", "granddaughters", "opening_angles", "rest_frame_pairs", "laboratory_solutions", "remarks")
    DECAY_FIELD_NUMBER: _ClassVar[int]
    STATE_FIELD_NUMBER: _ClassVar[int]
    DECAY_CLASS_FIELD_NUMBER: _ClassVar[int]
    RELEASED_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    RELEASED_ENERGY_UNCERTAINTY_GEV_FIELD_NUMBER: _ClassVar[int]
    PARENT_FIELD_NUMBER: _ClassVar[int]
    DAUGHTERS_FIELD_NUMBER: _ClassVar[int]
    OPENING_ANGLE_FIELD_NUMBER: _ClassVar[int]
    SURVIVING_FRACTIONS_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    LIMIT_MASSES_FIELD_NUMBER: _ClassVar[int]
    DECAYING_FRACTIONS_FIELD_NUMBER: _ClassVar[int]
    GRANDDAUGHTERS_FIELD_NUMBER: _ClassVar[int]
    OPENING_ANGLES_FIELD_NUMBER: _ClassVar[int]
    REST_FRAME_PAIRS_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_SOLUTIONS_FIELD_NUMBER: _ClassVar[int]
    REMARKS_FIELD_NUMBER: _ClassVar[int]
    decay: str
    state: _channel_pb2.ChannelState
    decay_class: _reaction_pb2.DecayClass
    released_energy_gev: float
    released_energy_uncertainty_gev: float
    parent: ParentMotion
    daughters: _containers.RepeatedCompositeFieldContainer[DaughterLimits]
    opening_angle: _kinematics_pb2.AngleRange
    surviving_fractions: _containers.RepeatedScalarFieldContainer[float]
    table_version: str
    limit_masses: _reaction_pb2.LimitMasses
    decaying_fractions: _containers.RepeatedScalarFieldContainer[float]
    granddaughters: _containers.RepeatedCompositeFieldContainer[GranddaughterLimits]
    opening_angles: _containers.RepeatedCompositeFieldContainer[OpeningAngleDensity]
    rest_frame_pairs: _containers.RepeatedCompositeFieldContainer[DecayPair]
    laboratory_solutions: _containers.RepeatedCompositeFieldContainer[DecaySolution]
    remarks: _containers.RepeatedScalarFieldContainer[str]
    def __init__(self, decay: _Optional[str] = ..., state: _Optional[_Union[_channel_pb2.ChannelState, str]] = ..., decay_class: _Optional[_Union[_reaction_pb2.DecayClass, str]] = ..., released_energy_gev: _Optional[float] = ..., released_energy_uncertainty_gev: _Optional[float] = ..., parent: _Optional[_Union[ParentMotion, _Mapping]] = ..., daughters: _Optional[_Iterable[_Union[DaughterLimits, _Mapping]]] = ..., opening_angle: _Optional[_Union[_kinematics_pb2.AngleRange, _Mapping]] = ..., surviving_fractions: _Optional[_Iterable[float]] = ..., table_version: _Optional[str] = ..., limit_masses: _Optional[_Union[_reaction_pb2.LimitMasses, str]] = ..., decaying_fractions: _Optional[_Iterable[float]] = ..., granddaughters: _Optional[_Iterable[_Union[GranddaughterLimits, _Mapping]]] = ..., opening_angles: _Optional[_Iterable[_Union[OpeningAngleDensity, _Mapping]]] = ..., rest_frame_pairs: _Optional[_Iterable[_Union[DecayPair, _Mapping]]] = ..., laboratory_solutions: _Optional[_Iterable[_Union[DecaySolution, _Mapping]]] = ..., remarks: _Optional[_Iterable[str]] = ...) -> None: ...

class ParentMotion(_message.Message):
    __slots__ = ("mass_gev", "total_energy_gev", "kinetic_energy_gev", "momentum_gev", "beta", "gamma", "mean_life_s", "mean_flight_m")
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    BETA_FIELD_NUMBER: _ClassVar[int]
    GAMMA_FIELD_NUMBER: _ClassVar[int]
    MEAN_LIFE_S_FIELD_NUMBER: _ClassVar[int]
    MEAN_FLIGHT_M_FIELD_NUMBER: _ClassVar[int]
    mass_gev: float
    total_energy_gev: float
    kinetic_energy_gev: float
    momentum_gev: float
    beta: float
    gamma: float
    mean_life_s: float
    mean_flight_m: float
    def __init__(self, mass_gev: _Optional[float] = ..., total_energy_gev: _Optional[float] = ..., kinetic_energy_gev: _Optional[float] = ..., momentum_gev: _Optional[float] = ..., beta: _Optional[float] = ..., gamma: _Optional[float] = ..., mean_life_s: _Optional[float] = ..., mean_flight_m: _Optional[float] = ...) -> None: ...

class DaughterLimits(_message.Message):
    __slots__ = ("product", "mass_gev", "rest_frame_energy", "rest_frame_momentum", "laboratory_energy", "laboratory_momentum", "laboratory_angle", "laboratory_energy_density_per_gev", "double_valued")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    REST_FRAME_ENERGY_FIELD_NUMBER: _ClassVar[int]
    REST_FRAME_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ENERGY_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ANGLE_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ENERGY_DENSITY_PER_GEV_FIELD_NUMBER: _ClassVar[int]
    DOUBLE_VALUED_FIELD_NUMBER: _ClassVar[int]
    product: str
    mass_gev: float
    rest_frame_energy: _kinematics_pb2.EnergyRange
    rest_frame_momentum: _kinematics_pb2.EnergyRange
    laboratory_energy: _kinematics_pb2.EnergyRange
    laboratory_momentum: _kinematics_pb2.EnergyRange
    laboratory_angle: _kinematics_pb2.AngleRange
    laboratory_energy_density_per_gev: float
    double_valued: bool
    def __init__(self, product: _Optional[str] = ..., mass_gev: _Optional[float] = ..., rest_frame_energy: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., rest_frame_momentum: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., laboratory_energy: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., laboratory_momentum: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., laboratory_angle: _Optional[_Union[_kinematics_pb2.AngleRange, _Mapping]] = ..., laboratory_energy_density_per_gev: _Optional[float] = ..., double_valued: bool = ...) -> None: ...

class GranddaughterLimits(_message.Message):
    __slots__ = ("limits", "parent", "rest_frame_energy_density_per_gev")
    LIMITS_FIELD_NUMBER: _ClassVar[int]
    PARENT_FIELD_NUMBER: _ClassVar[int]
    REST_FRAME_ENERGY_DENSITY_PER_GEV_FIELD_NUMBER: _ClassVar[int]
    limits: DaughterLimits
    parent: str
    rest_frame_energy_density_per_gev: float
    def __init__(self, limits: _Optional[_Union[DaughterLimits, _Mapping]] = ..., parent: _Optional[str] = ..., rest_frame_energy_density_per_gev: _Optional[float] = ...) -> None: ...

class OpeningAngleDensity(_message.Message):
    __slots__ = ("density_per_rad", "fraction_below")
    DENSITY_PER_RAD_FIELD_NUMBER: _ClassVar[int]
    FRACTION_BELOW_FIELD_NUMBER: _ClassVar[int]
    density_per_rad: float
    fraction_below: float
    def __init__(self, density_per_rad: _Optional[float] = ..., fraction_below: _Optional[float] = ...) -> None: ...

class DecaySolution(_message.Message):
    __slots__ = ("pairs",)
    PAIRS_FIELD_NUMBER: _ClassVar[int]
    pairs: _containers.RepeatedCompositeFieldContainer[DecayPair]
    def __init__(self, pairs: _Optional[_Iterable[_Union[DecayPair, _Mapping]]] = ...) -> None: ...

class DecayPair(_message.Message):
    __slots__ = ("daughters", "opening_angle_rad")
    DAUGHTERS_FIELD_NUMBER: _ClassVar[int]
    OPENING_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    daughters: _containers.RepeatedCompositeFieldContainer[DecayMotion]
    opening_angle_rad: float
    def __init__(self, daughters: _Optional[_Iterable[_Union[DecayMotion, _Mapping]]] = ..., opening_angle_rad: _Optional[float] = ...) -> None: ...

class DecayMotion(_message.Message):
    __slots__ = ("rest_frame_angle_rad", "laboratory_angle_rad", "laboratory_total_energy_gev", "laboratory_kinetic_energy_gev", "laboratory_momentum_gev", "rest_frame_per_laboratory")
    REST_FRAME_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    REST_FRAME_PER_LABORATORY_FIELD_NUMBER: _ClassVar[int]
    rest_frame_angle_rad: float
    laboratory_angle_rad: float
    laboratory_total_energy_gev: float
    laboratory_kinetic_energy_gev: float
    laboratory_momentum_gev: float
    rest_frame_per_laboratory: float
    def __init__(self, rest_frame_angle_rad: _Optional[float] = ..., laboratory_angle_rad: _Optional[float] = ..., laboratory_total_energy_gev: _Optional[float] = ..., laboratory_kinetic_energy_gev: _Optional[float] = ..., laboratory_momentum_gev: _Optional[float] = ..., rest_frame_per_laboratory: _Optional[float] = ...) -> None: ...
