from kinegate.v1 import beam_pb2 as _beam_pb2
from kinegate.v1 import detector_pb2 as _detector_pb2
from kinegate.v1 import event_pb2 as _event_pb2
from kinegate.v1 import fault_pb2 as _fault_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from kinegate.v1 import truth_pb2 as _truth_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class AngularLaw(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    ANGULAR_LAW_UNSPECIFIED: _ClassVar[AngularLaw]
    ANGULAR_LAW_PAIR_CREATION: _ClassVar[AngularLaw]
    ANGULAR_LAW_ANNIHILATION: _ClassVar[AngularLaw]
    ANGULAR_LAW_COMPTON: _ClassVar[AngularLaw]
ANGULAR_LAW_UNSPECIFIED: AngularLaw
ANGULAR_LAW_PAIR_CREATION: AngularLaw
ANGULAR_LAW_ANNIHILATION: AngularLaw
ANGULAR_LAW_COMPTON: AngularLaw

class Generation(_message.Message):
    __slots__ = ("name", "description", "seed", "initial_state", "channels", "weighted", "target", "accidentals", "detector", "polarisation")
    NAME_FIELD_NUMBER: _ClassVar[int]
    DESCRIPTION_FIELD_NUMBER: _ClassVar[int]
    SEED_FIELD_NUMBER: _ClassVar[int]
    INITIAL_STATE_FIELD_NUMBER: _ClassVar[int]
    CHANNELS_FIELD_NUMBER: _ClassVar[int]
    WEIGHTED_FIELD_NUMBER: _ClassVar[int]
    TARGET_FIELD_NUMBER: _ClassVar[int]
    ACCIDENTALS_FIELD_NUMBER: _ClassVar[int]
    DETECTOR_FIELD_NUMBER: _ClassVar[int]
    POLARISATION_FIELD_NUMBER: _ClassVar[int]
    name: str
    description: str
    seed: int
    initial_state: _beam_pb2.GenerationInitialState
    channels: _containers.RepeatedCompositeFieldContainer[GenerationChannel]
    weighted: bool
    target: _beam_pb2.TargetRegion
    accidentals: _beam_pb2.AccidentalCandidates
    detector: _detector_pb2.Detector
    polarisation: BeamPolarisation
    def __init__(self, name: _Optional[str] = ..., description: _Optional[str] = ..., seed: _Optional[int] = ..., initial_state: _Optional[_Union[_beam_pb2.GenerationInitialState, _Mapping]] = ..., channels: _Optional[_Iterable[_Union[GenerationChannel, _Mapping]]] = ..., weighted: bool = ..., target: _Optional[_Union[_beam_pb2.TargetRegion, _Mapping]] = ..., accidentals: _Optional[_Union[_beam_pb2.AccidentalCandidates, _Mapping]] = ..., detector: _Optional[_Union[_detector_pb2.Detector, _Mapping]] = ..., polarisation: _Optional[_Union[BeamPolarisation, _Mapping]] = ...) -> None: ...

class BeamPolarisation(_message.Message):
    __slots__ = ("linear_degree", "plane_rad", "circular_degree")
    LINEAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    PLANE_RAD_FIELD_NUMBER: _ClassVar[int]
    CIRCULAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    linear_degree: float
    plane_rad: float
    circular_degree: float
    def __init__(self, linear_degree: _Optional[float] = ..., plane_rad: _Optional[float] = ..., circular_degree: _Optional[float] = ...) -> None: ...

class GenerationChannel(_message.Message):
    __slots__ = ("name", "reaction", "structured_reaction", "fraction", "energy", "angle", "bound", "decays", "sharp_below_gev")
    NAME_FIELD_NUMBER: _ClassVar[int]
    REACTION_FIELD_NUMBER: _ClassVar[int]
    STRUCTURED_REACTION_FIELD_NUMBER: _ClassVar[int]
    FRACTION_FIELD_NUMBER: _ClassVar[int]
    ENERGY_FIELD_NUMBER: _ClassVar[int]
    ANGLE_FIELD_NUMBER: _ClassVar[int]
    BOUND_FIELD_NUMBER: _ClassVar[int]
    DECAYS_FIELD_NUMBER: _ClassVar[int]
    SHARP_BELOW_GEV_FIELD_NUMBER: _ClassVar[int]
    name: str
    reaction: str
    structured_reaction: _kinematics_pb2.Reaction
    fraction: float
    energy: EnergyDependence
    angle: ProductionAngle
    bound: float
    decays: _containers.RepeatedCompositeFieldContainer[DecayOptions]
    sharp_below_gev: float
    def __init__(self, name: _Optional[str] = ..., reaction: _Optional[str] = ..., structured_reaction: _Optional[_Union[_kinematics_pb2.Reaction, _Mapping]] = ..., fraction: _Optional[float] = ..., energy: _Optional[_Union[EnergyDependence, _Mapping]] = ..., angle: _Optional[_Union[ProductionAngle, _Mapping]] = ..., bound: _Optional[float] = ..., decays: _Optional[_Iterable[_Union[DecayOptions, _Mapping]]] = ..., sharp_below_gev: _Optional[float] = ...) -> None: ...

class EnergyDependence(_message.Message):
    __slots__ = ("constant", "phase_space", "table", "law")
    CONSTANT_FIELD_NUMBER: _ClassVar[int]
    PHASE_SPACE_FIELD_NUMBER: _ClassVar[int]
    TABLE_FIELD_NUMBER: _ClassVar[int]
    LAW_FIELD_NUMBER: _ClassVar[int]
    constant: ConstantRate
    phase_space: PhaseSpaceRate
    table: EnergyTable
    law: LawRate
    def __init__(self, constant: _Optional[_Union[ConstantRate, _Mapping]] = ..., phase_space: _Optional[_Union[PhaseSpaceRate, _Mapping]] = ..., table: _Optional[_Union[EnergyTable, _Mapping]] = ..., law: _Optional[_Union[LawRate, _Mapping]] = ...) -> None: ...

class LawRate(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class ConstantRate(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class PhaseSpaceRate(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class EnergyTable(_message.Message):
    __slots__ = ("sqrt_s_gev", "rates")
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    RATES_FIELD_NUMBER: _ClassVar[int]
    sqrt_s_gev: _containers.RepeatedScalarFieldContainer[float]
    rates: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, sqrt_s_gev: _Optional[_Iterable[float]] = ..., rates: _Optional[_Iterable[float]] = ...) -> None: ...

class ProductionAngle(_message.Message):
    __slots__ = ("product", "cosine", "slope_per_gev2", "law", "azimuth", "beam_asymmetry")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    COSINE_FIELD_NUMBER: _ClassVar[int]
    SLOPE_PER_GEV2_FIELD_NUMBER: _ClassVar[int]
    LAW_FIELD_NUMBER: _ClassVar[int]
    AZIMUTH_FIELD_NUMBER: _ClassVar[int]
    BEAM_ASYMMETRY_FIELD_NUMBER: _ClassVar[int]
    product: str
    cosine: CosineTable
    slope_per_gev2: float
    law: AngularLaw
    azimuth: AzimuthTable
    beam_asymmetry: float
    def __init__(self, product: _Optional[str] = ..., cosine: _Optional[_Union[CosineTable, _Mapping]] = ..., slope_per_gev2: _Optional[float] = ..., law: _Optional[_Union[AngularLaw, str]] = ..., azimuth: _Optional[_Union[AzimuthTable, _Mapping]] = ..., beam_asymmetry: _Optional[float] = ...) -> None: ...

class CosineTable(_message.Message):
    __slots__ = ("cosines", "densities")
    COSINES_FIELD_NUMBER: _ClassVar[int]
    DENSITIES_FIELD_NUMBER: _ClassVar[int]
    cosines: _containers.RepeatedScalarFieldContainer[float]
    densities: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, cosines: _Optional[_Iterable[float]] = ..., densities: _Optional[_Iterable[float]] = ...) -> None: ...

class AzimuthTable(_message.Message):
    __slots__ = ("angles_rad", "densities")
    ANGLES_RAD_FIELD_NUMBER: _ClassVar[int]
    DENSITIES_FIELD_NUMBER: _ClassVar[int]
    angles_rad: _containers.RepeatedScalarFieldContainer[float]
    densities: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, angles_rad: _Optional[_Iterable[float]] = ..., densities: _Optional[_Iterable[float]] = ...) -> None: ...

class DecayOptions(_message.Message):
    __slots__ = ("product", "branching_fraction", "line_shape", "dalitz_polynomial", "vector_to_three", "lepton_decay", "beta_decay", "cosine")
    PRODUCT_FIELD_NUMBER: _ClassVar[int]
    BRANCHING_FRACTION_FIELD_NUMBER: _ClassVar[int]
    LINE_SHAPE_FIELD_NUMBER: _ClassVar[int]
    DALITZ_POLYNOMIAL_FIELD_NUMBER: _ClassVar[int]
    VECTOR_TO_THREE_FIELD_NUMBER: _ClassVar[int]
    LEPTON_DECAY_FIELD_NUMBER: _ClassVar[int]
    BETA_DECAY_FIELD_NUMBER: _ClassVar[int]
    COSINE_FIELD_NUMBER: _ClassVar[int]
    product: str
    branching_fraction: float
    line_shape: LineShape
    dalitz_polynomial: DalitzPolynomial
    vector_to_three: VectorToThree
    lepton_decay: LeptonDecay
    beta_decay: BetaDecay
    cosine: CosineTable
    def __init__(self, product: _Optional[str] = ..., branching_fraction: _Optional[float] = ..., line_shape: _Optional[_Union[LineShape, _Mapping]] = ..., dalitz_polynomial: _Optional[_Union[DalitzPolynomial, _Mapping]] = ..., vector_to_three: _Optional[_Union[VectorToThree, _Mapping]] = ..., lepton_decay: _Optional[_Union[LeptonDecay, _Mapping]] = ..., beta_decay: _Optional[_Union[BetaDecay, _Mapping]] = ..., cosine: _Optional[_Union[CosineTable, _Mapping]] = ...) -> None: ...

class LineShape(_message.Message):
    __slots__ = ("angular_momentum", "radius_per_gev", "constant_width", "min_gev", "max_gev")
    ANGULAR_MOMENTUM_FIELD_NUMBER: _ClassVar[int]
    RADIUS_PER_GEV_FIELD_NUMBER: _ClassVar[int]
    CONSTANT_WIDTH_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    angular_momentum: int
    radius_per_gev: float
    constant_width: bool
    min_gev: float
    max_gev: float
    def __init__(self, angular_momentum: _Optional[int] = ..., radius_per_gev: _Optional[float] = ..., constant_width: bool = ..., min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ...) -> None: ...

class DalitzPolynomial(_message.Message):
    __slots__ = ("terms",)
    TERMS_FIELD_NUMBER: _ClassVar[int]
    terms: _containers.RepeatedCompositeFieldContainer[DalitzTerm]
    def __init__(self, terms: _Optional[_Iterable[_Union[DalitzTerm, _Mapping]]] = ...) -> None: ...

class DalitzTerm(_message.Message):
    __slots__ = ("coefficient", "power_x", "power_y")
    COEFFICIENT_FIELD_NUMBER: _ClassVar[int]
    POWER_X_FIELD_NUMBER: _ClassVar[int]
    POWER_Y_FIELD_NUMBER: _ClassVar[int]
    coefficient: float
    power_x: int
    power_y: int
    def __init__(self, coefficient: _Optional[float] = ..., power_x: _Optional[int] = ..., power_y: _Optional[int] = ...) -> None: ...

class VectorToThree(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class LeptonDecay(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class BetaDecay(_message.Message):
    __slots__ = ()
    def __init__(self) -> None: ...

class GenerateEventsRequest(_message.Message):
    __slots__ = ("generation", "first_event", "event_count", "block_event_count", "without_truth")
    GENERATION_FIELD_NUMBER: _ClassVar[int]
    FIRST_EVENT_FIELD_NUMBER: _ClassVar[int]
    EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    BLOCK_EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    WITHOUT_TRUTH_FIELD_NUMBER: _ClassVar[int]
    generation: Generation
    first_event: int
    event_count: int
    block_event_count: int
    without_truth: bool
    def __init__(self, generation: _Optional[_Union[Generation, _Mapping]] = ..., first_event: _Optional[int] = ..., event_count: _Optional[int] = ..., block_event_count: _Optional[int] = ..., without_truth: bool = ...) -> None: ...

class GenerateEventsResponse(_message.Message):
    __slots__ = ("header", "block", "progress", "summary")
    HEADER_FIELD_NUMBER: _ClassVar[int]
    BLOCK_FIELD_NUMBER: _ClassVar[int]
    PROGRESS_FIELD_NUMBER: _ClassVar[int]
    SUMMARY_FIELD_NUMBER: _ClassVar[int]
    header: GenerationHeader
    block: GeneratedBlock
    progress: GenerationProgress
    summary: GenerationSummary
    def __init__(self, header: _Optional[_Union[GenerationHeader, _Mapping]] = ..., block: _Optional[_Union[GeneratedBlock, _Mapping]] = ..., progress: _Optional[_Union[GenerationProgress, _Mapping]] = ..., summary: _Optional[_Union[GenerationSummary, _Mapping]] = ...) -> None: ...

class GenerationHeader(_message.Message):
    __slots__ = ("request_digest", "generation_digest", "generator", "version", "numerics_version", "table_version", "seed", "first_event", "event_count", "channels")
    REQUEST_DIGEST_FIELD_NUMBER: _ClassVar[int]
    GENERATION_DIGEST_FIELD_NUMBER: _ClassVar[int]
    GENERATOR_FIELD_NUMBER: _ClassVar[int]
    VERSION_FIELD_NUMBER: _ClassVar[int]
    NUMERICS_VERSION_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    SEED_FIELD_NUMBER: _ClassVar[int]
    FIRST_EVENT_FIELD_NUMBER: _ClassVar[int]
    EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    CHANNELS_FIELD_NUMBER: _ClassVar[int]
    request_digest: str
    generation_digest: str
    generator: str
    version: str
    numerics_version: int
    table_version: str
    seed: int
    first_event: int
    event_count: int
    channels: _containers.RepeatedCompositeFieldContainer[GenerationOutline]
    def __init__(self, request_digest: _Optional[str] = ..., generation_digest: _Optional[str] = ..., generator: _Optional[str] = ..., version: _Optional[str] = ..., numerics_version: _Optional[int] = ..., table_version: _Optional[str] = ..., seed: _Optional[int] = ..., first_event: _Optional[int] = ..., event_count: _Optional[int] = ..., channels: _Optional[_Iterable[_Union[GenerationOutline, _Mapping]]] = ...) -> None: ...

class GenerationOutline(_message.Message):
    __slots__ = ("name", "reaction", "products", "branching_fraction", "remarks")
    NAME_FIELD_NUMBER: _ClassVar[int]
    REACTION_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    BRANCHING_FRACTION_FIELD_NUMBER: _ClassVar[int]
    REMARKS_FIELD_NUMBER: _ClassVar[int]
    name: str
    reaction: str
    products: _containers.RepeatedScalarFieldContainer[str]
    branching_fraction: float
    remarks: _containers.RepeatedScalarFieldContainer[str]
    def __init__(self, name: _Optional[str] = ..., reaction: _Optional[str] = ..., products: _Optional[_Iterable[str]] = ..., branching_fraction: _Optional[float] = ..., remarks: _Optional[_Iterable[str]] = ...) -> None: ...

class GeneratedBlock(_message.Message):
    __slots__ = ("first_event", "event_count", "events", "truth")
    FIRST_EVENT_FIELD_NUMBER: _ClassVar[int]
    EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    EVENTS_FIELD_NUMBER: _ClassVar[int]
    TRUTH_FIELD_NUMBER: _ClassVar[int]
    first_event: int
    event_count: int
    events: _event_pb2.EventBlock
    truth: _truth_pb2.TruthColumns
    def __init__(self, first_event: _Optional[int] = ..., event_count: _Optional[int] = ..., events: _Optional[_Union[_event_pb2.EventBlock, _Mapping]] = ..., truth: _Optional[_Union[_truth_pb2.TruthColumns, _Mapping]] = ...) -> None: ...

class GenerationProgress(_message.Message):
    __slots__ = ("event_count",)
    EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    event_count: int
    def __init__(self, event_count: _Optional[int] = ...) -> None: ...

class GenerationSummary(_message.Message):
    __slots__ = ("event_count", "empty_count", "attempt_count", "efficiency", "effective_event_count", "overflow_count", "largest_weight", "exhausted_count", "weight_sum", "seen_event_count", "remarks")
    EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    EMPTY_COUNT_FIELD_NUMBER: _ClassVar[int]
    ATTEMPT_COUNT_FIELD_NUMBER: _ClassVar[int]
    EFFICIENCY_FIELD_NUMBER: _ClassVar[int]
    EFFECTIVE_EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    OVERFLOW_COUNT_FIELD_NUMBER: _ClassVar[int]
    LARGEST_WEIGHT_FIELD_NUMBER: _ClassVar[int]
    EXHAUSTED_COUNT_FIELD_NUMBER: _ClassVar[int]
    WEIGHT_SUM_FIELD_NUMBER: _ClassVar[int]
    SEEN_EVENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    REMARKS_FIELD_NUMBER: _ClassVar[int]
    event_count: int
    empty_count: int
    attempt_count: int
    efficiency: float
    effective_event_count: float
    overflow_count: int
    largest_weight: float
    exhausted_count: int
    weight_sum: float
    seen_event_count: int
    remarks: _containers.RepeatedScalarFieldContainer[str]
    def __init__(self, event_count: _Optional[int] = ..., empty_count: _Optional[int] = ..., attempt_count: _Optional[int] = ..., efficiency: _Optional[float] = ..., effective_event_count: _Optional[float] = ..., overflow_count: _Optional[int] = ..., largest_weight: _Optional[float] = ..., exhausted_count: _Optional[int] = ..., weight_sum: _Optional[float] = ..., seen_event_count: _Optional[int] = ..., remarks: _Optional[_Iterable[str]] = ...) -> None: ...

class MeasureBoundRequest(_message.Message):
    __slots__ = ("generation", "channel_index", "draw_count")
    GENERATION_FIELD_NUMBER: _ClassVar[int]
    CHANNEL_INDEX_FIELD_NUMBER: _ClassVar[int]
    DRAW_COUNT_FIELD_NUMBER: _ClassVar[int]
    generation: Generation
    channel_index: int
    draw_count: int
    def __init__(self, generation: _Optional[_Union[Generation, _Mapping]] = ..., channel_index: _Optional[int] = ..., draw_count: _Optional[int] = ...) -> None: ...

class MeasureBoundResponse(_message.Message):
    __slots__ = ("draw_count", "largest", "mean")
    DRAW_COUNT_FIELD_NUMBER: _ClassVar[int]
    LARGEST_FIELD_NUMBER: _ClassVar[int]
    MEAN_FIELD_NUMBER: _ClassVar[int]
    draw_count: int
    largest: float
    mean: float
    def __init__(self, draw_count: _Optional[int] = ..., largest: _Optional[float] = ..., mean: _Optional[float] = ...) -> None: ...

class CheckGenerationRequest(_message.Message):
    __slots__ = ("generation", "yaml")
    GENERATION_FIELD_NUMBER: _ClassVar[int]
    YAML_FIELD_NUMBER: _ClassVar[int]
    generation: Generation
    yaml: str
    def __init__(self, generation: _Optional[_Union[Generation, _Mapping]] = ..., yaml: _Optional[str] = ...) -> None: ...

class CheckGenerationResponse(_message.Message):
    __slots__ = ("faults", "generation", "generation_digest", "channels")
    FAULTS_FIELD_NUMBER: _ClassVar[int]
    GENERATION_FIELD_NUMBER: _ClassVar[int]
    GENERATION_DIGEST_FIELD_NUMBER: _ClassVar[int]
    CHANNELS_FIELD_NUMBER: _ClassVar[int]
    faults: _containers.RepeatedCompositeFieldContainer[_fault_pb2.FieldFault]
    generation: Generation
    generation_digest: str
    channels: _containers.RepeatedCompositeFieldContainer[GenerationOutline]
    def __init__(self, faults: _Optional[_Iterable[_Union[_fault_pb2.FieldFault, _Mapping]]] = ..., generation: _Optional[_Union[Generation, _Mapping]] = ..., generation_digest: _Optional[str] = ..., channels: _Optional[_Iterable[_Union[GenerationOutline, _Mapping]]] = ...) -> None: ...

class CheckDetectorRequest(_message.Message):
    __slots__ = ("detector", "yaml")
    DETECTOR_FIELD_NUMBER: _ClassVar[int]
    YAML_FIELD_NUMBER: _ClassVar[int]
    detector: _detector_pb2.Detector
    yaml: str
    def __init__(self, detector: _Optional[_Union[_detector_pb2.Detector, _Mapping]] = ..., yaml: _Optional[str] = ...) -> None: ...

class CheckDetectorResponse(_message.Message):
    __slots__ = ("faults", "detector")
    FAULTS_FIELD_NUMBER: _ClassVar[int]
    DETECTOR_FIELD_NUMBER: _ClassVar[int]
    faults: _containers.RepeatedCompositeFieldContainer[_fault_pb2.FieldFault]
    detector: _detector_pb2.Detector
    def __init__(self, faults: _Optional[_Iterable[_Union[_fault_pb2.FieldFault, _Mapping]]] = ..., detector: _Optional[_Union[_detector_pb2.Detector, _Mapping]] = ...) -> None: ...
