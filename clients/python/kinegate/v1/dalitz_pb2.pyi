from kinegate.v1 import channel_pb2 as _channel_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class TraceDalitzBoundaryRequest(_message.Message):
    __slots__ = ("process", "structured_process", "sqrt_s_gev", "initial_state", "resolution", "bands")
    PROCESS_FIELD_NUMBER: _ClassVar[int]
    STRUCTURED_PROCESS_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    INITIAL_STATE_FIELD_NUMBER: _ClassVar[int]
    RESOLUTION_FIELD_NUMBER: _ClassVar[int]
    BANDS_FIELD_NUMBER: _ClassVar[int]
    process: str
    structured_process: _kinematics_pb2.Reaction
    sqrt_s_gev: _containers.RepeatedScalarFieldContainer[float]
    initial_state: _kinematics_pb2.InitialState
    resolution: float
    bands: _containers.RepeatedCompositeFieldContainer[DalitzBandRequest]
    def __init__(self, process: _Optional[str] = ..., structured_process: _Optional[_Union[_kinematics_pb2.Reaction, _Mapping]] = ..., sqrt_s_gev: _Optional[_Iterable[float]] = ..., initial_state: _Optional[_Union[_kinematics_pb2.InitialState, _Mapping]] = ..., resolution: _Optional[float] = ..., bands: _Optional[_Iterable[_Union[DalitzBandRequest, _Mapping]]] = ...) -> None: ...

class DalitzBandRequest(_message.Message):
    __slots__ = ("products", "mass_squared_gev2")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MASS_SQUARED_GEV2_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    mass_squared_gev2: float
    def __init__(self, products: _Optional[_Iterable[str]] = ..., mass_squared_gev2: _Optional[float] = ...) -> None: ...

class TraceDalitzBoundaryResponse(_message.Message):
    __slots__ = ("process", "products", "masses_gev", "boundaries", "table_version")
    PROCESS_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MASSES_GEV_FIELD_NUMBER: _ClassVar[int]
    BOUNDARIES_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    process: str
    products: _containers.RepeatedScalarFieldContainer[str]
    masses_gev: _containers.RepeatedScalarFieldContainer[float]
    boundaries: _containers.RepeatedCompositeFieldContainer[DalitzBoundary]
    table_version: str
    def __init__(self, process: _Optional[str] = ..., products: _Optional[_Iterable[str]] = ..., masses_gev: _Optional[_Iterable[float]] = ..., boundaries: _Optional[_Iterable[_Union[DalitzBoundary, _Mapping]]] = ..., table_version: _Optional[str] = ...) -> None: ...

class DalitzBoundary(_message.Message):
    __slots__ = ("sqrt_s_gev", "state", "excess_energy_gev", "first_second", "second_third", "first_third", "first_second_gev2", "second_third_gev2", "first_third_gev2", "bands")
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    STATE_FIELD_NUMBER: _ClassVar[int]
    EXCESS_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    FIRST_SECOND_FIELD_NUMBER: _ClassVar[int]
    SECOND_THIRD_FIELD_NUMBER: _ClassVar[int]
    FIRST_THIRD_FIELD_NUMBER: _ClassVar[int]
    FIRST_SECOND_GEV2_FIELD_NUMBER: _ClassVar[int]
    SECOND_THIRD_GEV2_FIELD_NUMBER: _ClassVar[int]
    FIRST_THIRD_GEV2_FIELD_NUMBER: _ClassVar[int]
    BANDS_FIELD_NUMBER: _ClassVar[int]
    sqrt_s_gev: float
    state: _channel_pb2.ChannelState
    excess_energy_gev: float
    first_second: _kinematics_pb2.SquareRange
    second_third: _kinematics_pb2.SquareRange
    first_third: _kinematics_pb2.SquareRange
    first_second_gev2: bytes
    second_third_gev2: bytes
    first_third_gev2: bytes
    bands: _containers.RepeatedCompositeFieldContainer[DalitzBand]
    def __init__(self, sqrt_s_gev: _Optional[float] = ..., state: _Optional[_Union[_channel_pb2.ChannelState, str]] = ..., excess_energy_gev: _Optional[float] = ..., first_second: _Optional[_Union[_kinematics_pb2.SquareRange, _Mapping]] = ..., second_third: _Optional[_Union[_kinematics_pb2.SquareRange, _Mapping]] = ..., first_third: _Optional[_Union[_kinematics_pb2.SquareRange, _Mapping]] = ..., first_second_gev2: _Optional[bytes] = ..., second_third_gev2: _Optional[bytes] = ..., first_third_gev2: _Optional[bytes] = ..., bands: _Optional[_Iterable[_Union[DalitzBand, _Mapping]]] = ...) -> None: ...

class DalitzBand(_message.Message):
    __slots__ = ("inside", "start", "end")
    INSIDE_FIELD_NUMBER: _ClassVar[int]
    START_FIELD_NUMBER: _ClassVar[int]
    END_FIELD_NUMBER: _ClassVar[int]
    inside: bool
    start: DalitzPoint
    end: DalitzPoint
    def __init__(self, inside: bool = ..., start: _Optional[_Union[DalitzPoint, _Mapping]] = ..., end: _Optional[_Union[DalitzPoint, _Mapping]] = ...) -> None: ...

class DalitzPoint(_message.Message):
    __slots__ = ("first_second_gev2", "second_third_gev2", "first_third_gev2")
    FIRST_SECOND_GEV2_FIELD_NUMBER: _ClassVar[int]
    SECOND_THIRD_GEV2_FIELD_NUMBER: _ClassVar[int]
    FIRST_THIRD_GEV2_FIELD_NUMBER: _ClassVar[int]
    first_second_gev2: float
    second_third_gev2: float
    first_third_gev2: float
    def __init__(self, first_second_gev2: _Optional[float] = ..., second_third_gev2: _Optional[float] = ..., first_third_gev2: _Optional[float] = ...) -> None: ...
