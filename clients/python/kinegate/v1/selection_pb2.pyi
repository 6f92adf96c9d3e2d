from kinegate.v1 import event_pb2 as _event_pb2
from kinegate.v1 import explanation_pb2 as _explanation_pb2
from kinegate.v1 import fault_pb2 as _fault_pb2
from kinegate.v1 import fit_pb2 as _fit_pb2
from kinegate.v1 import info_pb2 as _info_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from kinegate.v1 import reaction_pb2 as _reaction_pb2
from kinegate.v1 import verdict_pb2 as _verdict_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class Role(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    ROLE_UNSPECIFIED: _ClassVar[Role]
    ROLE_GATE: _ClassVar[Role]
    ROLE_SHADOW: _ClassVar[Role]
    ROLE_VETO: _ClassVar[Role]

class Measurement(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    MEASUREMENT_UNSPECIFIED: _ClassVar[Measurement]
    MEASUREMENT_FULL: _ClassVar[Measurement]
    MEASUREMENT_DIRECTION: _ClassVar[Measurement]
    MEASUREMENT_MISSING: _ClassVar[Measurement]

class Frame(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    FRAME_UNSPECIFIED: _ClassVar[Frame]
    FRAME_LABORATORY: _ClassVar[Frame]
    FRAME_CENTRE_OF_MASS: _ClassVar[Frame]

class EntryDetail(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    ENTRY_DETAIL_UNSPECIFIED: _ClassVar[EntryDetail]
    ENTRY_DETAIL_NONE: _ClassVar[EntryDetail]
    ENTRY_DETAIL_ACCEPTED: _ClassVar[EntryDetail]
    ENTRY_DETAIL_ALL: _ClassVar[EntryDetail]

class DrainReason(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    DRAIN_REASON_UNSPECIFIED: _ClassVar[DrainReason]
    DRAIN_REASON_SERVER_STOPS: _ClassVar[DrainReason]
    DRAIN_REASON_CONNECTION_AGE: _ClassVar[DrainReason]
ROLE_UNSPECIFIED: Role
ROLE_GATE: Role
ROLE_SHADOW: Role
ROLE_VETO: Role
MEASUREMENT_UNSPECIFIED: Measurement
MEASUREMENT_FULL: Measurement
MEASUREMENT_DIRECTION: Measurement
MEASUREMENT_MISSING: Measurement
FRAME_UNSPECIFIED: Frame
FRAME_LABORATORY: Frame
FRAME_CENTRE_OF_MASS: Frame
ENTRY_DETAIL_UNSPECIFIED: EntryDetail
ENTRY_DETAIL_NONE: EntryDetail
ENTRY_DETAIL_ACCEPTED: EntryDetail
ENTRY_DETAIL_ALL: EntryDetail
DRAIN_REASON_UNSPECIFIED: DrainReason
DRAIN_REASON_SERVER_STOPS: DrainReason
DRAIN_REASON_CONNECTION_AGE: DrainReason

class Selection(_message.Message):
    __slots__ = ("name", "description", "hypotheses", "groups", "assignment_budget_count")
    NAME_FIELD_NUMBER: _ClassVar[int]
    DESCRIPTION_FIELD_NUMBER: _ClassVar[int]
    HYPOTHESES_FIELD_NUMBER: _ClassVar[int]
    GROUPS_FIELD_NUMBER: _ClassVar[int]
    ASSIGNMENT_BUDGET_COUNT_FIELD_NUMBER: _ClassVar[int]
    name: str
    description: str
    hypotheses: _containers.RepeatedCompositeFieldContainer[Hypothesis]
    groups: _containers.RepeatedCompositeFieldContainer[Group]
    assignment_budget_count: int
    def __init__(self, name: _Optional[str] = ..., description: _Optional[str] = ..., hypotheses: _Optional[_Iterable[_Union[Hypothesis, _Mapping]]] = ..., groups: _Optional[_Iterable[_Union[Group, _Mapping]]] = ..., assignment_budget_count: _Optional[int] = ...) -> None: ...

class Hypothesis(_message.Message):
    __slots__ = ("name", "reaction", "structured_reaction", "also_conjugate", "measurements", "beam", "extra_objects", "condition", "ranking", "record", "prescale_count", "role", "fit", "record_uncertainties")
    NAME_FIELD_NUMBER: _ClassVar[int]
    REACTION_FIELD_NUMBER: _ClassVar[int]
    STRUCTURED_REACTION_FIELD_NUMBER: _ClassVar[int]
    ALSO_CONJUGATE_FIELD_NUMBER: _ClassVar[int]
    MEASUREMENTS_FIELD_NUMBER: _ClassVar[int]
    BEAM_FIELD_NUMBER: _ClassVar[int]
    EXTRA_OBJECTS_FIELD_NUMBER: _ClassVar[int]
    CONDITION_FIELD_NUMBER: _ClassVar[int]
    RANKING_FIELD_NUMBER: _ClassVar[int]
    RECORD_FIELD_NUMBER: _ClassVar[int]
    PRESCALE_COUNT_FIELD_NUMBER: _ClassVar[int]
    ROLE_FIELD_NUMBER: _ClassVar[int]
    FIT_FIELD_NUMBER: _ClassVar[int]
    RECORD_UNCERTAINTIES_FIELD_NUMBER: _ClassVar[int]
    name: str
    reaction: str
    structured_reaction: _kinematics_pb2.Reaction
    also_conjugate: bool
    measurements: _containers.RepeatedCompositeFieldContainer[ProductMeasurement]
    beam: BeamSource
    extra_objects: ExtraObjects
    condition: Condition
    ranking: Ranking
    record: _containers.RepeatedCompositeFieldContainer[Window]
    prescale_count: int
    role: Role
    fit: _fit_pb2.Fit
    record_uncertainties: bool
    def __init__(self, name: _Optional[str] = ..., reaction: _Optional[str] = ..., structured_reaction: _Optional[_Union[_kinematics_pb2.Reaction, _Mapping]] = ..., also_conjugate: bool = ..., measurements: _Optional[_Iterable[_Union[ProductMeasurement, _Mapping]]] = ..., beam: _Optional[_Union[BeamSource, _Mapping]] = ..., extra_objects: _Optional[_Union[ExtraObjects, _Mapping]] = ..., condition: _Optional[_Union[Condition, _Mapping]] = ..., ranking: _Optional[_Union[Ranking, _Mapping]] = ..., record: _Optional[_Iterable[_Union[Window, _Mapping]]] = ..., prescale_count: _Optional[int] = ..., role: _Optional[_Union[Role, str]] = ..., fit: _Optional[_Union[_fit_pb2.Fit, _Mapping]] = ..., record_uncertainties: bool = ...) -> None: ...

class Group(_message.Message):
    __slots__ = ("name", "hypotheses")
    NAME_FIELD_NUMBER: _ClassVar[int]
    HYPOTHESES_FIELD_NUMBER: _ClassVar[int]
    name: str
    hypotheses: _containers.RepeatedScalarFieldContainer[str]
    def __init__(self, name: _Optional[str] = ..., hypotheses: _Optional[_Iterable[str]] = ...) -> None: ...

class ProductMeasurement(_message.Message):
    __slots__ = ("product", "measurement", "mass_from_event", "merged_photons")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    MEASUREMENT_FIELD_NUMBER: _ClassVar[int]
    MASS_FROM_EVENT_FIELD_NUMBER: _ClassVar[int]
    MERGED_PHOTONS_FIELD_NUMBER: _ClassVar[int]
    product: str
    measurement: Measurement
    mass_from_event: bool
    merged_photons: MergedPhotons
    def __init__(self, product: _Optional[str] = ..., measurement: _Optional[_Union[Measurement, str]] = ..., mass_from_event: bool = ..., merged_photons: _Optional[_Union[MergedPhotons, _Mapping]] = ...) -> None: ...

class MergedPhotons(_message.Message):
    __slots__ = ("min_energy_gev",)
    MIN_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    min_energy_gev: float
    def __init__(self, min_energy_gev: _Optional[float] = ...) -> None: ...

class BeamSource(_message.Message):
    __slots__ = ("tagged", "fixed")
    TAGGED_FIELD_NUMBER: _ClassVar[int]
    FIXED_FIELD_NUMBER: _ClassVar[int]
    tagged: TaggedBeam
    fixed: _kinematics_pb2.InitialState
    def __init__(self, tagged: _Optional[_Union[TaggedBeam, _Mapping]] = ..., fixed: _Optional[_Union[_kinematics_pb2.InitialState, _Mapping]] = ...) -> None: ...

class TaggedBeam(_message.Message):
    __slots__ = ("prompt", "side_bands")
    PROMPT_FIELD_NUMBER: _ClassVar[int]
    SIDE_BANDS_FIELD_NUMBER: _ClassVar[int]
    prompt: TimeWindow
    side_bands: _containers.RepeatedCompositeFieldContainer[TimeWindow]
    def __init__(self, prompt: _Optional[_Union[TimeWindow, _Mapping]] = ..., side_bands: _Optional[_Iterable[_Union[TimeWindow, _Mapping]]] = ...) -> None: ...

class TimeWindow(_message.Message):
    __slots__ = ("min_ns", "max_ns", "weight")
    MIN_NS_FIELD_NUMBER: _ClassVar[int]
    MAX_NS_FIELD_NUMBER: _ClassVar[int]
    WEIGHT_FIELD_NUMBER: _ClassVar[int]
    min_ns: float
    max_ns: float
    weight: float
    def __init__(self, min_ns: _Optional[float] = ..., max_ns: _Optional[float] = ..., weight: _Optional[float] = ...) -> None: ...

class ExtraObjects(_message.Message):
    __slots__ = ("none", "soft_photons", "any")
    NONE_FIELD_NUMBER: _ClassVar[int]
    SOFT_PHOTONS_FIELD_NUMBER: _ClassVar[int]
    ANY_FIELD_NUMBER: _ClassVar[int]
    none: NoExtraObjects
    soft_photons: SoftPhotons
    any: AnyExtraObjects
    def __init__(self, none: _Optional[_Union[NoExtraObjects, _Mapping]] = ..., soft_photons: _Optional[_Union[SoftPhotons, _Mapping]] = ..., any: _Optional[_Union[AnyExtraObjects, _Mapping]] = ...) -> None: ...

class NoExtraObjects(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class AnyExtraObjects(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class SoftPhotons(_message.Message):
    __slots__ = ("max_count", "max_energy_gev")
    MAX_COUNT_FIELD_NUMBER: _ClassVar[int]
    MAX_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    max_count: int
    max_energy_gev: float
    def __init__(self, max_count: _Optional[int] = ..., max_energy_gev: _Optional[float] = ...) -> None: ...

class Condition(_message.Message):
    __slots__ = ("window", "all_of", "any_of", "none_of")
    WINDOW_FIELD_NUMBER: _ClassVar[int]
    ALL_OF_FIELD_NUMBER: _ClassVar[int]
    ANY_OF_FIELD_NUMBER: _ClassVar[int]
    NONE_OF_FIELD_NUMBER: _ClassVar[int]
    window: Window
    all_of: _containers.RepeatedCompositeFieldContainer[Condition]
    any_of: _containers.RepeatedCompositeFieldContainer[Condition]
    none_of: _containers.RepeatedCompositeFieldContainer[Condition]
    def __init__(self, window: _Optional[_Union[Window, _Mapping]] = ..., all_of: _Optional[_Iterable[_Union[Condition, _Mapping]]] = ..., any_of: _Optional[_Iterable[_Union[Condition, _Mapping]]] = ..., none_of: _Optional[_Iterable[_Union[Condition, _Mapping]]] = ...) -> None: ...

class Window(_message.Message):
    __slots__ = ("name", "invariant_mass", "invariant_mass_squared", "missing_mass", "missing_mass_squared", "energy", "momentum", "transverse_momentum", "angle", "opening_angle", "coplanarity", "missing_direction", "momentum_transfer", "momentum_transfer_prime", "time_difference", "unused_photon_energy", "vertex_z", "flight_distance", "pointing", "fit_probability")
    NAME_FIELD_NUMBER: _ClassVar[int]
    INVARIANT_MASS_FIELD_NUMBER: _ClassVar[int]
    INVARIANT_MASS_SQUARED_FIELD_NUMBER: _ClassVar[int]
    MISSING_MASS_FIELD_NUMBER: _ClassVar[int]
    MISSING_MASS_SQUARED_FIELD_NUMBER: _ClassVar[int]
    ENERGY_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    TRANSVERSE_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    ANGLE_FIELD_NUMBER: _ClassVar[int]
    OPENING_ANGLE_FIELD_NUMBER: _ClassVar[int]
    COPLANARITY_FIELD_NUMBER: _ClassVar[int]
    MISSING_DIRECTION_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_TRANSFER_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_TRANSFER_PRIME_FIELD_NUMBER: _ClassVar[int]
    TIME_DIFFERENCE_FIELD_NUMBER: _ClassVar[int]
    UNUSED_PHOTON_ENERGY_FIELD_NUMBER: _ClassVar[int]
    VERTEX_Z_FIELD_NUMBER: _ClassVar[int]
    FLIGHT_DISTANCE_FIELD_NUMBER: _ClassVar[int]
    POINTING_FIELD_NUMBER: _ClassVar[int]
    FIT_PROBABILITY_FIELD_NUMBER: _ClassVar[int]
    name: str
    invariant_mass: MassWindow
    invariant_mass_squared: MassSquaredWindow
    missing_mass: MassWindow
    missing_mass_squared: MassSquaredWindow
    energy: EnergyWindow
    momentum: EnergyWindow
    transverse_momentum: EnergyWindow
    angle: AngleWindow
    opening_angle: OpeningAngleWindow
    coplanarity: CoplanarityWindow
    missing_direction: MissingDirectionWindow
    momentum_transfer: MomentumTransferWindow
    momentum_transfer_prime: MomentumTransferWindow
    time_difference: TimeDifferenceWindow
    unused_photon_energy: UnusedPhotonEnergyWindow
    vertex_z: VertexZWindow
    flight_distance: FlightDistanceWindow
    pointing: PointingWindow
    fit_probability: FitProbabilityWindow
    def __init__(self, name: _Optional[str] = ..., invariant_mass: _Optional[_Union[MassWindow, _Mapping]] = ..., invariant_mass_squared: _Optional[_Union[MassSquaredWindow, _Mapping]] = ..., missing_mass: _Optional[_Union[MassWindow, _Mapping]] = ..., missing_mass_squared: _Optional[_Union[MassSquaredWindow, _Mapping]] = ..., energy: _Optional[_Union[EnergyWindow, _Mapping]] = ..., momentum: _Optional[_Union[EnergyWindow, _Mapping]] = ..., transverse_momentum: _Optional[_Union[EnergyWindow, _Mapping]] = ..., angle: _Optional[_Union[AngleWindow, _Mapping]] = ..., opening_angle: _Optional[_Union[OpeningAngleWindow, _Mapping]] = ..., coplanarity: _Optional[_Union[CoplanarityWindow, _Mapping]] = ..., missing_direction: _Optional[_Union[MissingDirectionWindow, _Mapping]] = ..., momentum_transfer: _Optional[_Union[MomentumTransferWindow, _Mapping]] = ..., momentum_transfer_prime: _Optional[_Union[MomentumTransferWindow, _Mapping]] = ..., time_difference: _Optional[_Union[TimeDifferenceWindow, _Mapping]] = ..., unused_photon_energy: _Optional[_Union[UnusedPhotonEnergyWindow, _Mapping]] = ..., vertex_z: _Optional[_Union[VertexZWindow, _Mapping]] = ..., flight_distance: _Optional[_Union[FlightDistanceWindow, _Mapping]] = ..., pointing: _Optional[_Union[PointingWindow, _Mapping]] = ..., fit_probability: _Optional[_Union[FitProbabilityWindow, _Mapping]] = ...) -> None: ...

class MassWindow(_message.Message):
    __slots__ = ("products", "min_gev", "max_gev")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    min_gev: float
    max_gev: float
    def __init__(self, products: _Optional[_Iterable[str]] = ..., min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ...) -> None: ...

class MassSquaredWindow(_message.Message):
    __slots__ = ("products", "min_gev2", "max_gev2")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV2_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV2_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    min_gev2: float
    max_gev2: float
    def __init__(self, products: _Optional[_Iterable[str]] = ..., min_gev2: _Optional[float] = ..., max_gev2: _Optional[float] = ...) -> None: ...

class EnergyWindow(_message.Message):
    __slots__ = ("products", "frame", "min_gev", "max_gev")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    FRAME_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    frame: Frame
    min_gev: float
    max_gev: float
    def __init__(self, products: _Optional[_Iterable[str]] = ..., frame: _Optional[_Union[Frame, str]] = ..., min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ...) -> None: ...

class AngleWindow(_message.Message):
    __slots__ = ("products", "frame", "min_rad", "max_rad")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    FRAME_FIELD_NUMBER: _ClassVar[int]
    MIN_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_RAD_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    frame: Frame
    min_rad: float
    max_rad: float
    def __init__(self, products: _Optional[_Iterable[str]] = ..., frame: _Optional[_Union[Frame, str]] = ..., min_rad: _Optional[float] = ..., max_rad: _Optional[float] = ...) -> None: ...

class OpeningAngleWindow(_message.Message):
    __slots__ = ("first", "second", "frame", "min_rad", "max_rad")
    FIRST_FIELD_NUMBER: _ClassVar[int]
    SECOND_FIELD_NUMBER: _ClassVar[int]
    FRAME_FIELD_NUMBER: _ClassVar[int]
    MIN_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_RAD_FIELD_NUMBER: _ClassVar[int]
    first: str
    second: str
    frame: Frame
    min_rad: float
    max_rad: float
    def __init__(self, first: _Optional[str] = ..., second: _Optional[str] = ..., frame: _Optional[_Union[Frame, str]] = ..., min_rad: _Optional[float] = ..., max_rad: _Optional[float] = ...) -> None: ...

class CoplanarityWindow(_message.Message):
    __slots__ = ("first", "second", "min_rad", "max_rad")
    FIRST_FIELD_NUMBER: _ClassVar[int]
    SECOND_FIELD_NUMBER: _ClassVar[int]
    MIN_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_RAD_FIELD_NUMBER: _ClassVar[int]
    first: _containers.RepeatedScalarFieldContainer[str]
    second: _containers.RepeatedScalarFieldContainer[str]
    min_rad: float
    max_rad: float
    def __init__(self, first: _Optional[_Iterable[str]] = ..., second: _Optional[_Iterable[str]] = ..., min_rad: _Optional[float] = ..., max_rad: _Optional[float] = ...) -> None: ...

class MissingDirectionWindow(_message.Message):
    __slots__ = ("product", "min_rad", "max_rad")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    MIN_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_RAD_FIELD_NUMBER: _ClassVar[int]
    product: str
    min_rad: float
    max_rad: float
    def __init__(self, product: _Optional[str] = ..., min_rad: _Optional[float] = ..., max_rad: _Optional[float] = ...) -> None: ...

class MomentumTransferWindow(_message.Message):
    __slots__ = ("initial", "products", "min_gev2", "max_gev2")
    INITIAL_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV2_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV2_FIELD_NUMBER: _ClassVar[int]
    initial: _reaction_pb2.InitialParticle
    products: _containers.RepeatedScalarFieldContainer[str]
    min_gev2: float
    max_gev2: float
    def __init__(self, initial: _Optional[_Union[_reaction_pb2.InitialParticle, str]] = ..., products: _Optional[_Iterable[str]] = ..., min_gev2: _Optional[float] = ..., max_gev2: _Optional[float] = ...) -> None: ...

class TimeDifferenceWindow(_message.Message):
    __slots__ = ("min_ns", "max_ns")
    MIN_NS_FIELD_NUMBER: _ClassVar[int]
    MAX_NS_FIELD_NUMBER: _ClassVar[int]
    min_ns: float
    max_ns: float
    def __init__(self, min_ns: _Optional[float] = ..., max_ns: _Optional[float] = ...) -> None: ...

class UnusedPhotonEnergyWindow(_message.Message):
    __slots__ = ("min_gev", "max_gev")
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    min_gev: float
    max_gev: float
    def __init__(self, min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ...) -> None: ...

class VertexZWindow(_message.Message):
    __slots__ = ("min_m", "max_m")
    MIN_M_FIELD_NUMBER: _ClassVar[int]
    MAX_M_FIELD_NUMBER: _ClassVar[int]
    min_m: float
    max_m: float
    def __init__(self, min_m: _Optional[float] = ..., max_m: _Optional[float] = ...) -> None: ...

class FlightDistanceWindow(_message.Message):
    __slots__ = ("product", "min_m", "max_m")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    MIN_M_FIELD_NUMBER: _ClassVar[int]
    MAX_M_FIELD_NUMBER: _ClassVar[int]
    product: str
    min_m: float
    max_m: float
    def __init__(self, product: _Optional[str] = ..., min_m: _Optional[float] = ..., max_m: _Optional[float] = ...) -> None: ...

class PointingWindow(_message.Message):
    __slots__ = ("product", "min_rad", "max_rad")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    MIN_RAD_FIELD_NUMBER: _ClassVar[int]
    MAX_RAD_FIELD_NUMBER: _ClassVar[int]
    product: str
    min_rad: float
    max_rad: float
    def __init__(self, product: _Optional[str] = ..., min_rad: _Optional[float] = ..., max_rad: _Optional[float] = ...) -> None: ...

class FitProbabilityWindow(_message.Message):
    __slots__ = ("min", "max")
    MIN_FIELD_NUMBER: _ClassVar[int]
    MAX_FIELD_NUMBER: _ClassVar[int]
    min: float
    max: float
    def __init__(self, min: _Optional[float] = ..., max: _Optional[float] = ...) -> None: ...

class Ranking(_message.Message):
    __slots__ = ("closest_masses", "fit_probability")
    CLOSEST_MASSES_FIELD_NUMBER: _ClassVar[int]
    FIT_PROBABILITY_FIELD_NUMBER: _ClassVar[int]
    closest_masses: ClosestMasses
    fit_probability: RankByFitProbability
    def __init__(self, closest_masses: _Optional[_Union[ClosestMasses, _Mapping]] = ..., fit_probability: _Optional[_Union[RankByFitProbability, _Mapping]] = ...) -> None: ...

class RankByFitProbability(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class ClosestMasses(_message.Message):
    __slots__ = ("masses",)
    MASSES_FIELD_NUMBER: _ClassVar[int]
    masses: _containers.RepeatedCompositeFieldContainer[MassReference]
    def __init__(self, masses: _Optional[_Iterable[_Union[MassReference, _Mapping]]] = ...) -> None: ...

class MassReference(_message.Message):
    __slots__ = ("products", "mass_gev", "scale_gev")
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    SCALE_GEV_FIELD_NUMBER: _ClassVar[int]
    products: _containers.RepeatedScalarFieldContainer[str]
    mass_gev: float
    scale_gev: float
    def __init__(self, products: _Optional[_Iterable[str]] = ..., mass_gev: _Optional[float] = ..., scale_gev: _Optional[float] = ...) -> None: ...

class CheckSelectionRequest(_message.Message):
    __slots__ = ("selection", "yaml")
    SELECTION_FIELD_NUMBER: _ClassVar[int]
    YAML_FIELD_NUMBER: _ClassVar[int]
    selection: Selection
    yaml: str
    def __init__(self, selection: _Optional[_Union[Selection, _Mapping]] = ..., yaml: _Optional[str] = ...) -> None: ...

class CheckSelectionResponse(_message.Message):
    __slots__ = ("faults", "selection", "selection_digest", "hypotheses", "largest_reply_byte_count")
    FAULTS_FIELD_NUMBER: _ClassVar[int]
    SELECTION_FIELD_NUMBER: _ClassVar[int]
    SELECTION_DIGEST_FIELD_NUMBER: _ClassVar[int]
    HYPOTHESES_FIELD_NUMBER: _ClassVar[int]
    LARGEST_REPLY_BYTE_COUNT_FIELD_NUMBER: _ClassVar[int]
    faults: _containers.RepeatedCompositeFieldContainer[_fault_pb2.FieldFault]
    selection: Selection
    selection_digest: str
    hypotheses: _containers.RepeatedCompositeFieldContainer[HypothesisOutline]
    largest_reply_byte_count: int
    def __init__(self, faults: _Optional[_Iterable[_Union[_fault_pb2.FieldFault, _Mapping]]] = ..., selection: _Optional[_Union[Selection, _Mapping]] = ..., selection_digest: _Optional[str] = ..., hypotheses: _Optional[_Iterable[_Union[HypothesisOutline, _Mapping]]] = ..., largest_reply_byte_count: _Optional[int] = ...) -> None: ...

class SelectionOutline(_message.Message):
    __slots__ = ("selection_digest", "hypotheses", "groups")
    SELECTION_DIGEST_FIELD_NUMBER: _ClassVar[int]
    HYPOTHESES_FIELD_NUMBER: _ClassVar[int]
    GROUPS_FIELD_NUMBER: _ClassVar[int]
    selection_digest: str
    hypotheses: _containers.RepeatedCompositeFieldContainer[HypothesisOutline]
    groups: _containers.RepeatedScalarFieldContainer[str]
    def __init__(self, selection_digest: _Optional[str] = ..., hypotheses: _Optional[_Iterable[_Union[HypothesisOutline, _Mapping]]] = ..., groups: _Optional[_Iterable[str]] = ...) -> None: ...

class HypothesisOutline(_message.Message):
    __slots__ = ("name", "reaction", "products", "observables", "degrees_of_freedom")
    NAME_FIELD_NUMBER: _ClassVar[int]
    REACTION_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    OBSERVABLES_FIELD_NUMBER: _ClassVar[int]
    DEGREES_OF_FREEDOM_FIELD_NUMBER: _ClassVar[int]
    name: str
    reaction: str
    products: _containers.RepeatedScalarFieldContainer[str]
    observables: _containers.RepeatedScalarFieldContainer[str]
    degrees_of_freedom: int
    def __init__(self, name: _Optional[str] = ..., reaction: _Optional[str] = ..., products: _Optional[_Iterable[str]] = ..., observables: _Optional[_Iterable[str]] = ..., degrees_of_freedom: _Optional[int] = ...) -> None: ...

class JudgeBlockRequest(_message.Message):
    __slots__ = ("selection", "entries", "block")
    SELECTION_FIELD_NUMBER: _ClassVar[int]
    ENTRIES_FIELD_NUMBER: _ClassVar[int]
    BLOCK_FIELD_NUMBER: _ClassVar[int]
    selection: SelectionSource
    entries: EntryDetail
    block: _event_pb2.EventBlock
    def __init__(self, selection: _Optional[_Union[SelectionSource, _Mapping]] = ..., entries: _Optional[_Union[EntryDetail, str]] = ..., block: _Optional[_Union[_event_pb2.EventBlock, _Mapping]] = ...) -> None: ...

class JudgeBlockResponse(_message.Message):
    __slots__ = ("verdict", "selection")
    VERDICT_FIELD_NUMBER: _ClassVar[int]
    SELECTION_FIELD_NUMBER: _ClassVar[int]
    verdict: _verdict_pb2.VerdictBlock
    selection: SelectionOutline
    def __init__(self, verdict: _Optional[_Union[_verdict_pb2.VerdictBlock, _Mapping]] = ..., selection: _Optional[_Union[SelectionOutline, _Mapping]] = ...) -> None: ...

class ExplainVerdictRequest(_message.Message):
    __slots__ = ("selection", "block", "event_index", "max_assignment_count")
    SELECTION_FIELD_NUMBER: _ClassVar[int]
    BLOCK_FIELD_NUMBER: _ClassVar[int]
    EVENT_INDEX_FIELD_NUMBER: _ClassVar[int]
    MAX_ASSIGNMENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    selection: SelectionSource
    block: _event_pb2.EventBlock
    event_index: int
    max_assignment_count: int
    def __init__(self, selection: _Optional[_Union[SelectionSource, _Mapping]] = ..., block: _Optional[_Union[_event_pb2.EventBlock, _Mapping]] = ..., event_index: _Optional[int] = ..., max_assignment_count: _Optional[int] = ...) -> None: ...

class SelectionSource(_message.Message):
    __slots__ = ("given", "named")
    GIVEN_FIELD_NUMBER: _ClassVar[int]
    NAMED_FIELD_NUMBER: _ClassVar[int]
    given: Selection
    named: SelectionReference
    def __init__(self, given: _Optional[_Union[Selection, _Mapping]] = ..., named: _Optional[_Union[SelectionReference, _Mapping]] = ...) -> None: ...

class SelectionReference(_message.Message):
    __slots__ = ("name", "selection_digest")
    NAME_FIELD_NUMBER: _ClassVar[int]
    SELECTION_DIGEST_FIELD_NUMBER: _ClassVar[int]
    name: str
    selection_digest: str
    def __init__(self, name: _Optional[str] = ..., selection_digest: _Optional[str] = ...) -> None: ...

class JudgeRequest(_message.Message):
    __slots__ = ("open", "block", "heartbeat")
    OPEN_FIELD_NUMBER: _ClassVar[int]
    BLOCK_FIELD_NUMBER: _ClassVar[int]
    HEARTBEAT_FIELD_NUMBER: _ClassVar[int]
    open: JudgeOpen
    block: _event_pb2.EventBlock
    heartbeat: Heartbeat
    def __init__(self, open: _Optional[_Union[JudgeOpen, _Mapping]] = ..., block: _Optional[_Union[_event_pb2.EventBlock, _Mapping]] = ..., heartbeat: _Optional[_Union[Heartbeat, _Mapping]] = ...) -> None: ...

class JudgeResponse(_message.Message):
    __slots__ = ("opened", "verdict", "heartbeat", "draining", "taken")
    OPENED_FIELD_NUMBER: _ClassVar[int]
    VERDICT_FIELD_NUMBER: _ClassVar[int]
    HEARTBEAT_FIELD_NUMBER: _ClassVar[int]
    DRAINING_FIELD_NUMBER: _ClassVar[int]
    TAKEN_FIELD_NUMBER: _ClassVar[int]
    opened: JudgeOpened
    verdict: _verdict_pb2.VerdictBlock
    heartbeat: Heartbeat
    draining: Draining
    taken: SelectionOutline
    def __init__(self, opened: _Optional[_Union[JudgeOpened, _Mapping]] = ..., verdict: _Optional[_Union[_verdict_pb2.VerdictBlock, _Mapping]] = ..., heartbeat: _Optional[_Union[Heartbeat, _Mapping]] = ..., draining: _Optional[_Union[Draining, _Mapping]] = ..., taken: _Optional[_Union[SelectionOutline, _Mapping]] = ...) -> None: ...

class JudgeOpen(_message.Message):
    __slots__ = ("selection", "first_sequence", "entries", "latency_budget_s", "follow", "limits")
    SELECTION_FIELD_NUMBER: _ClassVar[int]
    FIRST_SEQUENCE_FIELD_NUMBER: _ClassVar[int]
    ENTRIES_FIELD_NUMBER: _ClassVar[int]
    LATENCY_BUDGET_S_FIELD_NUMBER: _ClassVar[int]
    FOLLOW_FIELD_NUMBER: _ClassVar[int]
    LIMITS_FIELD_NUMBER: _ClassVar[int]
    selection: SelectionSource
    first_sequence: int
    entries: EntryDetail
    latency_budget_s: float
    follow: bool
    limits: _info_pb2.Limits
    def __init__(self, selection: _Optional[_Union[SelectionSource, _Mapping]] = ..., first_sequence: _Optional[int] = ..., entries: _Optional[_Union[EntryDetail, str]] = ..., latency_budget_s: _Optional[float] = ..., follow: bool = ..., limits: _Optional[_Union[_info_pb2.Limits, _Mapping]] = ...) -> None: ...

class JudgeOpened(_message.Message):
    __slots__ = ("selection", "credit", "limits")
    SELECTION_FIELD_NUMBER: _ClassVar[int]
    CREDIT_FIELD_NUMBER: _ClassVar[int]
    LIMITS_FIELD_NUMBER: _ClassVar[int]
    selection: SelectionOutline
    credit: Credit
    limits: _info_pb2.Limits
    def __init__(self, selection: _Optional[_Union[SelectionOutline, _Mapping]] = ..., credit: _Optional[_Union[Credit, _Mapping]] = ..., limits: _Optional[_Union[_info_pb2.Limits, _Mapping]] = ...) -> None: ...

class Credit(_message.Message):
    __slots__ = ("block_count", "byte_count")
    BLOCK_COUNT_FIELD_NUMBER: _ClassVar[int]
    BYTE_COUNT_FIELD_NUMBER: _ClassVar[int]
    block_count: int
    byte_count: int
    def __init__(self, block_count: _Optional[int] = ..., byte_count: _Optional[int] = ...) -> None: ...

class Heartbeat(_message.Message):
    __slots__ = ("received_sequence", "answered_sequence", "oldest_pending_s")
    RECEIVED_SEQUENCE_FIELD_NUMBER: _ClassVar[int]
    ANSWERED_SEQUENCE_FIELD_NUMBER: _ClassVar[int]
    OLDEST_PENDING_S_FIELD_NUMBER: _ClassVar[int]
    received_sequence: int
    answered_sequence: int
    oldest_pending_s: float
    def __init__(self, received_sequence: _Optional[int] = ..., answered_sequence: _Optional[int] = ..., oldest_pending_s: _Optional[float] = ...) -> None: ...

class Draining(_message.Message):
    __slots__ = ("answered_sequence", "grace_s", "reason")
    ANSWERED_SEQUENCE_FIELD_NUMBER: _ClassVar[int]
    GRACE_S_FIELD_NUMBER: _ClassVar[int]
    REASON_FIELD_NUMBER: _ClassVar[int]
    answered_sequence: int
    grace_s: float
    reason: DrainReason
    def __init__(self, answered_sequence: _Optional[int] = ..., grace_s: _Optional[float] = ..., reason: _Optional[_Union[DrainReason, str]] = ...) -> None: ...
