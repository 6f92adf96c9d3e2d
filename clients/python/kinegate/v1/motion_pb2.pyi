from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class ConvertMotionRequest(_message.Message):
    __slots__ = ("particle", "mass_gev", "charge_thirds", "total_energy_gev", "kinetic_energy_gev", "momentum_gev", "beta", "gamma", "rigidity_gv", "wavelength_m", "frequency_hz", "distances_m", "refractive_indices")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    CHARGE_THIRDS_FIELD_NUMBER: _ClassVar[int]
    TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    BETA_FIELD_NUMBER: _ClassVar[int]
    GAMMA_FIELD_NUMBER: _ClassVar[int]
    RIGIDITY_GV_FIELD_NUMBER: _ClassVar[int]
    WAVELENGTH_M_FIELD_NUMBER: _ClassVar[int]
    FREQUENCY_HZ_FIELD_NUMBER: _ClassVar[int]
    DISTANCES_M_FIELD_NUMBER: _ClassVar[int]
    REFRACTIVE_INDICES_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    charge_thirds: int
    total_energy_gev: float
    kinetic_energy_gev: float
    momentum_gev: float
    beta: float
    gamma: float
    rigidity_gv: float
    wavelength_m: float
    frequency_hz: float
    distances_m: _containers.RepeatedScalarFieldContainer[float]
    refractive_indices: _containers.RepeatedScalarFieldContainer[float]
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., charge_thirds: _Optional[int] = ..., total_energy_gev: _Optional[float] = ..., kinetic_energy_gev: _Optional[float] = ..., momentum_gev: _Optional[float] = ..., beta: _Optional[float] = ..., gamma: _Optional[float] = ..., rigidity_gv: _Optional[float] = ..., wavelength_m: _Optional[float] = ..., frequency_hz: _Optional[float] = ..., distances_m: _Optional[_Iterable[float]] = ..., refractive_indices: _Optional[_Iterable[float]] = ...) -> None: ...

class ConvertMotionResponse(_message.Message):
    __slots__ = ("particle", "mass_gev", "charge_thirds", "total_energy_gev", "kinetic_energy_gev", "momentum_gev", "beta", "one_minus_beta", "gamma", "gamma_minus_one", "beta_gamma", "rigidity_gv", "wavelength_m", "frequency_hz", "flights", "cherenkov_lights", "table_version")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    CHARGE_THIRDS_FIELD_NUMBER: _ClassVar[int]
    TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    BETA_FIELD_NUMBER: _ClassVar[int]
    ONE_MINUS_BETA_FIELD_NUMBER: _ClassVar[int]
    GAMMA_FIELD_NUMBER: _ClassVar[int]
    GAMMA_MINUS_ONE_FIELD_NUMBER: _ClassVar[int]
    BETA_GAMMA_FIELD_NUMBER: _ClassVar[int]
    RIGIDITY_GV_FIELD_NUMBER: _ClassVar[int]
    WAVELENGTH_M_FIELD_NUMBER: _ClassVar[int]
    FREQUENCY_HZ_FIELD_NUMBER: _ClassVar[int]
    FLIGHTS_FIELD_NUMBER: _ClassVar[int]
    CHERENKOV_LIGHTS_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    charge_thirds: int
    total_energy_gev: float
    kinetic_energy_gev: float
    momentum_gev: float
    beta: float
    one_minus_beta: float
    gamma: float
    gamma_minus_one: float
    beta_gamma: float
    rigidity_gv: float
    wavelength_m: float
    frequency_hz: float
    flights: _containers.RepeatedCompositeFieldContainer[FlightTime]
    cherenkov_lights: _containers.RepeatedCompositeFieldContainer[CherenkovLight]
    table_version: str
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., charge_thirds: _Optional[int] = ..., total_energy_gev: _Optional[float] = ..., kinetic_energy_gev: _Optional[float] = ..., momentum_gev: _Optional[float] = ..., beta: _Optional[float] = ..., one_minus_beta: _Optional[float] = ..., gamma: _Optional[float] = ..., gamma_minus_one: _Optional[float] = ..., beta_gamma: _Optional[float] = ..., rigidity_gv: _Optional[float] = ..., wavelength_m: _Optional[float] = ..., frequency_hz: _Optional[float] = ..., flights: _Optional[_Iterable[_Union[FlightTime, _Mapping]]] = ..., cherenkov_lights: _Optional[_Iterable[_Union[CherenkovLight, _Mapping]]] = ..., table_version: _Optional[str] = ...) -> None: ...

class FlightTime(_message.Message):
    __slots__ = ("distance_m", "time_s", "delay_after_light_s")
    DISTANCE_M_FIELD_NUMBER: _ClassVar[int]
    TIME_S_FIELD_NUMBER: _ClassVar[int]
    DELAY_AFTER_LIGHT_S_FIELD_NUMBER: _ClassVar[int]
    distance_m: float
    time_s: float
    delay_after_light_s: float
    def __init__(self, distance_m: _Optional[float] = ..., time_s: _Optional[float] = ..., delay_after_light_s: _Optional[float] = ...) -> None: ...

class CherenkovLight(_message.Message):
    __slots__ = ("refractive_index", "radiates", "angle_rad", "threshold_beta", "threshold_momentum_gev", "threshold_total_energy_gev", "threshold_kinetic_energy_gev")
    REFRACTIVE_INDEX_FIELD_NUMBER: _ClassVar[int]
    RADIATES_FIELD_NUMBER: _ClassVar[int]
    ANGLE_RAD_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_BETA_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_MOMENTUM_GEV_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_TOTAL_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_KINETIC_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    refractive_index: float
    radiates: bool
    angle_rad: float
    threshold_beta: float
    threshold_momentum_gev: float
    threshold_total_energy_gev: float
    threshold_kinetic_energy_gev: float
    def __init__(self, refractive_index: _Optional[float] = ..., radiates: bool = ..., angle_rad: _Optional[float] = ..., threshold_beta: _Optional[float] = ..., threshold_momentum_gev: _Optional[float] = ..., threshold_total_energy_gev: _Optional[float] = ..., threshold_kinetic_energy_gev: _Optional[float] = ...) -> None: ...
