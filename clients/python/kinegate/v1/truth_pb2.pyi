from kinegate.v1 import event_pb2 as _event_pb2
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class TruthColumns(_message.Message):
    __slots__ = ("event_ids", "channels", "weights", "initial_state", "vertex", "particle_offsets", "particle_numbers", "momentum", "mass_gev", "parents", "decayed", "origin", "proper_time_s", "beam_offsets", "beam_energy_gev", "beam_time_ns", "object_particles", "polarisation")
    EVENT_IDS_FIELD_NUMBER: _ClassVar[int]
    CHANNELS_FIELD_NUMBER: _ClassVar[int]
    WEIGHTS_FIELD_NUMBER: _ClassVar[int]
    INITIAL_STATE_FIELD_NUMBER: _ClassVar[int]
    VERTEX_FIELD_NUMBER: _ClassVar[int]
    PARTICLE_OFFSETS_FIELD_NUMBER: _ClassVar[int]
    PARTICLE_NUMBERS_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    PARENTS_FIELD_NUMBER: _ClassVar[int]
    DECAYED_FIELD_NUMBER: _ClassVar[int]
    ORIGIN_FIELD_NUMBER: _ClassVar[int]
    PROPER_TIME_S_FIELD_NUMBER: _ClassVar[int]
    BEAM_OFFSETS_FIELD_NUMBER: _ClassVar[int]
    BEAM_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    BEAM_TIME_NS_FIELD_NUMBER: _ClassVar[int]
    OBJECT_PARTICLES_FIELD_NUMBER: _ClassVar[int]
    POLARISATION_FIELD_NUMBER: _ClassVar[int]
    event_ids: bytes
    channels: bytes
    weights: bytes
    initial_state: _event_pb2.EnergyMomentumColumns
    vertex: PositionColumns
    particle_offsets: bytes
    particle_numbers: bytes
    momentum: _event_pb2.EnergyMomentumColumns
    mass_gev: bytes
    parents: bytes
    decayed: bytes
    origin: PositionColumns
    proper_time_s: bytes
    beam_offsets: bytes
    beam_energy_gev: bytes
    beam_time_ns: bytes
    object_particles: bytes
    polarisation: _event_pb2.PolarisationColumns
    def __init__(self, event_ids: _Optional[bytes] = ..., channels: _Optional[bytes] = ..., weights: _Optional[bytes] = ..., initial_state: _Optional[_Union[_event_pb2.EnergyMomentumColumns, _Mapping]] = ..., vertex: _Optional[_Union[PositionColumns, _Mapping]] = ..., particle_offsets: _Optional[bytes] = ..., particle_numbers: _Optional[bytes] = ..., momentum: _Optional[_Union[_event_pb2.EnergyMomentumColumns, _Mapping]] = ..., mass_gev: _Optional[bytes] = ..., parents: _Optional[bytes] = ..., decayed: _Optional[bytes] = ..., origin: _Optional[_Union[PositionColumns, _Mapping]] = ..., proper_time_s: _Optional[bytes] = ..., beam_offsets: _Optional[bytes] = ..., beam_energy_gev: _Optional[bytes] = ..., beam_time_ns: _Optional[bytes] = ..., object_particles: _Optional[bytes] = ..., polarisation: _Optional[_Union[_event_pb2.PolarisationColumns, _Mapping]] = ...) -> None: ...

class PositionColumns(_message.Message):
    __slots__ = ("x_m", "y_m", "z_m")
    X_M_FIELD_NUMBER: _ClassVar[int]
    Y_M_FIELD_NUMBER: _ClassVar[int]
    Z_M_FIELD_NUMBER: _ClassVar[int]
    x_m: bytes
    y_m: bytes
    z_m: bytes
    def __init__(self, x_m: _Optional[bytes] = ..., y_m: _Optional[bytes] = ..., z_m: _Optional[bytes] = ...) -> None: ...
