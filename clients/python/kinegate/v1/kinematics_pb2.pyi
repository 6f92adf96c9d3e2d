from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class FourMomentum(_message.Message):
    __slots__ = ("energy_gev", "px_gev", "py_gev", "pz_gev")
    ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    PX_GEV_FIELD_NUMBER: _ClassVar[int]
    PY_GEV_FIELD_NUMBER: _ClassVar[int]
    PZ_GEV_FIELD_NUMBER: _ClassVar[int]
    energy_gev: float
    px_gev: float
    py_gev: float
    pz_gev: float
    def __init__(self, energy_gev: _Optional[float] = ..., px_gev: _Optional[float] = ..., py_gev: _Optional[float] = ..., pz_gev: _Optional[float] = ...) -> None: ...

class EnergyRange(_message.Message):
    __slots__ = ("min_gev", "max_gev")
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    min_gev: float
    max_gev: float
    def __init__(self, min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ...) -> None: ...

class SquareRange(_message.Message):
    __slots__ = ("min_gev2", "max_gev2")
    MIN_GEV2_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV2_FIELD_NUMBER: _ClassVar[int]
    min_gev2: float
    max_gev2: float
    def __init__(self, min_gev2: _Optional[float] = ..., max_gev2: _Optional[float] = ...) -> None: ...

class AngleRange(_message.Message):
    __slots__ = ("min_rad", "max_rad")
    MIN_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_RAD_FIELD_NUMBER: _ClassVar[int]
    min_rad: float
    max_rad: float
    def __init__(self, min_rad: _Optional[float] = ..., max_rad: _Optional[float] = ...) -> None: ...

class BeamMotion(_message.Message):
    __slots__ = ("total_energy_gev", "kinetic_energy_gev", "momentum_gev")
    TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    total_energy_gev: float
    kinetic_energy_gev: float
    momentum_gev: float
    def __init__(self, total_energy_gev: _Optional[float] = ..., kinetic_energy_gev: _Optional[float] = ..., momentum_gev: _Optional[float] = ...) -> None: ...

class InitialState(_message.Message):
    __slots__ = ("beam_on_target", "two_beams", "two_four_momenta", "sqrt_s_gev")
    BEAM_ON_TARGET_FIELD_NUMBER: _ClassVar[int]
    TWO_BEAMS_FIELD_NUMBER: _ClassVar[int]
    TWO_FOUR_MOMENTA_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    beam_on_target: BeamOnTarget
    two_beams: TwoBeams
    two_four_momenta: TwoFourMomenta
    sqrt_s_gev: float
    def __init__(self, beam_on_target: _Optional[_Union[BeamOnTarget, _Mapping]] = ..., two_beams: _Optional[_Union[TwoBeams, _Mapping]] = ..., two_four_momenta: _Optional[_Union[TwoFourMomenta, _Mapping]] = ..., sqrt_s_gev: _Optional[float] = ...) -> None: ...

class BeamOnTarget(_message.Message):
    __slots__ = ("beam",)
    BEAM_FIELD_NUMBER: _ClassVar[int]
    beam: BeamMotion
    def __init__(self, beam: _Optional[_Union[BeamMotion, _Mapping]] = ...) -> None: ...

class TwoBeams(_message.Message):
    __slots__ = ("beam1", "beam2", "angle_between_beams_rad")
    BEAM1_FIELD_NUMBER: _ClassVar[int]
    BEAM2_FIELD_NUMBER: _ClassVar[int]
    ANGLE_BETWEEN_BEAMS_RAD_FIELD_NUMBER: _ClassVar[int]
    beam1: BeamMotion
    beam2: BeamMotion
    angle_between_beams_rad: float
    def __init__(self, beam1: _Optional[_Union[BeamMotion, _Mapping]] = ..., beam2: _Optional[_Union[BeamMotion, _Mapping]] = ..., angle_between_beams_rad: _Optional[float] = ...) -> None: ...

class TwoFourMomenta(_message.Message):
    __slots__ = ("first", "second")
    FIRST_FIELD_NUMBER: _ClassVar[int]
    SECOND_FIELD_NUMBER: _ClassVar[int]
    first: FourMomentum
    second: FourMomentum
    def __init__(self, first: _Optional[_Union[FourMomentum, _Mapping]] = ..., second: _Optional[_Union[FourMomentum, _Mapping]] = ...) -> None: ...

class Reaction(_message.Message):
    __slots__ = ("initial", "products", "inclusive")
    INITIAL_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    INCLUSIVE_FIELD_NUMBER: _ClassVar[int]
    initial: _containers.RepeatedScalarFieldContainer[str]
    products: _containers.RepeatedCompositeFieldContainer[Product]
    inclusive: bool
    def __init__(self, initial: _Optional[_Iterable[str]] = ..., products: _Optional[_Iterable[_Union[Product, _Mapping]]] = ..., inclusive: bool = ...) -> None: ...

class Product(_message.Message):
    __slots__ = ("particle", "daughters")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    DAUGHTERS_FIELD_NUMBER: _ClassVar[int]
    particle: str
    daughters: _containers.RepeatedCompositeFieldContainer[Product]
    def __init__(self, particle: _Optional[str] = ..., daughters: _Optional[_Iterable[_Union[Product, _Mapping]]] = ...) -> None: ...
