from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class ChannelState(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    CHANNEL_STATE_UNSPECIFIED: _ClassVar[ChannelState]
    CHANNEL_STATE_OPEN: _ClassVar[ChannelState]
    CHANNEL_STATE_OPEN_THROUGH_WIDTH: _ClassVar[ChannelState]
    CHANNEL_STATE_AT_THRESHOLD: _ClassVar[ChannelState]
    CHANNEL_STATE_CLOSED: _ClassVar[ChannelState]
    CHANNEL_STATE_ON_POINT: _ClassVar[ChannelState]
    CHANNEL_STATE_OFF_POINT: _ClassVar[ChannelState]
CHANNEL_STATE_UNSPECIFIED: ChannelState
CHANNEL_STATE_OPEN: ChannelState
CHANNEL_STATE_OPEN_THROUGH_WIDTH: ChannelState
CHANNEL_STATE_AT_THRESHOLD: ChannelState
CHANNEL_STATE_CLOSED: ChannelState
CHANNEL_STATE_ON_POINT: ChannelState
CHANNEL_STATE_OFF_POINT: ChannelState

class CentreOfMass(_message.Message):
    __slots__ = ("s_gev2", "sqrt_s_gev", "total", "beta", "gamma", "initial_momentum_gev", "final_momentum_gev")
    S_GEV2_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    TOTAL_FIELD_NUMBER: _ClassVar[int]
    BETA_FIELD_NUMBER: _ClassVar[int]
    GAMMA_FIELD_NUMBER: _ClassVar[int]
    INITIAL_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    FINAL_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    s_gev2: float
    sqrt_s_gev: float
    total: _kinematics_pb2.FourMomentum
    beta: float
    gamma: float
    initial_momentum_gev: float
    final_momentum_gev: float
    def __init__(self, s_gev2: _Optional[float] = ..., sqrt_s_gev: _Optional[float] = ..., total: _Optional[_Union[_kinematics_pb2.FourMomentum, _Mapping]] = ..., beta: _Optional[float] = ..., gamma: _Optional[float] = ..., initial_momentum_gev: _Optional[float] = ..., final_momentum_gev: _Optional[float] = ...) -> None: ...

class Threshold(_message.Message):
    __slots__ = ("sqrt_s_gev", "sqrt_s_uncertainty_gev", "total_energy_gev", "kinetic_energy_gev", "momentum_gev", "energy_uncertainty_gev", "open_at_rest")
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_UNCERTAINTY_GEV_FIELD_NUMBER: _ClassVar[int]
    TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    ENERGY_UNCERTAINTY_GEV_FIELD_NUMBER: _ClassVar[int]
    OPEN_AT_REST_FIELD_NUMBER: _ClassVar[int]
    sqrt_s_gev: float
    sqrt_s_uncertainty_gev: float
    total_energy_gev: float
    kinetic_energy_gev: float
    momentum_gev: float
    energy_uncertainty_gev: float
    open_at_rest: bool
    def __init__(self, sqrt_s_gev: _Optional[float] = ..., sqrt_s_uncertainty_gev: _Optional[float] = ..., total_energy_gev: _Optional[float] = ..., kinetic_energy_gev: _Optional[float] = ..., momentum_gev: _Optional[float] = ..., energy_uncertainty_gev: _Optional[float] = ..., open_at_rest: bool = ...) -> None: ...

class ProductLimits(_message.Message):
    __slots__ = ("product", "number", "mass_gev", "centre_of_mass_energy", "centre_of_mass_momentum", "laboratory_energy", "laboratory_momentum", "laboratory_angle")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    NUMBER_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_ENERGY_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ENERGY_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ANGLE_FIELD_NUMBER: _ClassVar[int]
    product: str
    number: int
    mass_gev: float
    centre_of_mass_energy: _kinematics_pb2.EnergyRange
    centre_of_mass_momentum: _kinematics_pb2.EnergyRange
    laboratory_energy: _kinematics_pb2.EnergyRange
    laboratory_momentum: _kinematics_pb2.EnergyRange
    laboratory_angle: _kinematics_pb2.AngleRange
    def __init__(self, product: _Optional[str] = ..., number: _Optional[int] = ..., mass_gev: _Optional[float] = ..., centre_of_mass_energy: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., centre_of_mass_momentum: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., laboratory_energy: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., laboratory_momentum: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., laboratory_angle: _Optional[_Union[_kinematics_pb2.AngleRange, _Mapping]] = ...) -> None: ...
