from kinegate.v1 import kinematics_pb2 as _kinematics_pb2
from kinegate.v1 import photonfield_pb2 as _photonfield_pb2
from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class DescribePhotonProcessRequest(_message.Message):
    __slots__ = ("pair_creation", "compton", "backscatter", "annihilation", "field_pair")
    PAIR_CREATION_FIELD_NUMBER: _ClassVar[int]
    COMPTON_FIELD_NUMBER: _ClassVar[int]
    BACKSCATTER_FIELD_NUMBER: _ClassVar[int]
    ANNIHILATION_FIELD_NUMBER: _ClassVar[int]
    FIELD_PAIR_FIELD_NUMBER: _ClassVar[int]
    pair_creation: PairCreation
    compton: ComptonScattering
    backscatter: LaserBackscatter
    annihilation: PairAnnihilation
    field_pair: FieldPairCreation
    def __init__(self, pair_creation: _Optional[_Union[PairCreation, _Mapping]] = ..., compton: _Optional[_Union[ComptonScattering, _Mapping]] = ..., backscatter: _Optional[_Union[LaserBackscatter, _Mapping]] = ..., annihilation: _Optional[_Union[PairAnnihilation, _Mapping]] = ..., field_pair: _Optional[_Union[FieldPairCreation, _Mapping]] = ...) -> None: ...

class DescribePhotonProcessResponse(_message.Message):
    __slots__ = ("pair_creation", "compton", "backscatter", "annihilation", "field_pair", "omissions", "table_version")
    PAIR_CREATION_FIELD_NUMBER: _ClassVar[int]
    COMPTON_FIELD_NUMBER: _ClassVar[int]
    BACKSCATTER_FIELD_NUMBER: _ClassVar[int]
    ANNIHILATION_FIELD_NUMBER: _ClassVar[int]
    FIELD_PAIR_FIELD_NUMBER: _ClassVar[int]
    OMISSIONS_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    pair_creation: PairCreationAnswer
    compton: ComptonAnswer
    backscatter: BackscatterAnswer
    annihilation: AnnihilationAnswer
    field_pair: FieldPairAnswer
    omissions: _containers.RepeatedScalarFieldContainer[str]
    table_version: str
    def __init__(self, pair_creation: _Optional[_Union[PairCreationAnswer, _Mapping]] = ..., compton: _Optional[_Union[ComptonAnswer, _Mapping]] = ..., backscatter: _Optional[_Union[BackscatterAnswer, _Mapping]] = ..., annihilation: _Optional[_Union[AnnihilationAnswer, _Mapping]] = ..., field_pair: _Optional[_Union[FieldPairAnswer, _Mapping]] = ..., omissions: _Optional[_Iterable[str]] = ..., table_version: _Optional[str] = ...) -> None: ...

class PairCreation(_message.Message):
    __slots__ = ("particle", "two_photons", "sqrt_s_gev", "relative_excess", "cosines", "max_cosine", "totals_at_sqrt_s_gev")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    TWO_PHOTONS_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    RELATIVE_EXCESS_FIELD_NUMBER: _ClassVar[int]
    COSINES_FIELD_NUMBER: _ClassVar[int]
    MAX_COSINE_FIELD_NUMBER: _ClassVar[int]
    TOTALS_AT_SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    particle: str
    two_photons: TwoPhotons
    sqrt_s_gev: float
    relative_excess: float
    cosines: _containers.RepeatedScalarFieldContainer[float]
    max_cosine: float
    totals_at_sqrt_s_gev: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, particle: _Optional[str] = ..., two_photons: _Optional[_Union[TwoPhotons, _Mapping]] = ..., sqrt_s_gev: _Optional[float] = ..., relative_excess: _Optional[float] = ..., cosines: _Optional[_Iterable[float]] = ..., max_cosine: _Optional[float] = ..., totals_at_sqrt_s_gev: _Optional[_Iterable[float]] = ...) -> None: ...

