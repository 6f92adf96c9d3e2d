from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class ObjectClass(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    OBJECT_CLASS_UNSPECIFIED: _ClassVar[ObjectClass]
    OBJECT_CLASS_PHOTON: _ClassVar[ObjectClass]
    OBJECT_CLASS_POSITIVE: _ClassVar[ObjectClass]
    OBJECT_CLASS_NEGATIVE: _ClassVar[ObjectClass]
    OBJECT_CLASS_NEUTRAL: _ClassVar[ObjectClass]
OBJECT_CLASS_UNSPECIFIED: ObjectClass
OBJECT_CLASS_PHOTON: ObjectClass
OBJECT_CLASS_POSITIVE: ObjectClass
OBJECT_CLASS_NEGATIVE: ObjectClass
OBJECT_CLASS_NEUTRAL: ObjectClass

class EventBlock(_message.Message):
    __slots__ = ("sequence", "event_ids", "run_number", "object_offsets", "energy_momentum", "momentum_mass", "transverse_momentum", "momentum_angles", "momentum_slopes", "object_classes", "measured_mask", "species_mask", "covariance", "beam", "vertex", "vertex_group", "cluster_position", "polarisation", "weight")
    SEQUENCE_FIELD_NUMBER: _ClassVar[int]
    EVENT_IDS_FIELD_NUMBER: _ClassVar[int]
    RUN_NUMBER_FIELD_NUMBER: _ClassVar[int]
    OBJECT_OFFSETS_FIELD_NUMBER: _ClassVar[int]
    ENERGY_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_MASS_FIELD_NUMBER: _ClassVar[int]
    TRANSVERSE_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_ANGLES_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_SLOPES_FIELD_NUMBER: _ClassVar[int]
    OBJECT_CLASSES_FIELD_NUMBER: _ClassVar[int]
    MEASURED_MASK_FIELD_NUMBER: _ClassVar[int]
    SPECIES_MASK_FIELD_NUMBER: _ClassVar[int]
    COVARIANCE_FIELD_NUMBER: _ClassVar[int]
    BEAM_FIELD_NUMBER: _ClassVar[int]
    VERTEX_FIELD_NUMBER: _ClassVar[int]
    VERTEX_GROUP_FIELD_NUMBER: _ClassVar[int]
    CLUSTER_POSITION_FIELD_NUMBER: _ClassVar[int]
    POLARISATION_FIELD_NUMBER: _ClassVar[int]
    WEIGHT_FIELD_NUMBER: _ClassVar[int]
    sequence: int
    event_ids: bytes
    run_number: int
    object_offsets: bytes
    energy_momentum: EnergyMomentumColumns
    momentum_mass: MomentumMassColumns
    transverse_momentum: TransverseMomentumColumns
    momentum_angles: MomentumAnglesColumns
    momentum_slopes: MomentumSlopesColumns
    object_classes: bytes
    measured_mask: MeasuredMaskColumn
    species_mask: SpeciesMaskColumn
    covariance: CovarianceColumn
    beam: BeamColumns
    vertex: VertexColumns
    vertex_group: VertexGroupColumns
    cluster_position: ClusterPositionColumns
    polarisation: PolarisationColumns
    weight: WeightColumn
    def __init__(self, sequence: _Optional[int] = ..., event_ids: _Optional[bytes] = ..., run_number: _Optional[int] = ..., object_offsets: _Optional[bytes] = ..., energy_momentum: _Optional[_Union[EnergyMomentumColumns, _Mapping]] = ..., momentum_mass: _Optional[_Union[MomentumMassColumns, _Mapping]] = ..., transverse_momentum: _Optional[_Union[TransverseMomentumColumns, _Mapping]] = ..., momentum_angles: _Optional[_Union[MomentumAnglesColumns, _Mapping]] = ..., momentum_slopes: _Optional[_Union[MomentumSlopesColumns, _Mapping]] = ..., object_classes: _Optional[bytes] = ..., measured_mask: _Optional[_Union[MeasuredMaskColumn, _Mapping]] = ..., species_mask: _Optional[_Union[SpeciesMaskColumn, _Mapping]] = ..., covariance: _Optional[_Union[CovarianceColumn, _Mapping]] = ..., beam: _Optional[_Union[BeamColumns, _Mapping]] = ..., vertex: _Optional[_Union[VertexColumns, _Mapping]] = ..., vertex_group: _Optional[_Union[VertexGroupColumns, _Mapping]] = ..., cluster_position: _Optional[_Union[ClusterPositionColumns, _Mapping]] = ..., polarisation: _Optional[_Union[PolarisationColumns, _Mapping]] = ..., weight: _Optional[_Union[WeightColumn, _Mapping]] = ...) -> None: ...

class EnergyMomentumColumns(_message.Message):
    __slots__ = ("energy_gev", "px_gev", "py_gev", "pz_gev")
    ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    PX_GEV_FIELD_NUMBER: _ClassVar[int]
    PY_GEV_FIELD_NUMBER: _ClassVar[int]
    PZ_GEV_FIELD_NUMBER: _ClassVar[int]
    energy_gev: bytes
    px_gev: bytes
    py_gev: bytes
    pz_gev: bytes
    def __init__(self, energy_gev: _Optional[bytes] = ..., px_gev: _Optional[bytes] = ..., py_gev: _Optional[bytes] = ..., pz_gev: _Optional[bytes] = ...) -> None: ...

class MomentumMassColumns(_message.Message):
    __slots__ = ("px_gev", "py_gev", "pz_gev", "mass_gev")
    PX_GEV_FIELD_NUMBER: _ClassVar[int]
    PY_GEV_FIELD_NUMBER: _ClassVar[int]
    PZ_GEV_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    px_gev: bytes
    py_gev: bytes
    pz_gev: bytes
    mass_gev: bytes
    def __init__(self, px_gev: _Optional[bytes] = ..., py_gev: _Optional[bytes] = ..., pz_gev: _Optional[bytes] = ..., mass_gev: _Optional[bytes] = ...) -> None: ...

class TransverseMomentumColumns(_message.Message):
    __slots__ = ("transverse_momentum_gev", "pseudorapidity", "phi_rad", "mass_gev")
    TRANSVERSE_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    PSEUDORAPIDITY_FIELD_NUMBER: _ClassVar[int]
    PHI_RAD_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    transverse_momentum_gev: bytes
    pseudorapidity: bytes
    phi_rad: bytes
    mass_gev: bytes
    def __init__(self, transverse_momentum_gev: _Optional[bytes] = ..., pseudorapidity: _Optional[bytes] = ..., phi_rad: _Optional[bytes] = ..., mass_gev: _Optional[bytes] = ...) -> None: ...

class MomentumAnglesColumns(_message.Message):
    __slots__ = ("momentum_gev", "theta_rad", "phi_rad")
    MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    THETA_RAD_FIELD_NUMBER: _ClassVar[int]
    PHI_RAD_FIELD_NUMBER: _ClassVar[int]
    momentum_gev: bytes
    theta_rad: bytes
    phi_rad: bytes
    def __init__(self, momentum_gev: _Optional[bytes] = ..., theta_rad: _Optional[bytes] = ..., phi_rad: _Optional[bytes] = ...) -> None: ...

class MomentumSlopesColumns(_message.Message):
    __slots__ = ("momentum_gev", "slope_x", "slope_y")
    MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    SLOPE_X_FIELD_NUMBER: _ClassVar[int]
    SLOPE_Y_FIELD_NUMBER: _ClassVar[int]
    momentum_gev: bytes
    slope_x: bytes
    slope_y: bytes
    def __init__(self, momentum_gev: _Optional[bytes] = ..., slope_x: _Optional[bytes] = ..., slope_y: _Optional[bytes] = ...) -> None: ...

class MeasuredMaskColumn(_message.Message):
    __slots__ = ("masks",)
    MASKS_FIELD_NUMBER: _ClassVar[int]
    masks: bytes
    def __init__(self, masks: _Optional[bytes] = ...) -> None: ...

class SpeciesMaskColumn(_message.Message):
    __slots__ = ("masks",)
    MASKS_FIELD_NUMBER: _ClassVar[int]
    masks: bytes
    def __init__(self, masks: _Optional[bytes] = ...) -> None: ...

class CovarianceColumn(_message.Message):
    __slots__ = ("elements",)
    ELEMENTS_FIELD_NUMBER: _ClassVar[int]
    elements: bytes
    def __init__(self, elements: _Optional[bytes] = ...) -> None: ...

class BeamColumns(_message.Message):
    __slots__ = ("offsets", "energy_gev", "sigma_gev", "time_ns")
    OFFSETS_FIELD_NUMBER: _ClassVar[int]
    ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    SIGMA_GEV_FIELD_NUMBER: _ClassVar[int]
    TIME_NS_FIELD_NUMBER: _ClassVar[int]
    offsets: bytes
    energy_gev: bytes
    sigma_gev: bytes
    time_ns: bytes
    def __init__(self, offsets: _Optional[bytes] = ..., energy_gev: _Optional[bytes] = ..., sigma_gev: _Optional[bytes] = ..., time_ns: _Optional[bytes] = ...) -> None: ...

class VertexColumns(_message.Message):
    __slots__ = ("x_m", "y_m", "z_m", "covariance_m2")
    X_M_FIELD_NUMBER: _ClassVar[int]
    Y_M_FIELD_NUMBER: _ClassVar[int]
    Z_M_FIELD_NUMBER: _ClassVar[int]
    COVARIANCE_M2_FIELD_NUMBER: _ClassVar[int]
    x_m: bytes
    y_m: bytes
    z_m: bytes
    covariance_m2: bytes
    def __init__(self, x_m: _Optional[bytes] = ..., y_m: _Optional[bytes] = ..., z_m: _Optional[bytes] = ..., covariance_m2: _Optional[bytes] = ...) -> None: ...

class VertexGroupColumns(_message.Message):
    __slots__ = ("groups", "offsets", "x_m", "y_m", "z_m", "covariance_m2")
    GROUPS_FIELD_NUMBER: _ClassVar[int]
    OFFSETS_FIELD_NUMBER: _ClassVar[int]
    X_M_FIELD_NUMBER: _ClassVar[int]
    Y_M_FIELD_NUMBER: _ClassVar[int]
    Z_M_FIELD_NUMBER: _ClassVar[int]
    COVARIANCE_M2_FIELD_NUMBER: _ClassVar[int]
    groups: bytes
    offsets: bytes
    x_m: bytes
    y_m: bytes
    z_m: bytes
    covariance_m2: bytes
    def __init__(self, groups: _Optional[bytes] = ..., offsets: _Optional[bytes] = ..., x_m: _Optional[bytes] = ..., y_m: _Optional[bytes] = ..., z_m: _Optional[bytes] = ..., covariance_m2: _Optional[bytes] = ...) -> None: ...

class ClusterPositionColumns(_message.Message):
    __slots__ = ("x_m", "y_m", "z_m")
    X_M_FIELD_NUMBER: _ClassVar[int]
    Y_M_FIELD_NUMBER: _ClassVar[int]
    Z_M_FIELD_NUMBER: _ClassVar[int]
    x_m: bytes
    y_m: bytes
    z_m: bytes
    def __init__(self, x_m: _Optional[bytes] = ..., y_m: _Optional[bytes] = ..., z_m: _Optional[bytes] = ...) -> None: ...

class PolarisationColumns(_message.Message):
    __slots__ = ("linear_degree", "plane_rad", "circular_degree")
    LINEAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    PLANE_RAD_FIELD_NUMBER: _ClassVar[int]
    CIRCULAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    linear_degree: bytes
    plane_rad: bytes
    circular_degree: bytes
    def __init__(self, linear_degree: _Optional[bytes] = ..., plane_rad: _Optional[bytes] = ..., circular_degree: _Optional[bytes] = ...) -> None: ...

class WeightColumn(_message.Message):
    __slots__ = ("weights",)
    WEIGHTS_FIELD_NUMBER: _ClassVar[int]
    weights: bytes
    def __init__(self, weights: _Optional[bytes] = ...) -> None: ...
