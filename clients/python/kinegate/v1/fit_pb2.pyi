from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class Conservation(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    CONSERVATION_UNSPECIFIED: _ClassVar[Conservation]
    CONSERVATION_FOUR_MOMENTUM: _ClassVar[Conservation]
    CONSERVATION_TRANSVERSE_MOMENTUM: _ClassVar[Conservation]
    CONSERVATION_NONE: _ClassVar[Conservation]

class VertexTreatment(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    VERTEX_TREATMENT_UNSPECIFIED: _ClassVar[VertexTreatment]
    VERTEX_TREATMENT_EXACT: _ClassVar[VertexTreatment]
    VERTEX_TREATMENT_MEASURED: _ClassVar[VertexTreatment]
    VERTEX_TREATMENT_FREE_Z: _ClassVar[VertexTreatment]

class FitStatus(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    FIT_STATUS_UNSPECIFIED: _ClassVar[FitStatus]
    FIT_STATUS_CONVERGED: _ClassVar[FitStatus]
    FIT_STATUS_NOT_CONVERGED: _ClassVar[FitStatus]
    FIT_STATUS_INFEASIBLE: _ClassVar[FitStatus]
    FIT_STATUS_SINGULAR: _ClassVar[FitStatus]
CONSERVATION_UNSPECIFIED: Conservation
CONSERVATION_FOUR_MOMENTUM: Conservation
CONSERVATION_TRANSVERSE_MOMENTUM: Conservation
CONSERVATION_NONE: Conservation
VERTEX_TREATMENT_UNSPECIFIED: VertexTreatment
VERTEX_TREATMENT_EXACT: VertexTreatment
VERTEX_TREATMENT_MEASURED: VertexTreatment
VERTEX_TREATMENT_FREE_Z: VertexTreatment
FIT_STATUS_UNSPECIFIED: FitStatus
FIT_STATUS_CONVERGED: FitStatus
FIT_STATUS_NOT_CONVERGED: FitStatus
FIT_STATUS_INFEASIBLE: FitStatus
FIT_STATUS_SINGULAR: FitStatus

class Fit(_message.Message):
    __slots__ = ("conservation", "masses", "equal_masses", "vertex", "beam_energy", "target_energy")
    CONSERVATION_FIELD_NUMBER: _ClassVar[int]
    MASSES_FIELD_NUMBER: _ClassVar[int]
    EQUAL_MASSES_FIELD_NUMBER: _ClassVar[int]
    VERTEX_FIELD_NUMBER: _ClassVar[int]
    BEAM_ENERGY_FIELD_NUMBER: _ClassVar[int]
    TARGET_ENERGY_FIELD_NUMBER: _ClassVar[int]
    conservation: Conservation
    masses: _containers.RepeatedCompositeFieldContainer[FitMass]
    equal_masses: _containers.RepeatedCompositeFieldContainer[FitEqualMasses]
    vertex: VertexTreatment
    beam_energy: InitialEnergy
    target_energy: InitialEnergy
    def __init__(self, conservation: _Optional[_Union[Conservation, str]] = ..., masses: _Optional[_Iterable[_Union[FitMass, _Mapping]]] = ..., equal_masses: _Optional[_Iterable[_Union[FitEqualMasses, _Mapping]]] = ..., vertex: _Optional[_Union[VertexTreatment, str]] = ..., beam_energy: _Optional[_Union[InitialEnergy, _Mapping]] = ..., target_energy: _Optional[_Union[InitialEnergy, _Mapping]] = ...) -> None: ...

class FitMass(_message.Message):
    __slots__ = ("products", "mass_gev")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    mass_gev: float
    def __init__(self, products: _Optional[_Iterable[str]] = ..., mass_gev: _Optional[float] = ...) -> None: ...

class FitEqualMasses(_message.Message):
    __slots__ = ("first", "second")
    FIRST_FIELD_NUMBER: _ClassVar[int]
    SECOND_FIELD_NUMBER: _ClassVar[int]
    first: _containers.RepeatedScalarFieldContainer[str]
    second: _containers.RepeatedScalarFieldContainer[str]
    def __init__(self, first: _Optional[_Iterable[str]] = ..., second: _Optional[_Iterable[str]] = ...) -> None: ...

class InitialEnergy(_message.Message):
    __slots__ = ("exact", "measured", "unmeasured")
    EXACT_FIELD_NUMBER: _ClassVar[int]
    MEASURED_FIELD_NUMBER: _ClassVar[int]
    UNMEASURED_FIELD_NUMBER: _ClassVar[int]
    exact: ExactEnergy
    measured: MeasuredEnergy
    unmeasured: UnmeasuredEnergy
    def __init__(self, exact: _Optional[_Union[ExactEnergy, _Mapping]] = ..., measured: _Optional[_Union[MeasuredEnergy, _Mapping]] = ..., unmeasured: _Optional[_Union[UnmeasuredEnergy, _Mapping]] = ...) -> None: ...

class ExactEnergy(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class MeasuredEnergy(_message.Message):
    __slots__ = ("sigma_gev",)
    SIGMA_GEV_FIELD_NUMBER: _ClassVar[int]
    sigma_gev: float
    def __init__(self, sigma_gev: _Optional[float] = ...) -> None: ...

class UnmeasuredEnergy(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...