class TwoPhotons(_message.Message):
    __slots__ = ("first_energy_gev", "second_energy_gev", "angle_between_photons_rad")
    FIRST_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    SECOND_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    ANGLE_BETWEEN_PHOTONS_RAD_FIELD_NUMBER: _ClassVar[int]
    first_energy_gev: float
    second_energy_gev: float
    angle_between_photons_rad: float
    def __init__(self, first_energy_gev: _Optional[float] = ..., second_energy_gev: _Optional[float] = ..., angle_between_photons_rad: _Optional[float] = ...) -> None: ...

class PairCreationAnswer(_message.Message):
    __slots__ = ("particle", "mass_gev", "threshold_sqrt_s_gev", "first_energy_threshold_gev", "sqrt_s_gev", "relative_excess", "beta", "total", "within_max_cosine", "differentials", "mean_cosine_squared", "peak", "totals")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    FIRST_ENERGY_THRESHOLD_GEV_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    RELATIVE_EXCESS_FIELD_NUMBER: _ClassVar[int]
    BETA_FIELD_NUMBER: _ClassVar[int]
    TOTAL_FIELD_NUMBER: _ClassVar[int]
    WITHIN_MAX_COSINE_FIELD_NUMBER: _ClassVar[int]
    DIFFERENTIALS_FIELD_NUMBER: _ClassVar[int]
    MEAN_COSINE_SQUARED_FIELD_NUMBER: _ClassVar[int]
    PEAK_FIELD_NUMBER: _ClassVar[int]
    TOTALS_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    threshold_sqrt_s_gev: float
    first_energy_threshold_gev: float
    sqrt_s_gev: float
    relative_excess: float
    beta: float
    total: HelicityCrossSection
    within_max_cosine: HelicityCrossSection
    differentials: _containers.RepeatedCompositeFieldContainer[HelicityAngle]
    mean_cosine_squared: HelicityMean
    peak: PairCreationPeak
    totals: _containers.RepeatedCompositeFieldContainer[HelicityCrossSection]
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., threshold_sqrt_s_gev: _Optional[float] = ..., first_energy_threshold_gev: _Optional[float] = ..., sqrt_s_gev: _Optional[float] = ..., relative_excess: _Optional[float] = ..., beta: _Optional[float] = ..., total: _Optional[_Union[HelicityCrossSection, _Mapping]] = ..., within_max_cosine: _Optional[_Union[HelicityCrossSection, _Mapping]] = ..., differentials: _Optional[_Iterable[_Union[HelicityAngle, _Mapping]]] = ..., mean_cosine_squared: _Optional[_Union[HelicityMean, _Mapping]] = ..., peak: _Optional[_Union[PairCreationPeak, _Mapping]] = ..., totals: _Optional[_Iterable[_Union[HelicityCrossSection, _Mapping]]] = ...) -> None: ...

class HelicityCrossSection(_message.Message):
    __slots__ = ("unpolarised_barn", "equal_barn", "opposite_barn")
    UNPOLARISED_BARN_FIELD_NUMBER: _ClassVar[int]
    EQUAL_BARN_FIELD_NUMBER: _ClassVar[int]
    OPPOSITE_BARN_FIELD_NUMBER: _ClassVar[int]
    unpolarised_barn: float
    equal_barn: float
    opposite_barn: float
    def __init__(self, unpolarised_barn: _Optional[float] = ..., equal_barn: _Optional[float] = ..., opposite_barn: _Optional[float] = ...) -> None: ...

class HelicityAngle(_message.Message):
    __slots__ = ("cosine", "unpolarised_barn_per_sr", "equal_barn_per_sr", "opposite_barn_per_sr")
    COSINE_FIELD_NUMBER: _ClassVar[int]
    UNPOLARISED_BARN_PER_SR_FIELD_NUMBER: _ClassVar[int]
    EQUAL_BARN_PER_SR_FIELD_NUMBER: _ClassVar[int]
    OPPOSITE_BARN_PER_SR_FIELD_NUMBER: _ClassVar[int]
    cosine: float
    unpolarised_barn_per_sr: float
    equal_barn_per_sr: float
    opposite_barn_per_sr: float
    def __init__(self, cosine: _Optional[float] = ..., unpolarised_barn_per_sr: _Optional[float] = ..., equal_barn_per_sr: _Optional[float] = ..., opposite_barn_per_sr: _Optional[float] = ...) -> None: ...

