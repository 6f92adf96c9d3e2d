from google.protobuf.internal import containers as _containers
from google.protobuf.internal import enum_type_wrapper as _enum_type_wrapper
from google.protobuf import descriptor as _descriptor
from google.protobuf import message as _message
from collections.abc import Iterable as _Iterable, Mapping as _Mapping
from typing import ClassVar as _ClassVar, Optional as _Optional, Union as _Union

DESCRIPTOR: _descriptor.FileDescriptor

class ParticleOrigin(int, metaclass=_enum_type_wrapper.EnumTypeWrapper):
    __slots__ = ()
    PARTICLE_ORIGIN_UNSPECIFIED: _ClassVar[ParticleOrigin]
    PARTICLE_ORIGIN_TABLE: _ClassVar[ParticleOrigin]
    PARTICLE_ORIGIN_ADDED: _ClassVar[ParticleOrigin]
    PARTICLE_ORIGIN_OVERRIDDEN: _ClassVar[ParticleOrigin]
PARTICLE_ORIGIN_UNSPECIFIED: ParticleOrigin
PARTICLE_ORIGIN_TABLE: ParticleOrigin
PARTICLE_ORIGIN_ADDED: ParticleOrigin
PARTICLE_ORIGIN_OVERRIDDEN: ParticleOrigin

class GetParticleRequest(_message.Message):
    __slots__ = ("name", "particle_number")
    NAME_FIELD_NUMBER: _ClassVar[int]
    PARTICLE_NUMBER_FIELD_NUMBER: _ClassVar[int]
    name: str
    particle_number: int
    def __init__(self, name: _Optional[str] = ..., particle_number: _Optional[int] = ...) -> None: ...

class GetParticleResponse(_message.Message):
    __slots__ = ("particle", "table_version")
    PARTICLE_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    particle: Particle
    table_version: str
    def __init__(self, particle: _Optional[_Union[Particle, _Mapping]] = ..., table_version: _Optional[str] = ...) -> None: ...

class ListParticlesRequest(_message.Message):
    __slots__ = ("page_size", "page_token", "name_contains")
    PAGE_SIZE_FIELD_NUMBER: _ClassVar[int]
    PAGE_TOKEN_FIELD_NUMBER: _ClassVar[int]
    NAME_CONTAINS_FIELD_NUMBER: _ClassVar[int]
    page_size: int
    page_token: str
    name_contains: str
    def __init__(self, page_size: _Optional[int] = ..., page_token: _Optional[str] = ..., name_contains: _Optional[str] = ...) -> None: ...

class ListParticlesResponse(_message.Message):
    __slots__ = ("particles", "next_page_token", "table_version")
    PARTICLES_FIELD_NUMBER: _ClassVar[int]
    NEXT_PAGE_TOKEN_FIELD_NUMBER: _ClassVar[int]
    TABLE_VERSION_FIELD_NUMBER: _ClassVar[int]
    particles: _containers.RepeatedCompositeFieldContainer[Particle]
    next_page_token: str
    table_version: str
    def __init__(self, particles: _Optional[_Iterable[_Union[Particle, _Mapping]]] = ..., next_page_token: _Optional[str] = ..., table_version: _Optional[str] = ...) -> None: ...

