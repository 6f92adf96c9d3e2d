from kinegate.v1 import fit_pb2 as _fit_pb2
from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from kinegate.v1 import verdict_pb2 as _verdict_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class ExplainVerdictResponse(_message.Message):
    __slots__ = ("selection_digest", "event_id", "status", "gate", "hypotheses")
    SELECTION_DIGEST_FIELD_NUMBER: _ClassVar[int]
    EVENT_ID_FIELD_NUMBER: _ClassVar[int]
    STATUS_FIELD_NUMBER: _ClassVar[int]
    GATE_FIELD_NUMBER: _ClassVar[int]
    HYPOTHESES_FIELD_NUMBER: _ClassVar[int]
    selection_digest: str
    event_id: int
    status: _verdict_pb2.EventStatus
    gate: bool
    hypotheses: _containers.RepeatedCompositeFieldContainer[HypothesisExplanation]
    def __init__(self, selection_digest: _Optional[str] = ..., event_id: _Optional[int] = ..., status: _Optional[_Union[_verdict_pb2.EventStatus, str]] = ..., gate: bool = ..., hypotheses: _Optional[_Iterable[_Union[HypothesisExplanation, _Mapping]]] = ...) -> None: ...

class HypothesisExplanation(_message.Message):
    __slots__ = ("name", "reaction", "products", "accepted", "kept", "obstacle", "assignment_count", "assignments", "degrees_of_freedom", "budget_used")
    NAME_FIELD_NUMBER: _ClassVar[int]
    REACTION_FIELD_NUMBER: _ClassVar[int]
    PRODUCTS_FIELD_NUMBER: _ClassVar[int]
    ACCEPTED_FIELD_NUMBER: _ClassVar[int]
    KEPT_FIELD_NUMBER: _ClassVar[int]
    OBSTACLE_FIELD_NUMBER: _ClassVar[int]
    ASSIGNMENT_COUNT_FIELD_NUMBER: _ClassVar[int]
    ASSIGNMENTS_FIELD_NUMBER: _ClassVar[int]
    DEGREES_OF_FREEDOM_FIELD_NUMBER: _ClassVar[int]
    BUDGET_USED_FIELD_NUMBER: _ClassVar[int]
    name: str
    reaction: str
    products: _containers.RepeatedScalarFieldContainer[str]
    accepted: bool
    kept: bool
    obstacle: str
    assignment_count: int
    assignments: _containers.RepeatedCompositeFieldContainer[AssignmentExplanation]
    degrees_of_freedom: int
    budget_used: bool
    def __init__(self, name: _Optional[str] = ..., reaction: _Optional[str] = ..., products: _Optional[_Iterable[str]] = ..., accepted: bool = ..., kept: bool = ..., obstacle: _Optional[str] = ..., assignment_count: _Optional[int] = ..., assignments: _Optional[_Iterable[_Union[AssignmentExplanation, _Mapping]]] = ..., degrees_of_freedom: _Optional[int] = ..., budget_used: bool = ...) -> None: ...

class AssignmentExplanation(_message.Message):
    __slots__ = ("beam_row", "weight", "objects", "complete", "passed", "best", "rank_distance", "windows", "fit")
    BEAM_ROW_FIELD_NUMBER: _ClassVar[int]
    WEIGHT_FIELD_NUMBER: _ClassVar[int]
    OBJECTS_FIELD_NUMBER: _ClassVar[int]
    COMPLETE_FIELD_NUMBER: _ClassVar[int]
    PASSED_FIELD_NUMBER: _ClassVar[int]
    BEST_FIELD_NUMBER: _ClassVar[int]
    RANK_DISTANCE_FIELD_NUMBER: _ClassVar[int]
    WINDOWS_FIELD_NUMBER: _ClassVar[int]
    FIT_FIELD_NUMBER: _ClassVar[int]
    beam_row: int
    weight: float
    objects: _containers.RepeatedScalarFieldContainer[int]
    complete: bool
    passed: bool
    best: bool
    rank_distance: float
    windows: _containers.RepeatedCompositeFieldContainer[WindowExplanation]
    fit: FitExplanation
    def __init__(self, beam_row: _Optional[int] = ..., weight: _Optional[float] = ..., objects: _Optional[_Iterable[int]] = ..., complete: bool = ..., passed: bool = ..., best: bool = ..., rank_distance: _Optional[float] = ..., windows: _Optional[_Iterable[_Union[WindowExplanation, _Mapping]]] = ..., fit: _Optional[_Union[FitExplanation, _Mapping]] = ...) -> None: ...