class HelicityMean(_message.Message):
    __slots__ = ("unpolarised", "equal", "opposite")
    UNPOLARISED_FIELD_NUMBER: _ClassVar[int]
    EQUAL_FIELD_NUMBER: _ClassVar[int]
    OPPOSITE_FIELD_NUMBER: _ClassVar[int]
    unpolarised: float
    equal: float
    opposite: float
    def __init__(self, unpolarised: _Optional[float] = ..., equal: _Optional[float] = ..., opposite: _Optional[float] = ...) -> None: ...

class PairCreationPeak(_message.Message):
    __slots__ = ("sqrt_s_gev", "beta", "unpolarised_barn")
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    BETA_FIELD_NUMBER: _ClassVar[int]
    UNPOLARISED_BARN_FIELD_NUMBER: _ClassVar[int]
    sqrt_s_gev: float
    beta: float
    unpolarised_barn: float
    def __init__(self, sqrt_s_gev: _Optional[float] = ..., beta: _Optional[float] = ..., unpolarised_barn: _Optional[float] = ...) -> None: ...

class ComptonScattering(_message.Message):
    __slots__ = ("particle", "photon_energy_gev", "flight", "angle_between_beams_rad", "directions", "totals_at_photon_energies_gev")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    PHOTON_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    FLIGHT_FIELD_NUMBER: _ClassVar[int]
    ANGLE_BETWEEN_BEAMS_RAD_FIELD_NUMBER: _ClassVar[int]
    DIRECTIONS_FIELD_NUMBER: _ClassVar[int]
    TOTALS_AT_PHOTON_ENERGIES_GEV_FIELD_NUMBER: _ClassVar[int]
    particle: str
    photon_energy_gev: float
    flight: _kinematics_pb2.BeamMotion
    angle_between_beams_rad: float
    directions: _containers.RepeatedCompositeFieldContainer[ScatteringDirection]
    totals_at_photon_energies_gev: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, particle: _Optional[str] = ..., photon_energy_gev: _Optional[float] = ..., flight: _Optional[_Union[_kinematics_pb2.BeamMotion, _Mapping]] = ..., angle_between_beams_rad: _Optional[float] = ..., directions: _Optional[_Iterable[_Union[ScatteringDirection, _Mapping]]] = ..., totals_at_photon_energies_gev: _Optional[_Iterable[float]] = ...) -> None: ...

class ScatteringDirection(_message.Message):
    __slots__ = ("theta_rad", "phi_rad")
    THETA_RAD_FIELD_NUMBER: _ClassVar[int]
    PHI_RAD_FIELD_NUMBER: _ClassVar[int]
    theta_rad: float
    phi_rad: float
    def __init__(self, theta_rad: _Optional[float] = ..., phi_rad: _Optional[float] = ...) -> None: ...

class ComptonAnswer(_message.Message):
    __slots__ = ("particle", "mass_gev", "rest_energy_ratio", "total_barn", "thomson_barn", "at_rest", "points", "totals_barn")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    REST_ENERGY_RATIO_FIELD_NUMBER: _ClassVar[int]
    TOTAL_BARN_FIELD_NUMBER: _ClassVar[int]
    THOMSON_BARN_FIELD_NUMBER: _ClassVar[int]
    AT_REST_FIELD_NUMBER: _ClassVar[int]
    POINTS_FIELD_NUMBER: _ClassVar[int]
    TOTALS_BARN_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    rest_energy_ratio: float
    total_barn: float
    thomson_barn: float
    at_rest: ComptonAtRest
    points: _containers.RepeatedCompositeFieldContainer[ComptonPoint]
    totals_barn: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., rest_energy_ratio: _Optional[float] = ..., total_barn: _Optional[float] = ..., thomson_barn: _Optional[float] = ..., at_rest: _Optional[_Union[ComptonAtRest, _Mapping]] = ..., points: _Optional[_Iterable[_Union[ComptonPoint, _Mapping]]] = ..., totals_barn: _Optional[_Iterable[float]] = ...) -> None: ...

