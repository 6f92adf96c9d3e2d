from kinegate.v1 import channel_pb2 as _channel_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class SolveTwoBodyRequest(_message.Message):
    __slots__ = ("reaction", "structured_reaction", "initial_state", "product", "laboratory_angles_rad", "centre_of_mass_angles_rad", "centre_of_mass_cosines", "laboratory_total_energies_gev", "laboratory_kinetic_energies_gev", "laboratory_momenta_gev", "t_values_gev2", "t_prime_values_gev2")
    REACTION_FIELD_NUMBER: _ClassVar[int]
    STRUCTURED_REACTION_FIELD_NUMBER: _ClassVar[int]
    INITIAL_STATE_FIELD_NUMBER: _ClassVar[int]
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ANGLES_RAD_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_ANGLES_RAD_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_COSINES_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_TOTAL_ENERGIES_GEV_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_KINETIC_ENERGIES_GEV_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_MOMENTA_GEV_FIELD_NUMBER: _ClassVar[int]
    T_VALUES_GEV2_FIELD_NUMBER: _ClassVar[int]
    T_PRIME_VALUES_GEV2_FIELD_NUMBER: _ClassVar[int]
    reaction: str
    structured_reaction: _kinematics_pb2.Reaction
    initial_state: _kinematics_pb2.InitialState
    product: str
    laboratory_angles_rad: _containers.RepeatedScalarFieldContainer[float]
    centre_of_mass_angles_rad: _containers.RepeatedScalarFieldContainer[float]
    centre_of_mass_cosines: _containers.RepeatedScalarFieldContainer[float]
    laboratory_total_energies_gev: _containers.RepeatedScalarFieldContainer[float]
    laboratory_kinetic_energies_gev: _containers.RepeatedScalarFieldContainer[float]
    laboratory_momenta_gev: _containers.RepeatedScalarFieldContainer[float]
    t_values_gev2: _containers.RepeatedScalarFieldContainer[float]
    t_prime_values_gev2: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, reaction: _Optional[str] = ..., structured_reaction: _Optional[_Union[_kinematics_pb2.Reaction, _Mapping]] = ..., initial_state: _Optional[_Union[_kinematics_pb2.InitialState, _Mapping]] = ..., product: _Optional[str] = ..., laboratory_angles_rad: _Optional[_Iterable[float]] = ..., centre_of_mass_angles_rad: _Optional[_Iterable[float]] = ..., centre_of_mass_cosines: _Optional[_Iterable[float]] = ..., laboratory_total_energies_gev: _Optional[_Iterable[float]] = ..., laboratory_kinetic_energies_gev: _Optional[_Iterable[float]] = ..., laboratory_momenta_gev: _Optional[_Iterable[float]] = ..., t_values_gev2: _Optional[_Iterable[float]] = ..., t_prime_values_gev2: _Optional[_Iterable[float]] = ...) -> None: ...

class SolveTwoBodyResponse(_message.Message):
    __slots__ = ("reaction", "state", "centre_of_mass", "excess_energy_gev", "beam_energy_deficit_gev", "products", "solutions", "frame", "table_version")
    REACTION_FIELD_NUMBER: _ClassVar[int]
    STATE_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_FIELD_NUMBER: _ClassVar[int]
    EXCESS_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    BEAM_ENERGY_DEFICIT_GEV_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    SOLUTIONS_FIELD_NUMBER: _ClassVar[int]
    FRAME_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    reaction: str
    state: _channel_pb2.ChannelState
    centre_of_mass: _channel_pb2.CentreOfMass
    excess_energy_gev: float
    beam_energy_deficit_gev: float
    products: _containers.RepeatedCompositeFieldContainer[TwoBodyProduct]
    solutions: _containers.RepeatedCompositeFieldContainer[TwoBodySolution]
    frame: str
    table_version: str
    def __init__(self, reaction: _Optional[str] = ..., state: _Optional[_Union[_channel_pb2.ChannelState, str]] = ..., centre_of_mass: _Optional[_Union[_channel_pb2.CentreOfMass, _Mapping]] = ..., excess_energy_gev: _Optional[float] = ..., beam_energy_deficit_gev: _Optional[float] = ..., products: _Optional[_Iterable[_Union[TwoBodyProduct, _Mapping]]] = ..., solutions: _Optional[_Iterable[_Union[TwoBodySolution, _Mapping]]] = ..., frame: _Optional[str] = ..., table_version: _Optional[str] = ...) -> None: ...