class Particle(_message.Message):
    __slots__ = ("particle_number", "name", "aliases", "description", "mass_gev", "mass_uncertainty_gev", "width_gev", "width_uncertainty_gev", "mean_life_s", "mean_life_uncertainty_s", "stable", "charge_thirds", "spin_doubled", "parity", "c_parity", "baryon_number_thirds", "electron_number", "muon_number", "tau_number", "strangeness", "charm", "bottomness", "topness", "antiparticle_number", "antiparticle_name", "source", "origin", "not_breit_wigner")
    PARTICLE_NUMBER_FIELD_NUMBER: _ClassVar[int]
    NAME_FIELD_NUMBER: _ClassVar[int]
    ALIASES_FIELD_NUMBER: _ClassVar[int]
    DESCRIPTION_FIELD_NUMBER: _ClassVar[int]
    MASS_GEV_FIELD_NUMBER: _ClassVar[int]
    MASS_UNCERTAINTY_GEV_FIELD_NUMBER: _ClassVar[int]
    WIDTH_GEV_FIELD_NUMBER: _ClassVar[int]
    WIDTH_UNCERTAINTY_GEV_FIELD_NUMBER: _ClassVar[int]
    MEAN_LIFE_S_FIELD_NUMBER: _ClassVar[int]
    MEAN_LIFE_UNCERTAINTY_S_FIELD_NUMBER: _ClassVar[int]
    STABLE_FIELD_NUMBER: _ClassVar[int]
    CHARGE_THIRDS_FIELD_NUMBER: _ClassVar[int]
    SPIN_DOUBLED_FIELD_NUMBER: _ClassVar[int]
    PARITY_FIELD_NUMBER: _ClassVar[int]
    C_PARITY_FIELD_NUMBER: _ClassVar[int]
    BARYON_NUMBER_THIRDS_FIELD_NUMBER: _ClassVar[int]
    ELECTRON_NUMBER_FIELD_NUMBER: _ClassVar[int]
    MUON_NUMBER_FIELD_NUMBER: _ClassVar[int]
    TAU_NUMBER_FIELD_NUMBER: _ClassVar[int]
    STRANGENESS_FIELD_NUMBER: _ClassVar[int]
    CHARM_FIELD_NUMBER: _ClassVar[int]
    BOTTOMNESS_FIELD_NUMBER: _ClassVar[int]
    TOPNESS_FIELD_NUMBER: _ClassVar[int]
    ANTIPARTICLE_NUMBER_FIELD_NUMBER: _ClassVar[int]
    ANTIPARTICLE_NAME_FIELD_NUMBER: _ClassVar[int]
    SOURCE_FIELD_NUMBER: _ClassVar[int]
    ORIGIN_FIELD_NUMBER: _ClassVar[int]
    NOT_BREIT_WIGNER_FIELD_NUMBER: _ClassVar[int]
    particle_number: int
    name: str
    aliases: _containers.RepeatedScalarFieldContainer[str]
    description: str
    mass_gev: float
    mass_uncertainty_gev: float
    width_gev: float
    width_uncertainty_gev: float
    mean_life_s: float
    mean_life_uncertainty_s: float
    stable: bool
    charge_thirds: int
    spin_doubled: int
    parity: int
    c_parity: int
    baryon_number_thirds: int
    electron_number: int
    muon_number: int
    tau_number: int
    strangeness: int
    charm: int
    bottomness: int
    topness: int
    antiparticle_number: int
    antiparticle_name: str
    source: str
    origin: ParticleOrigin
    not_breit_wigner: bool
    def __init__(self, particle_number: _Optional[int] = ..., name: _Optional[str] = ..., aliases: _Optional[_Iterable[str]] = ..., description: _Optional[str] = ..., mass_gev: _Optional[float] = ..., mass_uncertainty_gev: _Optional[float] = ..., width_gev: _Optional[float] = ..., width_uncertainty_gev: _Optional[float] = ..., mean_life_s: _Optional[float] = ..., mean_life_uncertainty_s: _Optional[float] = ..., stable: bool = ..., charge_thirds: _Optional[int] = ..., spin_doubled: _Optional[int] = ..., parity: _Optional[int] = ..., c_parity: _Optional[int] = ..., baryon_number_thirds: _Optional[int] = ..., electron_number: _Optional[int] = ..., muon_number: _Optional[int] = ..., tau_number: _Optional[int] = ..., strangeness: _Optional[int] = ..., charm: _Optional[int] = ..., bottomness: _Optional[int] = ..., topness: _Optional[int] = ..., antiparticle_number: _Optional[int] = ..., antiparticle_name: _Optional[str] = ..., source: _Optional[str] = ..., origin: _Optional[_Union[ParticleOrigin, str]] = ..., not_breit_wigner: bool = ...) -> None: ...
