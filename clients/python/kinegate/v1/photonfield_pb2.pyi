from google.protobuf.internal import containers as _containers
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class DescribePhotonFieldRequest(_message.Message):
    __slots__ = ("black_body", "power_law", "particle", "photon_energies_gev", "distance_m")
    BLACK_BODY_FIELD_NUMBER: _ClassVar[int]
    POWER_LAW_FIELD_NUMBER: _ClassVar[int]
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    PHOTON_ENERGIES_GEV_FIELD_NUMBER: _ClassVar[int]
    DISTANCE_M_FIELD_NUMBER: _ClassVar[int]
    black_body: BlackBodyField
    power_law: PowerLawField
    particle: str
    photon_energies_gev: _containers.RepeatedScalarFieldContainer[float]
    distance_m: float
    def __init__(self, black_body: _Optional[_Union[BlackBodyField, _Mapping]] = ..., power_law: _Optional[_Union[PowerLawField, _Mapping]] = ..., particle: _Optional[str] = ..., photon_energies_gev: _Optional[_Iterable[float]] = ..., distance_m: _Optional[float] = ...) -> None: ...

class BlackBodyField(_message.Message):
    __slots__ = ("temperature_k", "redshift")
    TEMPERATURE_K_FIELD_NUMBER: _ClassVar[int]
    REDSHIFT_FIELD_NUMBER: _ClassVar[int]
    temperature_k: float
    redshift: float
    def __init__(self, temperature_k: _Optional[float] = ..., redshift: _Optional[float] = ...) -> None: ...

class PowerLawField(_message.Message):
    __slots__ = ("index", "min_gev", "max_gev", "density_per_m3")
    INDEX_FIELD_NUMBER: _ClassVar[int]
    MIN_GEV_FIELD_NUMBER: _ClassVar[int]
    MAX_GEV_FIELD_NUMBER: _ClassVar[int]
    DENSITY_PER_M3_FIELD_NUMBER: _ClassVar[int]
    index: float
    min_gev: float
    max_gev: float
    density_per_m3: float
    def __init__(self, index: _Optional[float] = ..., min_gev: _Optional[float] = ..., max_gev: _Optional[float] = ..., density_per_m3: _Optional[float] = ...) -> None: ...

class DescribePhotonFieldResponse(_message.Message):
    __slots__ = ("particle", "mass_gev", "density_per_m3", "temperature_k", "absorptions", "strongest", "threshold_gev", "omissions", "table_version")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    DENSITY_PER_M3_FIELD_NUMBER: _ClassVar[int]
    TEMPERATURE_K_FIELD_NUMBER: _ClassVar[int]
    ABSORPTIONS_FIELD_NUMBER: _ClassVar[int]
    STRONGEST_FIELD_NUMBER: _ClassVar[int]
    THRESHOLD_GEV_FIELD_NUMBER: _ClassVar[int]
    OMISSIONS_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    particle: str
    mass_gev: float
    density_per_m3: float
    temperature_k: float
    absorptions: _containers.RepeatedCompositeFieldContainer[PhotonAbsorption]
    strongest: StrongestAbsorption
    threshold_gev: float
    omissions: _containers.RepeatedScalarFieldContainer[str]
    table_version: str
    def __init__(self, particle: _Optional[str] = ..., mass_gev: _Optional[float] = ..., density_per_m3: _Optional[float] = ..., temperature_k: _Optional[float] = ..., absorptions: _Optional[_Iterable[_Union[PhotonAbsorption, _Mapping]]] = ..., strongest: _Optional[_Union[StrongestAbsorption, _Mapping]] = ..., threshold_gev: _Optional[float] = ..., omissions: _Optional[_Iterable[str]] = ..., table_version: _Optional[str] = ...) -> None: ...

class PhotonAbsorption(_message.Message):
    __slots__ = ("photon_energy_gev", "absorption_per_m", "mean_free_path_m", "mean_free_path_kpc", "optical_depth")
    PHOTON_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    ABSORPTION_PER_M_FIELD_NUMBER: _ClassVar[int]
    MEAN_FREE_PATH_M_FIELD_NUMBER: _ClassVar[int]
    MEAN_FREE_PATH_KPC_FIELD_NUMBER: _ClassVar[int]
    OPTICAL_DEPTH_FIELD_NUMBER: _ClassVar[int]
    photon_energy_gev: float
    absorption_per_m: float
    mean_free_path_m: float
    mean_free_path_kpc: float
    optical_depth: float
    def __init__(self, photon_energy_gev: _Optional[float] = ..., absorption_per_m: _Optional[float] = ..., mean_free_path_m: _Optional[float] = ..., mean_free_path_kpc: _Optional[float] = ..., optical_depth: _Optional[float] = ...) -> None: ...

class StrongestAbsorption(_message.Message):
    __slots__ = ("photon_energy_gev", "mean_free_path_m", "mean_free_path_kpc")
    PHOTON_ENERGY_GEV_FIELD_NUMBER: _ClassVar[int]
    MEAN_FREE_PATH_M_FIELD_NUMBER: _ClassVar[int]
    MEAN_FREE_PATH_KPC_FIELD_NUMBER: _ClassVar[int]
    photon_energy_gev: float
    mean_free_path_m: float
    mean_free_path_kpc: float
    def __init__(self, photon_energy_gev: _Optional[float] = ..., mean_free_path_m: _Optional[float] = ..., mean_free_path_kpc: _Optional[float] = ...) -> None: ...
