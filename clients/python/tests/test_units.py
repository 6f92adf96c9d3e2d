"""Quantities: what is read is rounded once, what is wrong is told."""

from __future__ import annotations

import math

import pytest

from kinegate import units


@pytest.mark.parametrize(
    ("text", "gev"),
    [
        ("850 MeV", 0.850),
        ("1 eV", 1e-9),
        ("1.5 TeV", 1500.0),
        ("1e3 keV", 1e-3),
        ("2.5e-1 PeV", 2.5e5),
        (".5GeV", 0.5),
        ("-3 MeV", -0.003),
    ],
)
def test_energy_is_the_nearest_double(text: str, gev: float) -> None:
    assert units.energy(text) == gev


def test_number_is_taken_as_it_is() -> None:
    assert units.energy(1.2) == 1.2
    assert units.angle(1) == 1.0


def test_angle_in_degrees() -> None:
    assert units.angle("180 deg") == math.pi


def test_photon_by_wavelength() -> None:
    # h c = 1239.841984... eV nm, exact in the SI of 2019.
    assert units.photon_energy("1239.841984332 nm") == pytest.approx(1e-9, rel=1e-12)
    assert units.photon_energy("241.798924208 THz") == pytest.approx(1e-9, rel=1e-11)


@pytest.mark.parametrize(
    ("text", "complaint"),
    [
        ("12", "not a number with a unit"),
        ("12 parsec", "unknown unit 'parsec' in '12 parsec'; units of energy are eV"),
        ("12 deg", "a quantity of angle; energy is needed"),
        ("1e999 GeV", "out of range"),
        ("", "not a number"),
    ],
)
def test_faults_are_told(text: str, complaint: str) -> None:
    with pytest.raises(ValueError, match=complaint):
        units.energy(text)