class TwoBodyProduct(_message.Message):
    __slots__ = ("limits", "max_laboratory_angle_rad", "double_valued", "t_forward_gev2", "t_backward_gev2")
    LIMITS_FIELD_NUMBER: _ClassVar[int]
    MAX_LABORATORY_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    DOUBLE_VALUED_FIELD_NUMBER: _ClassVar[int]
    T_FORWARD_GEV2_FIELD_NUMBER: _ClassVar[int]
    T_BACKWARD_GEV2_FIELD_NUMBER: _ClassVar[int]
    limits: _channel_pb2.ProductLimits
    max_laboratory_angle_rad: float
    double_valued: bool
    t_forward_gev2: float
    t_backward_gev2: float
    def __init__(self, limits: _Optional[_Union[_channel_pb2.ProductLimits, _Mapping]] = ..., max_laboratory_angle_rad: _Optional[float] = ..., double_valued: bool = ..., t_forward_gev2: _Optional[float] = ..., t_backward_gev2: _Optional[float] = ...) -> None: ...

class TwoBodySolution(_message.Message):
    __slots__ = ("branches",)
    BRANCHES_FIELD_NUMBER: _ClassVar[int]
    branches: _containers.RepeatedCompositeFieldContainer[TwoBodyBranch]
    def __init__(self, branches: _Optional[_Iterable[_Union[TwoBodyBranch, _Mapping]]] = ...) -> None: ...

class TwoBodyBranch(_message.Message):
    __slots__ = ("t_gev2", "t_prime_gev2", "u_gev2", "u_prime_gev2", "products")
    T_GEV2_FIELD_NUMBER: _ClassVar[int]
    T_PRIME_GEV2_FIELD_NUMBER: _ClassVar[int]
    U_GEV2_FIELD_NUMBER: _ClassVar[int]
    U_PRIME_GEV2_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    t_gev2: float
    t_prime_gev2: float
    u_gev2: float
    u_prime_gev2: float
    products: _containers.RepeatedCompositeFieldContainer[TwoBodyOutgoing]
    def __init__(self, t_gev2: _Optional[float] = ..., t_prime_gev2: _Optional[float] = ..., u_gev2: _Optional[float] = ..., u_prime_gev2: _Optional[float] = ..., products: _Optional[_Iterable[_Union[TwoBodyOutgoing, _Mapping]]] = ...) -> None: ...

class TwoBodyOutgoing(_message.Message):
    __slots__ = ("centre_of_mass_angle_rad", "centre_of_mass_cosine", "centre_of_mass_total_energy_gev", "centre_of_mass_kinetic_energy_gev", "centre_of_mass_momentum_gev", "laboratory_angle_rad", "laboratory_total_energy_gev", "laboratory_kinetic_energy_gev", "laboratory_momentum_gev", "centre_of_mass_per_laboratory", "laboratory_per_centre_of_mass")
    CENTRE_OF_MASS_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_COSINE_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_PER_LABORATORY_FIELD_NUMBER: _ClassVar[int]
    LABORATORY_PER_CENTRE_OF_MASS_FIELD_NUMBER: _ClassVar[int]
    centre_of_mass_angle_rad: float
    centre_of_mass_cosine: float
    centre_of_mass_total_energy_gev: float
    centre_of_mass_kinetic_energy_gev: float
    centre_of_mass_momentum_gev: float
    laboratory_angle_rad: float
    laboratory_total_energy_gev: float
    laboratory_kinetic_energy_gev: float
    laboratory_momentum_gev: float
    centre_of_mass_per_laboratory: float
    laboratory_per_centre_of_mass: float
    def __init__(self, centre_of_mass_angle_rad: _Optional[float] = ..., centre_of_mass_cosine: _Optional[float] = ..., centre_of_mass_total_energy_gev: _Optional[float] = ..., centre_of_mass_kinetic_energy_gev: _Optional[float] = ..., centre_of_mass_momentum_gev: _Optional[float] = ..., laboratory_angle_rad: _Optional[float] = ..., laboratory_total_energy_gev: _Optional[float] = ..., laboratory_kinetic_energy_gev: _Optional[float] = ..., laboratory_momentum_gev: _Optional[float] = ..., centre_of_mass_per_laboratory: _Optional[float] = ..., laboratory_per_centre_of_mass: _Optional[float] = ...) -> None: ...
