"""Processes with photons: the helpers against published and high-precision values."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from kinegate.units import KEV, MEV

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    import kinegate

PI_RE2 = np.pi * 2.8179403205e-15**2 * 1e28  # barn; classical electron radius, CODATA 2022
KPC = 3.0856775814913673e19  # metre: IAU 2015

# Each case of testdata/reference/checks.json, which names the source, in the unit of its entry.
CASES: dict[str, Any] = {
    "PP-002": lambda c: c.field_pair("e-", target="p").threshold / MEV,
    "PP-006": lambda c: c.field_pair("mu-", target="p").threshold / MEV,
    "CO-002": lambda c: c.compton("e-", photon="661.657 keV").backscattered / KEV,
    "CO-010": lambda c: c.compton("e-", photon="834.848 keV").edge / KEV,
    "CO-012": lambda c: c.compton("e-", photon="2614.511 keV").edge / KEV,
    "CO-016": lambda c: (
        c.compton("e-", photon="661.657 keV", angles=["120 deg"]).scattered_energy[0] / KEV
    ),
    "KN-002": lambda c: c.compton("e-", photon="20 keV").total,
    "KN-012": lambda c: c.compton("e-", photon=1.0, totals_at=["5 MeV"]).totals[0],
    "LB-001": lambda c: c.backscatter("e-", beam="2.5 GeV", light="351.1 nm").edge / MEV,
    "LB-003": lambda c: c.backscatter("e-", beam="6 GeV", light="1.79 eV").edge / MEV,
    "BW-001": lambda c: c.pair_creation("e-", sqrt_s=c.pair_creation(excess=1).peak[0]).beta,
    "BW-003": lambda c: c.pair_creation("e-", excess=1.0).peak[1] * 10,
    "BW-007": lambda c: c.pair_creation("e-", excess=1.0).total.unpolarised / PI_RE2,
    "BW-013": lambda c: (
        c.pair_creation("e-", excess=1.0, cosines=[0.9]).differential.unpolarised[0]
        / (PI_RE2 / np.pi)
    ),
    "AN-002": lambda c: c.annihilation("e-", kinetic=0.5 * 0.51099895069e-3).total / PI_RE2,
    "AN-006": lambda c: c.annihilation("e-", sqrt_s=10.58, max_cosine=0.9).massless_within * 1e12,
    "MF-001": lambda c: c.photon_field([1.0], temperature=2.7255).strongest[1] / KPC,
    "MF-005": lambda c: c.photon_field(["1 PeV"], temperature=2.7255).mean_free_path[0] / KPC,
}


@pytest.mark.parametrize("name", CASES)
def test_helpers_give_reference_values(client: kinegate.Client, testdata: Path, name: str) -> None:
    checks = json.loads((testdata / "reference" / "checks.json").read_text(encoding="utf-8"))
    case = next(c for c in checks if c["id"] == name)
    found = CASES[name](client)
    printed, tolerance = float(case["expected"]["value"]), case["tolerance"]
    if "abs" in tolerance:
        assert abs(found - printed) <= float(tolerance["abs"])
    # The constants of the entry and of the particle table agree to about 1e-10.
    again = case["recomputed"]
    relative = max(1e-9, float(again["tolerance"].get("rel", 0)))
    assert found == pytest.approx(float(again["value"]), rel=relative)


def test_columns_have_the_shapes_asked_for(client: kinegate.Client) -> None:
    pair = client.pair_creation("e-", excess=1.0, cosines=[-0.5, 0, 0.5], totals_at=[0.001, 0.01])
    assert pair.cosines.shape == pair.differential.equal.shape == (3,)
    assert pair.differential.equal[0] == pair.differential.equal[2]
    assert pair.totals.unpolarised.tolist()[0] == 0  # below the threshold
    assert pair.within is None
    assert pair.threshold is None
    spin0 = client.pair_creation("pi+", sqrt_s=1.0)
    assert spin0.peak is None
    beam = client.backscatter(
        "e-",
        beam_kinetic="3 GeV",
        light="532 nm",
        points=11,
        energies=["100 MeV"],
        windows=[("100 MeV", "200 MeV"), (0.0, 3.0)],
        polarisation=(1, 0, 0),
    )
    assert beam.energies.shape == beam.spectrum.shape == beam.angles.shape == (12,)
    assert beam.energies[10] == beam.edge
    assert beam.window_fractions[1] == pytest.approx(1, rel=1e-12)
    # A beam without polarisation hands the light's helicity, reversed, to photons at the edge.
    assert abs(beam.circular_degree[10]) > 0.99
    flying = client.compton("e-", photon="1 eV", kinetic="1 GeV", angles=[0.0, "1 mrad"])
    assert flying.edge is None
    assert np.isnan(flying.recoil_kinetic).all()
    assert flying.scattered_energy[0] > flying.scattered_energy[1]


def test_totals_follow_from_the_angles(client: kinegate.Client) -> None:
    cosines, weights = np.polynomial.legendre.leggauss(40)
    pair = client.pair_creation("e-", excess=1.0, cosines=cosines)
    for of, total in zip(vars(pair.differential).values(), vars(pair.total).values(), strict=True):
        assert 2 * np.pi * (of * weights).sum() == pytest.approx(total, rel=1e-9)
    answer = client.compton("e-", photon="1 MeV", angles=np.arccos(cosines))
    assert 2 * np.pi * (answer.differential * weights).sum() == pytest.approx(
        answer.total, rel=1e-9
    )


@pytest.mark.parametrize(
    ("ask", "says"),
    [
        (lambda c: c.pair_creation("e-"), "one of them"),
        (lambda c: c.pair_creation("e-", photon=1.0), "belong together"),
        (lambda c: c.pair_creation("e-", sqrt_s=1.0, angle=1.0), "angle needs"),
        (lambda c: c.annihilation("e-", sqrt_s=1.0, kinetic=1.0), "one of them"),
        (lambda c: c.field_pair("e-"), "one of them"),
        (lambda c: c.backscatter("e-", light="532 nm"), "one of them"),
    ],
)
def test_contradictions_are_refused(
    client: kinegate.Client, ask: Callable[[kinegate.Client], Any], says: str
) -> None:
    with pytest.raises(ValueError, match=says):
        ask(client)