class ComptonAtRest(_message.Message):
    __slots__ = ("edge_gev", "backscattered_gev", "mean_scattered_gev", "mean_recoil_gev", "energy_transfer_barn")
    EDGE_GEV_FIELD_NUMBER: _ClassVar[int]
    BACKSCATTERED_GEV_FIELD_NUMBER: _ClassVar[int]
    MEAN_SCATTERED_GEV_FIELD_NUMBER: _ClassVar[int]
    MEAN_RECOIL_GEV_FIELD_NUMBER: _ClassVar[int]
    ENERGY_TRANSFER_BARN_FIELD_NUMBER: _ClassVar[int]
    edge_gev: float
    backscattered_gev: float
    mean_scattered_gev: float
    mean_recoil_gev: float
    energy_transfer_barn: float
    def __init__(self, edge_gev: _Optional[float] = ..., backscattered_gev: _Optional[float] = ..., mean_scattered_gev: _Optional[float] = ..., mean_recoil_gev: _Optional[float] = ..., energy_transfer_barn: _Optional[float] = ...) -> None: ...

class ComptonPoint(_message.Message):
    __slots__ = ("direction", "photon_energy_gev", "differential_barn_per_sr", "recoil_kinetic_energy_gev", "recoil_angle_rad", "rest_frame_cosine")
    DIRECTION_FIELD_NUMBER: _ClassVar[int]
    PHOTON_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    DIFFERENTIAL_BARN_PER_SR_FIELD_NUMBER: _ClassVar[int]
    RECOIL_KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    RECOIL_ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    REST_FRAME_COSINE_FIELD_NUMBER: _ClassVar[int]
    direction: ScatteringDirection
    photon_energy_gev: float
    differential_barn_per_sr: float
    recoil_kinetic_energy_gev: float
    recoil_angle_rad: float
    rest_frame_cosine: float
    def __init__(self, direction: _Optional[_Union[ScatteringDirection, _Mapping]] = ..., photon_energy_gev: _Optional[float] = ..., differential_barn_per_sr: _Optional[float] = ..., recoil_kinetic_energy_gev: _Optional[float] = ..., recoil_angle_rad: _Optional[float] = ..., rest_frame_cosine: _Optional[float] = ...) -> None: ...

class LaserBackscatter(_message.Message):
    __slots__ = ("particle", "beam", "light_energy_gev", "angle_between_beams_rad", "polarisation", "energies_gev", "even_energy_count", "angles_rad", "windows")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    BEAM_FIELD_NUMBER: _ClassVar[int]
    LIGHT_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    ANGLE_BETWEEN_BEAMS_RAD_FIELD_NUMBER: _ClassVar[int]
    POLARISATION_FIELD_NUMBER: _ClassVar[int]
    ENERGIES_GEV_FIELD_NUMBER: _ClassVar[int]
    EVEN_ENERGY_COUNT_FIELD_NUMBER: _ClassVar[int]
    ANGLES_RAD_FIELD_NUMBER: _ClassVar[int]
    WINDOWS_FIELD_NUMBER: _ClassVar[int]
    particle: str
    beam: _kinematics_pb2.BeamMotion
    light_energy_gev: float
    angle_between_beams_rad: float
    polarisation: BackscatterPolarisation
    energies_gev: _containers.RepeatedScalarFieldContainer[float]
    even_energy_count: int
    angles_rad: _containers.RepeatedScalarFieldContainer[float]
    windows: _containers.RepeatedCompositeFieldContainer[_kinematics_pb2.EnergyRange]
    def __init__(self, particle: _Optional[str] = ..., beam: _Optional[_Union[_kinematics_pb2.BeamMotion, _Mapping]] = ..., light_energy_gev: _Optional[float] = ..., angle_between_beams_rad: _Optional[float] = ..., polarisation: _Optional[_Union[BackscatterPolarisation, _Mapping]] = ..., energies_gev: _Optional[_Iterable[float]] = ..., even_energy_count: _Optional[int] = ..., angles_rad: _Optional[_Iterable[float]] = ..., windows: _Optional[_Iterable[_Union[_kinematics_pb2.EnergyRange, _Mapping]]] = ...) -> None: ...

