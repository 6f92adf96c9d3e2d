from kinegate.v1 import channel_pb2 as _channel_pb2
from kinegate.v1 import channels_pb2 as _channels_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from kinegate.v1 import motion_pb2 as _motion_pb2
from kinegate.v1 import twobody_pb2 as _twobody_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class LimitMasses(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    LIMIT_MASSES_UNSPECIFIED: _ClassVar[LimitMasses]
    LIMIT_MASSES_NOMINAL: _ClassVar[LimitMasses]
    LIMIT_MASSES_LIGHTEST: _ClassVar[LimitMasses]

class InitialParticle(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    INITIAL_PARTICLE_UNSPECIFIED: _ClassVar[InitialParticle]
    INITIAL_PARTICLE_BEAM: _ClassVar[InitialParticle]
    INITIAL_PARTICLE_TARGET: _ClassVar[InitialParticle]

class DecayClass(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    DECAY_CLASS_UNSPECIFIED: _ClassVar[DecayClass]
    DECAY_CLASS_STRONG: _ClassVar[DecayClass]
    DECAY_CLASS_ELECTROMAGNETIC: _ClassVar[DecayClass]
    DECAY_CLASS_WEAK: _ClassVar[DecayClass]
LIMIT_MASSES_UNSPECIFIED: LimitMasses
LIMIT_MASSES_NOMINAL: LimitMasses
LIMIT_MASSES_LIGHTEST: LimitMasses
INITIAL_PARTICLE_UNSPECIFIED: InitialParticle
INITIAL_PARTICLE_BEAM: InitialParticle
INITIAL_PARTICLE_TARGET: InitialParticle
DECAY_CLASS_UNSPECIFIED: DecayClass
DECAY_CLASS_STRONG: DecayClass
DECAY_CLASS_ELECTROMAGNETIC: DecayClass
DECAY_CLASS_WEAK: DecayClass

class DescribeReactionRequest(_message.Message):
    __slots__ = ("reaction", "structured_reaction", "initial_state", "with_phase_space_volume", "momentum_transfers", "bound_nucleon")
    REACTION_FIELD_NUMBER: _ClassVar[int]
    STRUCTURED_REACTION_FIELD_NUMBER: _ClassVar[int]
    INITIAL_STATE_FIELD_NUMBER: _ClassVar[int]
    WITH_PHASE_SPACE_VOLUME_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_TRANSFERS_FIELD_NUMBER: _ClassVar[int]
    BOUND_NUCLEON_FIELD_NUMBER: _ClassVar[int]
    reaction: str
    structured_reaction: _kinematics_pb2.Reaction
    initial_state: _kinematics_pb2.InitialState
    with_phase_space_volume: bool
    momentum_transfers: _containers.RepeatedCompositeFieldContainer[MomentumTransferPair]
    bound_nucleon: BoundNucleon
    def __init__(self, reaction: _Optional[str] = ..., structured_reaction: _Optional[_Union[_kinematics_pb2.Reaction, _Mapping]] = ..., initial_state: _Optional[_Union[_kinematics_pb2.InitialState, _Mapping]] = ..., with_phase_space_volume: bool = ..., momentum_transfers: _Optional[_Iterable[_Union[MomentumTransferPair, _Mapping]]] = ..., bound_nucleon: _Optional[_Union[BoundNucleon, _Mapping]] = ...) -> None: ...

class MomentumTransferPair(_message.Message):
    __slots__ = ("initial", "products")
    INITIAL_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    initial: InitialParticle
    products: _containers.RepeatedScalarFieldContainer[str]
    def __init__(self, initial: _Optional[_Union[InitialParticle, str]] = ..., products: _Optional[_Iterable[str]] = ...) -> None: ...

class BoundNucleon(_message.Message):
    __slots__ = ("nucleus", "fermi_momentum_gev")
    NUCLEUS_FIELD_NUMBER: _ClassVar[int]
    FERMI_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    nucleus: str
    fermi_momentum_gev: float
    def __init__(self, nucleus: _Optional[str] = ..., fermi_momentum_gev: _Optional[float] = ...) -> None: ...

class DescribeReactionResponse(_message.Message):
    __slots__ = ("reaction", "structured_reaction", "state", "centre_of_mass", "threshold", "lightest_threshold", "excess_energy_gev", "lightest_excess_energy_gev", "beam_energy_deficit_gev", "one_body_s_minus_m2_gev2", "products", "subset_masses", "momentum_transfers", "decays", "inclusive", "frame", "remarks", "table_version", "limit_masses", "phase_space_volume", "quasi_free")
    REACTION_FIELD_NUMBER: _ClassVar[int]
    STRUCTURED_REACTION_FIELD_NUMBER: _ClassVar[int]
    STATE_FIELD_NUMBER: _ClassVar[int]
    CENTRE_OF_MASS_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_FIELD_NUMBER: _ClassVar[int]
    LIGHTEST_THRESHOLD_FIELD_NUMBER: _ClassVar[int]
    EXCESS_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    LIGHTEST_EXCESS_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    BEAM_ENERGY_DEFICIT_GEV_FIELD_NUMBER: _ClassVar[int]
    ONE_BODY_S_MINUS_M2_GEV2_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    SUBSET_MASSES_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_TRANSFERS_FIELD_NUMBER: _ClassVar[int]
    DECAYS_FIELD_NUMBER: _ClassVar[int]
    INCLUSIVE_FIELD_NUMBER: _ClassVar[int]
    FRAME_FIELD_NUMBER: _ClassVar[int]
    REMARKS_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    LIMIT_MASSES_FIELD_NUMBER: _ClassVar[int]
    PHASE_SPACE_VOLUME_FIELD_NUMBER: _ClassVar[int]
    QUASI_FREE_FIELD_NUMBER: _ClassVar[int]
    reaction: str
    structured_reaction: _kinematics_pb2.Reaction
    state: _channel_pb2.ChannelState
    centre_of_mass: _channel_pb2.CentreOfMass
    threshold: _channel_pb2.Threshold
    lightest_threshold: _channel_pb2.Threshold
    excess_energy_gev: float
    lightest_excess_energy_gev: float
    beam_energy_deficit_gev: float
    one_body_s_minus_m2_gev2: float
    products: _containers.RepeatedCompositeFieldContainer[_channel_pb2.ProductLimits]
    subset_masses: _containers.RepeatedCompositeFieldContainer[SubsetMassLimits]
    momentum_transfers: _containers.RepeatedCompositeFieldContainer[MomentumTransferLimits]
    decays: _containers.RepeatedCompositeFieldContainer[DecayNote]
    inclusive: InclusiveRemainder
    frame: str
    remarks: _containers.RepeatedScalarFieldContainer[str]
    table_version: str
    limit_masses: LimitMasses
    phase_space_volume: PhaseSpaceVolume
    quasi_free: QuasiFree
    def __init__(self, reaction: _Optional[str] = ..., structured_reaction: _Optional[_Union[_kinematics_pb2.Reaction, _Mapping]] = ..., state: _Optional[_Union[_channel_pb2.ChannelState, str]] = ..., centre_of_mass: _Optional[_Union[_channel_pb2.CentreOfMass, _Mapping]] = ..., threshold: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ..., lightest_threshold: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ..., excess_energy_gev: _Optional[float] = ..., lightest_excess_energy_gev: _Optional[float] = ..., beam_energy_deficit_gev: _Optional[float] = ..., one_body_s_minus_m2_gev2: _Optional[float] = ..., products: _Optional[_Iterable[_Union[_channel_pb2.ProductLimits, _Mapping]]] = ..., subset_masses: _Optional[_Iterable[_Union[SubsetMassLimits, _Mapping]]] = ..., momentum_transfers: _Optional[_Iterable[_Union[MomentumTransferLimits, _Mapping]]] = ..., decays: _Optional[_Iterable[_Union[DecayNote, _Mapping]]] = ..., inclusive: _Optional[_Union[InclusiveRemainder, _Mapping]] = ..., frame: _Optional[str] = ..., remarks: _Optional[_Iterable[str]] = ..., table_version: _Optional[str] = ..., limit_masses: _Optional[_Union[LimitMasses, str]] = ..., phase_space_volume: _Optional[_Union[PhaseSpaceVolume, _Mapping]] = ..., quasi_free: _Optional[_Union[QuasiFree, _Mapping]] = ...) -> None: ...

class PhaseSpaceVolume(_message.Message):
    __slots__ = ("volume", "gev_power")
    VOLUME_FIELD_NUMBER: _ClassVar[int]
    GEV_POWER_FIELD_NUMBER: _ClassVar[int]
    volume: float
    gev_power: int
    def __init__(self, volume: _Optional[float] = ..., gev_power: _Optional[int] = ...) -> None: ...

class QuasiFree(_message.Message):
    __slots__ = ("nucleus", "spectator", "fermi_momentum_gev", "model", "state", "every_nucleon", "at_rest", "lowest", "lowest_nucleon_momentum_gev", "highest", "absolute", "coherent", "coherent_reaction")
    NUCLEUS_FIELD_NUMBER: _ClassVar[int]
    SPECTATOR_FIELD_NUMBER: _ClassVar[int]
    FERMI_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    MODEL_FIELD_NUMBER: _ClassVar[int]
    STATE_FIELD_NUMBER: _ClassVar[int]
    EVERY_NUCLEON_FIELD_NUMBER: _ClassVar[int]
    AT_REST_FIELD_NUMBER: _ClassVar[int]
    LOWEST_FIELD_NUMBER: _ClassVar[int]
    LOWEST_NUCLEON_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    HIGHEST_FIELD_NUMBER: _ClassVar[int]
    ABSOLUTE_FIELD_NUMBER: _ClassVar[int]
    COHERENT_FIELD_NUMBER: _ClassVar[int]
    COHERENT_REACTION_FIELD_NUMBER: _ClassVar[int]
    nucleus: str
    spectator: str
    fermi_momentum_gev: float
    model: str
    state: _channel_pb2.ChannelState
    every_nucleon: bool
    at_rest: _channel_pb2.Threshold
    lowest: _channel_pb2.Threshold
    lowest_nucleon_momentum_gev: float
    highest: _channel_pb2.Threshold
    absolute: _channel_pb2.Threshold
    coherent: _channel_pb2.Threshold
    coherent_reaction: str
    def __init__(self, nucleus: _Optional[str] = ..., spectator: _Optional[str] = ..., fermi_momentum_gev: _Optional[float] = ..., model: _Optional[str] = ..., state: _Optional[_Union[_channel_pb2.ChannelState, str]] = ..., every_nucleon: bool = ..., at_rest: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ..., lowest: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ..., lowest_nucleon_momentum_gev: _Optional[float] = ..., highest: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ..., absolute: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ..., coherent: _Optional[_Union[_channel_pb2.Threshold, _Mapping]] = ..., coherent_reaction: _Optional[str] = ...) -> None: ...

class SubsetMassLimits(_message.Message):
    __slots__ = ("products", "mass")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MASS_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    mass: _kinematics_pb2.EnergyRange
    def __init__(self, products: _Optional[_Iterable[str]] = ..., mass: _Optional[_Union[_kinematics_pb2.EnergyRange, _Mapping]] = ...) -> None: ...

class MomentumTransferLimits(_message.Message):
    __slots__ = ("initial", "products", "t_forward_gev2", "t_backward_gev2")
    INITIAL_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    T_FORWARD_GEV2_FIELD_NUMBER: _ClassVar[int]
    T_BACKWARD_GEV2_FIELD_NUMBER: _ClassVar[int]
    initial: InitialParticle
    products: _containers.RepeatedScalarFieldContainer[str]
    t_forward_gev2: float
    t_backward_gev2: float
    def __init__(self, initial: _Optional[_Union[InitialParticle, str]] = ..., products: _Optional[_Iterable[str]] = ..., t_forward_gev2: _Optional[float] = ..., t_backward_gev2: _Optional[float] = ...) -> None: ...

class DecayNote(_message.Message):
    __slots__ = ("decay", "decay_class", "released_energy_gev")
    DECAY_FIELD_NUMBER: _ClassVar[int]
    DECAY_CLASS_FIELD_NUMBER: _ClassVar[int]
    RELEASED_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    decay: str
    decay_class: DecayClass
    released_energy_gev: float
    def __init__(self, decay: _Optional[str] = ..., decay_class: _Optional[_Union[DecayClass, str]] = ..., released_energy_gev: _Optional[float] = ...) -> None: ...

class InclusiveRemainder(_message.Message):
    __slots__ = ("charge_thirds", "baryon_number_thirds", "strangeness", "lightest", "lightest_mass_gev")
    CHARGE_THIRDS_FIELD_NUMBER: _ClassVar[int]
    BARYON_NUMBER_THIRDS_FIELD_NUMBER: _ClassVar[int]
    STRANGENESS_FIELD_NUMBER: _ClassVar[int]
    LIGHTEST_FIELD_NUMBER: _ClassVar[int]
    LIGHTEST_MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    charge_thirds: int
    baryon_number_thirds: int
    strangeness: int
    lightest: _containers.RepeatedScalarFieldContainer[str]
    lightest_mass_gev: float
    def __init__(self, charge_thirds: _Optional[int] = ..., baryon_number_thirds: _Optional[int] = ..., strangeness: _Optional[int] = ..., lightest: _Optional[_Iterable[str]] = ..., lightest_mass_gev: _Optional[float] = ...) -> None: ...
