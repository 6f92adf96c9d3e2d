from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from kinegate.v1 import reaction_pb2 as _reaction_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class GenerationInitialState(_message.Message):
    __slots__ = ("beam_on_target", "two_beams", "total")
    BEAM_ON_TARGET_FIELD_NUMBER: _ClassVar[int]
    TWO_BEAMS_FIELD_NUMBER: _ClassVar[int]
    TOTAL_FIELD_NUMBER: _ClassVar[int]
    beam_on_target: SpectrumOnTarget
    two_beams: TwoSpectra
    total: TotalMotion
    def __init__(self, beam_on_target: _Optional[_Union[SpectrumOnTarget, _Mapping]] = ..., two_beams: _Optional[_Union[TwoSpectra, _Mapping]] = ..., total: _Optional[_Union[TotalMotion, _Mapping]] = ...) -> None: ...

class SpectrumOnTarget(_message.Message):
    __slots__ = ("beam", "bound_nucleon")
    BEAM_FIELD_NUMBER: _ClassVar[int]
    BOUND_NUCLEON_FIELD_NUMBER: _ClassVar[int]
    beam: BeamSpectrum
    bound_nucleon: _reaction_pb2.BoundNucleon
    def __init__(self, beam: _Optional[_Union[BeamSpectrum, _Mapping]] = ..., bound_nucleon: _Optional[_Union[_reaction_pb2.BoundNucleon, _Mapping]] = ...) -> None: ...

class TwoSpectra(_message.Message):
    __slots__ = ("beam1", "beam2", "angle_between_beams_rad")
    BEAM1_FIELD_NUMBER: _ClassVar[int]
    BEAM2_FIELD_NUMBER: _ClassVar[int]
    ANGLE_BETWEEN_BEAMS_RAD_FIELD_NUMBER: _ClassVar[int]
    beam1: BeamSpectrum
    beam2: BeamSpectrum
    angle_between_beams_rad: float
    def __init__(self, beam1: _Optional[_Union[BeamSpectrum, _Mapping]] = ..., beam2: _Optional[_Union[BeamSpectrum, _Mapping]] = ..., angle_between_beams_rad: _Optional[float] = ...) -> None: ...

class TotalMotion(_message.Message):
    __slots__ = ("sqrt_s_gev", "px_gev", "py_gev", "pz_gev")
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    PX_GEV_FIELD_NUMBER: _ClassVar[int]
    PY_GEV_FIELD_NUMBER: _ClassVar[int]
    PZ_GEV_FIELD_NUMBER: _ClassVar[int]
    sqrt_s_gev: float
    px_gev: float
    py_gev: float
    pz_gev: float
    def __init__(self, sqrt_s_gev: _Optional[float] = ..., px_gev: _Optional[float] = ..., py_gev: _Optional[float] = ..., pz_gev: _Optional[float] = ...) -> None: ...

class BeamSpectrum(_message.Message):
    __slots__ = ("fixed", "even", "bremsstrahlung", "histogram", "backscatter")
    FIXED_FIELD_NUMBER: _ClassVar[int]
    EVEN_FIELD_NUMBER: _ClassVar[int]
    BREMSSTRAHLUNG_FIELD_NUMBER: _ClassVar[int]
    HISTOGRAM_FIELD_NUMBER: _ClassVar[int]
    BACKSCATTER_FIELD_NUMBER: _ClassVar[int]
    fixed: _kinematics_pb2.BeamMotion
    even: _kinematics_pb2.EnergyRange
    bremsstrahlung: BremsstrahlungSpectrum
    histogram: FluxHistogram
    backscatter: BackscatterSpectrum
    def __init__(self, fixed: _Optional[_Union[_kinematics_pb2.BeamMotion, _Mapping]] = ..., even: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ..., bremsstrahlung: _Optional[_Union[BremsstrahlungSpectrum, _Mapping]] = ..., histogram: _Optional[_Union[FluxHistogram, _Mapping]] = ..., backscatter: _Optional[_Union[BackscatterSpectrum, _Mapping]] = ...) -> None: ...

class BremsstrahlungSpectrum(_message.Message):
    __slots__ = ("electron_gev", "min_gev", "max_gev", "complete_screening", "channel_count")
    ELECTRON_GEV_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    COMPLETE_SCREENING_FIELD_NUMBER: _ClassVar[int]
    CHANNEL_COUNT_FIELD_NUMBER: _ClassVar[int]
    electron_gev: float
    min_gev: float
    max_gev: float
    complete_screening: bool
    channel_count: int
    def __init__(self, electron_gev: _Optional[float] = ..., min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ..., complete_screening: bool = ..., channel_count: _Optional[int] = ...) -> None: ...

class FluxHistogram(_message.Message):
    __slots__ = ("edges_gev", "contents")
    EDGES_GEV_FIELD_NUMBER: _ClassVar[int]
    CONTENTS_FIELD_NUMBER: _ClassVar[int]
    edges_gev: _containers.RepeatedScalarFieldContainer[float]
    contents: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, edges_gev: _Optional[_Iterable[float]] = ..., contents: _Optional[_Iterable[float]] = ...) -> None: ...

class BackscatterSpectrum(_message.Message):
    __slots__ = ("particle", "beam", "light_energy_gev", "angle_between_beams_rad", "min_gev", "max_gev")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    BEAM_FIELD_NUMBER: _ClassVar[int]
    LIGHT_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    ANGLE_BETWEEN_BEAMS_RAD_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    particle: str
    beam: _kinematics_pb2.BeamMotion
    light_energy_gev: float
    angle_between_beams_rad: float
    min_gev: float
    max_gev: float
    def __init__(self, particle: _Optional[str] = ..., beam: _Optional[_Union[_kinematics_pb2.BeamMotion, _Mapping]] = ..., light_energy_gev: _Optional[float] = ..., angle_between_beams_rad: _Optional[float] = ..., min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ...) -> None: ...

class TargetRegion(_message.Message):
    __slots__ = ("centre_x_m", "centre_y_m", "centre_z_m", "length_m", "sigma_x_m", "sigma_y_m")
    CENTRE_X_M_FIELD_NUMBER: _ClassVar[int]
    CENTRE_Y_M_FIELD_NUMBER: _ClassVar[int]
    CENTRE_Z_M_FIELD_NUMBER: _ClassVar[int]
    LENGTH_M_FIELD_NUMBER: _ClassVar[int]
    SIGMA_X_M_FIELD_NUMBER: _ClassVar[int]
    SIGMA_Y_M_FIELD_NUMBER: _ClassVar[int]
    centre_x_m: float
    centre_y_m: float
    centre_z_m: float
    length_m: float
    sigma_x_m: float
    sigma_y_m: float
    def __init__(self, centre_x_m: _Optional[float] = ..., centre_y_m: _Optional[float] = ..., centre_z_m: _Optional[float] = ..., length_m: _Optional[float] = ..., sigma_x_m: _Optional[float] = ..., sigma_y_m: _Optional[float] = ...) -> None: ...

class AccidentalCandidates(_message.Message):
    __slots__ = ("rate_hz", "window_ns")
    RATE_HZ_FIELD_NUMBER: _ClassVar[int]
    WINDOW_NS_FIELD_NUMBER: _ClassVar[int]
    rate_hz: float
    window_ns: float
    def __init__(self, rate_hz: _Optional[float] = ..., window_ns: _Optional[float] = ...) -> None: ...