class BackscatterPolarisation(_message.Message):
    __slots__ = ("circular_degree", "linear_degree", "beam_degree")
    CIRCULAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    LINEAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    BEAM_DEGREE_FIELD_NUMBER: _ClassVar[int]
    circular_degree: float
    linear_degree: float
    beam_degree: float
    def __init__(self, circular_degree: _Optional[float] = ..., linear_degree: _Optional[float] = ..., beam_degree: _Optional[float] = ...) -> None: ...

class BackscatterAnswer(_message.Message):
    __slots__ = ("particle", "mass_gev", "beam_energy_gev", "relative_excess", "min_gev", "max_gev", "mean_gev", "total_barn", "points", "angles", "window_fractions")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    BEAM_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    RELATIVE_EXCESS_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    MEAN_GEV_FIELD_NUMBER: _ClassVar[int]
    TOTAL_BARN_FIELD_NUMBER: _ClassVar[int]
    POINTS_FIELD_NUMBER: _ClassVar[int]
    ANGLES_FIELD_NUMBER: _ClassVar[int]
    WINDOW_FRACTIONS_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    beam_energy_gev: float
    relative_excess: float
    min_gev: float
    max_gev: float
    mean_gev: float
    total_barn: float
    points: _containers.RepeatedCompositeFieldContainer[BackscatterPoint]
    angles: _containers.RepeatedCompositeFieldContainer[BackscatterAngle]
    window_fractions: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., beam_energy_gev: _Optional[float] = ..., relative_excess: _Optional[float] = ..., min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ..., mean_gev: _Optional[float] = ..., total_barn: _Optional[float] = ..., points: _Optional[_Iterable[_Union[BackscatterPoint, _Mapping]]] = ..., angles: _Optional[_Iterable[_Union[BackscatterAngle, _Mapping]]] = ..., window_fractions: _Optional[_Iterable[float]] = ...) -> None: ...

class BackscatterPoint(_message.Message):
    __slots__ = ("energy_gev", "angle_rad", "differential_barn_per_gev", "circular_degree", "linear_degree")
    ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    DIFFERENTIAL_BARN_PER_GEV_FIELD_NUMBER: _ClassVar[int]
    CIRCULAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    LINEAR_DEGREE_FIELD_NUMBER: _ClassVar[int]
    energy_gev: float
    angle_rad: float
    differential_barn_per_gev: float
    circular_degree: float
    linear_degree: float
    def __init__(self, energy_gev: _Optional[float] = ..., angle_rad: _Optional[float] = ..., differential_barn_per_gev: _Optional[float] = ..., circular_degree: _Optional[float] = ..., linear_degree: _Optional[float] = ...) -> None: ...

class BackscatterAngle(_message.Message):
    __slots__ = ("angle_rad", "energy_gev", "fraction_within")
    ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    FRACTION_WITHIN_FIELD_NUMBER: _ClassVar[int]
    angle_rad: float
    energy_gev: float
    fraction_within: float
    def __init__(self, angle_rad: _Optional[float] = ..., energy_gev: _Optional[float] = ..., fraction_within: _Optional[float] = ...) -> None: ...

