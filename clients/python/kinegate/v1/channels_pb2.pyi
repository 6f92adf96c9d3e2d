from kinegate.v1 import channel_pb2 as _channel_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class ConservationLaw(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    CONSERVATION_LAW_UNSPECIFIED: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_CHARGE: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_BARYON_NUMBER: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_ELECTRON_NUMBER: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_MUON_NUMBER: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_TAU_NUMBER: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_STRANGENESS: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_CHARM: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_BOTTOMNESS: _ClassVar[ConservationLaw]
    CONSERVATION_LAW_TOPNESS: _ClassVar[ConservationLaw]
CONSERVATION_LAW_UNSPECIFIED: ConservationLaw
CONSERVATION_LAW_CHARGE: ConservationLaw
CONSERVATION_LAW_BARYON_NUMBER: ConservationLaw
CONSERVATION_LAW_ELECTRON_NUMBER: ConservationLaw
CONSERVATION_LAW_MUON_NUMBER: ConservationLaw
CONSERVATION_LAW_TAU_NUMBER: ConservationLaw
CONSERVATION_LAW_STRANGENESS: ConservationLaw
CONSERVATION_LAW_CHARM: ConservationLaw
CONSERVATION_LAW_BOTTOMNESS: ConservationLaw
CONSERVATION_LAW_TOPNESS: ConservationLaw

class ListOpenChannelsRequest(_message.Message):
    __slots__ = ("initial_particles", "initial_state", "products", "min_body_count", "max_body_count", "ignored_laws", "with_spin_c_bose", "page_size", "page_token")
    INITIAL_PARTICLES_FIELD_NUMBER: _ClassVar[int]
    INITIAL_STATE_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MIN_BODY_COUNT_FIELD_NUMBER: _ClassVar[int]
    MAX_BODY_COUNT_FIELD_NUMBER: _ClassVar[int]
    IGNORED_LAWS_FIELD_NUMBER: _ClassVar[int]
    WITH_SPIN_C_BOSE_FIELD_NUMBER: _ClassVar[int]
    PAGE_SIZE_FIELD_NUMBER: _ClassVar[int]
    PAGE_TOKEN_FIELD_NUMBER: _ClassVar[int]
    initial_particles: _containers.RepeatedScalarFieldContainer[str]
    initial_state: _kinematics_pb2.InitialState
    products: _containers.RepeatedScalarFieldContainer[str]
    min_body_count: int
    max_body_count: int
    ignored_laws: _containers.RepeatedScalarFieldContainer[ConservationLaw]
    with_spin_c_bose: bool
    page_size: int
    page_token: str
    def __init__(self, initial_particles: _Optional[_Iterable[str]] = ..., initial_state: _Optional[_Union[_kinematics_pb2.InitialState, _Mapping]] = ..., products: _Optional[_Iterable[str]] = ..., min_body_count: _Optional[int] = ..., max_body_count: _Optional[int] = ..., ignored_laws: _Optional[_Iterable[_Union[ConservationLaw, str]]] = ..., with_spin_c_bose: bool = ..., page_size: _Optional[int] = ..., page_token: _Optional[str] = ...) -> None: ...

class ListOpenChannelsResponse(_message.Message):
    __slots__ = ("channels", "next_page_token", "channel_count", "complete_body_count", "complete", "next_to_open", "centre_of_mass", "products", "frame", "table_version")
    CHANNELS_FIELD_NUMBER: _ClassVar[int]
    NEXT_PAGE_TOKEN_FIELD_NUMBER: _ClassVar[int]
    CHANNEL_COUNT_FIELD_NUMBER: _ClassVar[int]
    COMPLETE_BODY_COUNT_FIELD_NUMBER: _ClassVar[int]
    COMPLETE_FIELD_NUMBER: _ClassVar[int]
    NEXT_TO_OPEN_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    FRAME_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    channels: _containers.RepeatedCompositeFieldContainer[OpenChannel]
    next_page_token: str
    channel_count: int
    complete_body_count: int
    complete: bool
    next_to_open: OpenChannel
    centre_of_mass: _channel_pb2.CentreOfMass
    products: _containers.RepeatedScalarFieldContainer[str]
    frame: str
    table_version: str
    def __init__(self, channels: _Optional[_Iterable[_Union[OpenChannel, _Mapping]]] = ..., next_page_token: _Optional[str] = ..., channel_count: _Optional[int] = ..., complete_body_count: _Optional[int] = ..., complete: bool = ..., next_to_open: _Optional[_Union[OpenChannel, _Mapping]] = ..., centre_of_mass: _Optional[_Union[_channel_pb2.CentreOfMass, _Mapping]] = ..., products: _Optional[_Iterable[str]] = ..., frame: _Optional[str] = ..., table_version: _Optional[str] = ...) -> None: ...

class OpenChannel(_message.Message):
    __slots__ = ("products", "state", "excess_energy_gev", "threshold")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    STATE_FIELD_NUMBER: _ClassVar[int]
    EXCESS_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    state: _channel_pb2.ChannelState
    excess_energy_gev: float
    threshold: _channel_pb2.Threshold
    def __init__(self, products: _Optional[_Iterable[str]] = ..., state: _Optional[_Union[_channel_pb2.ChannelState, str]] = ..., excess_energy_gev: _Optional[float] = ..., threshold: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ...) -> None: ...