class WindowExplanation(_message.Message):
    __slots__ = ("path", "label", "unit", "value", "uncertainty", "above_min", "below_max", "inside")
    PATH_FIELD_NUMBER: _ClassVar[int]
    LABEL_FIELD_NUMBER: _ClassVar[int]
    UNIT_FIELD_NUMBER: _ClassVar[int]
    VALUE_FIELD_NUMBER: _ClassVar[int]
    UNCERTAINTY_FIELD_NUMBER: _ClassVar[int]
    ABOVE_MIN_FIELD_NUMBER: _ClassVar[int]
    BELOW_MAX_FIELD_NUMBER: _ClassVar[int]
    INSIDE_FIELD_NUMBER: _ClassVar[int]
    path: str
    label: str
    unit: str
    value: float
    uncertainty: float
    above_min: float
    below_max: float
    inside: bool
    def __init__(self, path: _Optional[str] = ..., label: _Optional[str] = ..., unit: _Optional[str] = ..., value: _Optional[float] = ..., uncertainty: _Optional[float] = ..., above_min: _Optional[float] = ..., below_max: _Optional[float] = ..., inside: bool = ...) -> None: ...

class FitExplanation(_message.Message):
    __slots__ = ("status", "chi_square", "probability", "iteration_count", "constraints", "particles", "vertex_z_m", "vertex_z_sigma_m")
    STATUS_FIELD_NUMBER: _ClassVar[int]
    CHI_SQUARE_FIELD_NUMBER: _ClassVar[int]
    PROBABILITY_FIELD_NUMBER: _ClassVar[int]
    ITERATION_COUNT_FIELD_NUMBER: _ClassVar[int]
    CONSTRAINTS_FIELD_NUMBER: _ClassVar[int]
    PARTICLES_FIELD_NUMBER: _ClassVar[int]
    VERTEX_Z_M_FIELD_NUMBER: _ClassVar[int]
    VERTEX_Z_SIGMA_M_FIELD_NUMBER: _ClassVar[int]
    status: _fit_pb2.FitStatus
    chi_square: float
    probability: float
    iteration_count: int
    constraints: _containers.RepeatedCompositeFieldContainer[ConstraintExplanation]
    particles: _containers.RepeatedCompositeFieldContainer[FittedParticle]
    vertex_z_m: float
    vertex_z_sigma_m: float
    def __init__(self, status: _Optional[_Union[_fit_pb2.FitStatus, str]] = ..., chi_square: _Optional[float] = ..., probability: _Optional[float] = ..., iteration_count: _Optional[int] = ..., constraints: _Optional[_Iterable[_Union[ConstraintExplanation, _Mapping]]] = ..., particles: _Optional[_Iterable[_Union[FittedParticle, _Mapping]]] = ..., vertex_z_m: _Optional[float] = ..., vertex_z_sigma_m: _Optional[float] = ...) -> None: ...

class ConstraintExplanation(_message.Message):
    __slots__ = ("name", "unit", "before", "after")
    NAME_FIELD_NUMBER: _ClassVar[int]
    UNIT_FIELD_NUMBER: _ClassVar[int]
    BEFORE_FIELD_NUMBER: _ClassVar[int]
    AFTER_FIELD_NUMBER: _ClassVar[int]
    name: str
    unit: str
    before: float
    after: float
    def __init__(self, name: _Optional[str] = ..., unit: _Optional[str] = ..., before: _Optional[float] = ..., after: _Optional[float] = ...) -> None: ...

class FittedParticle(_message.Message):
    __slots__ = ("name", "object_index", "measured", "fitted", "parameters")
    NAME_FIELD_NUMBER: _ClassVar[int]
    OBJECT_INDEX_FIELD_NUMBER: _ClassVar[int]
    MEASURED_FIELD_NUMBER: _ClassVar[int]
    FITTED_FIELD_NUMBER: _ClassVar[int]
    PARAMETERS_FIELD_NUMBER: _ClassVar[int]
    name: str
    object_index: int
    measured: _kinematics_pb2.FourMomentum
    fitted: _kinematics_pb2.FourMomentum
    parameters: _containers.RepeatedCompositeFieldContainer[FittedParameter]
    def __init__(self, name: _Optional[str] = ..., object_index: _Optional[int] = ..., measured: _Optional[_Union[_kinematics_pb2.FourMomentum, _Mapping]] = ..., fitted: _Optional[_Union[_kinematics_pb2.FourMomentum, _Mapping]] = ..., parameters: _Optional[_Iterable[_Union[FittedParameter, _Mapping]]] = ...) -> None: ...

class FittedParameter(_message.Message):
    __slots__ = ("name", "unit", "measured", "uncertainty", "fitted", "pull")
    NAME_FIELD_NUMBER: _ClassVar[int]
    UNIT_FIELD_NUMBER: _ClassVar[int]
    MEASURED_FIELD_NUMBER: _ClassVar[int]
    UNCERTAINTY_FIELD_NUMBER: _ClassVar[int]
    FITTED_FIELD_NUMBER: _ClassVar[int]
    PULL_FIELD_NUMBER: _ClassVar[int]
    name: str
    unit: str
    measured: float
    uncertainty: float
    fitted: float
    pull: float
    def __init__(self, name: _Optional[str] = ..., unit: _Optional[str] = ..., measured: _Optional[float] = ..., uncertainty: _Optional[float] = ..., fitted: _Optional[float] = ..., pull: _Optional[float] = ...) -> None: ...