class PairAnnihilation(_message.Message):
    __slots__ = ("particle", "sqrt_s_gev", "kinetic_energy_on_rest_gev", "cosines", "max_cosine", "totals_at_sqrt_s_gev")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    KINETIC_ENERGY_ON_REST_GEV_FIELD_NUMBER: _ClassVar[int]
    COSINES_FIELD_NUMBER: _ClassVar[int]
    MAX_COSINE_FIELD_NUMBER: _ClassVar[int]
    TOTALS_AT_SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    particle: str
    sqrt_s_gev: float
    kinetic_energy_on_rest_gev: float
    cosines: _containers.RepeatedScalarFieldContainer[float]
    max_cosine: float
    totals_at_sqrt_s_gev: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, particle: _Optional[str] = ..., sqrt_s_gev: _Optional[float] = ..., kinetic_energy_on_rest_gev: _Optional[float] = ..., cosines: _Optional[_Iterable[float]] = ..., max_cosine: _Optional[float] = ..., totals_at_sqrt_s_gev: _Optional[_Iterable[float]] = ...) -> None: ...

class AnnihilationAnswer(_message.Message):
    __slots__ = ("particle", "mass_gev", "sqrt_s_gev", "beta", "total_barn", "within_barn", "massless_within_barn", "differentials", "totals")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    BETA_FIELD_NUMBER: _ClassVar[int]
    TOTAL_BARN_FIELD_NUMBER: _ClassVar[int]
    WITHIN_BARN_FIELD_NUMBER: _ClassVar[int]
    MASSLESS_WITHIN_BARN_FIELD_NUMBER: _ClassVar[int]
    DIFFERENTIALS_FIELD_NUMBER: _ClassVar[int]
    TOTALS_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    sqrt_s_gev: float
    beta: float
    total_barn: float
    within_barn: float
    massless_within_barn: float
    differentials: _containers.RepeatedCompositeFieldContainer[AnnihilationAngle]
    totals: _containers.RepeatedCompositeFieldContainer[AnnihilationTotal]
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., sqrt_s_gev: _Optional[float] = ..., beta: _Optional[float] = ..., total_barn: _Optional[float] = ..., within_barn: _Optional[float] = ..., massless_within_barn: _Optional[float] = ..., differentials: _Optional[_Iterable[_Union[AnnihilationAngle, _Mapping]]] = ..., totals: _Optional[_Iterable[_Union[AnnihilationTotal, _Mapping]]] = ...) -> None: ...

class AnnihilationAngle(_message.Message):
    __slots__ = ("cosine", "differential_barn_per_sr")
    COSINE_FIELD_NUMBER: _ClassVar[int]
    DIFFERENTIAL_BARN_PER_SR_FIELD_NUMBER: _ClassVar[int]
    cosine: float
    differential_barn_per_sr: float
    def __init__(self, cosine: _Optional[float] = ..., differential_barn_per_sr: _Optional[float] = ...) -> None: ...

class AnnihilationTotal(_message.Message):
    __slots__ = ("sqrt_s_gev", "total_barn")
    SQRT_S_GEV_FIELD_NUMBER: _ClassVar[int]
    TOTAL_BARN_FIELD_NUMBER: _ClassVar[int]
    sqrt_s_gev: float
    total_barn: float
    def __init__(self, sqrt_s_gev: _Optional[float] = ..., total_barn: _Optional[float] = ...) -> None: ...

class FieldPairCreation(_message.Message):
    __slots__ = ("particle", "target_particle", "target_mass_gev")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    TARGET_PARTICLE_FIELD_NUMBER: _ClassVar[int]
    TARGET_MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    particle: str
    target_particle: str
    target_mass_gev: float
    def __init__(self, particle: _Optional[str] = ..., target_particle: _Optional[str] = ..., target_mass_gev: _Optional[float] = ...) -> None: ...

class FieldPairAnswer(_message.Message):
    __slots__ = ("particle", "mass_gev", "target_mass_gev", "photon_energy_threshold_gev")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    TARGET_MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    PHOTON_ENERGY_THRESHOLD_GEV_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    target_mass_gev: float
    photon_energy_threshold_gev: float
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., target_mass_gev: _Optional[float] = ..., photon_energy_threshold_gev: _Optional[float] = ...) -> None: ...
