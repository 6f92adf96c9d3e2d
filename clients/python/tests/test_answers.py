"""Answers against values that stand in published tables, and how they are shown."""

from __future__ import annotations

import asyncio
import inspect
import pickle

import numpy as np
import pytest

import kinegate
from kinegate import units
from kinegate.v1 import photon_pb2, reaction_pb2


def test_threshold_of_strangeness(client: kinegate.Client) -> None:
    # ((mK + mL)^2 - mp^2) / (2 mp) with the masses of the Review of Particle Physics.
    k, lam, p = 0.493677, 1.115683, 0.93827209
    answer = client.reaction("gamma p -> K+ Lambda", beam="1.2 GeV")
    assert answer.threshold == pytest.approx(((k + lam) ** 2 - p * p) / (2 * p), rel=3e-5)
    assert answer.is_open
    assert answer.excess_energy is not None
    assert answer.excess_energy > 0
    assert set(answer.products) == {"K+", "Lambda"}


def test_closed_channel_is_an_answer(client: kinegate.Client) -> None:
    answer = client.reaction("gamma gamma -> e+ e-", beam="1 MeV", beam2="0.2 MeV")
    assert answer.state == "CLOSED"
    assert not answer.products
    assert answer.missing_beam_energy == pytest.approx(0.510998951e-3**2 / 0.2e-3 - 1e-3, rel=1e-6)


def test_without_energy_only_the_threshold(client: kinegate.Client) -> None:
    answer = client.reaction("gamma p -> p eta")
    assert answer.state == "UNSPECIFIED"
    assert answer.sqrt_s is None
    assert answer.threshold is not None


def test_optical_photon_by_wavelength(client: kinegate.Client) -> None:
    answer = client.reaction("gamma gamma -> e+ e-", beam="532 nm", beam2="150 GeV")
    assert answer.sqrt_s == pytest.approx(2 * (1239.841984332e-9 / 532 * 150) ** 0.5, rel=1e-9)


def test_four_momenta_and_structured_form(client: kinegate.Client) -> None:
    text = client.reaction("gamma p -> p pi0", beam=0.5)
    p = client.particle("p").mass
    structured = client.reaction(
        text.message.structured_reaction,
        four_momenta=((0.5, 0.0, 0.0, 0.5), (p, 0.0, 0.0, 0.0)),
    )
    assert structured.sqrt_s == pytest.approx(text.sqrt_s, rel=1e-14)


def test_momentum_transfers_by_name(client: kinegate.Client) -> None:
    answer = client.reaction(
        "gamma p -> p pi+ pi-", beam=2.0, momentum_transfers=[("beam", ["pi+", "pi-"])]
    )
    (forward, backward) = answer.momentum_transfers["t(beam, pi+ pi-)"]
    assert forward > backward


def test_pages_are_joined(client: kinegate.Client) -> None:
    every = client.open_channels("gamma p", beam="2.4 GeV", max_bodies=4, most=5000)
    some = client.open_channels("gamma p", beam="2.4 GeV", max_bodies=4, most=7)
    assert len(every) == every.total_count > 100
    assert [c.name for c in some] == [c.name for c in every][:7]
    names = [c.name for c in client.open_channels("gamma p", beam="1.2 GeV", max_bodies=3)]
    assert len(set(names)) == len(names)
    assert "p pi0" in names or "pi0 p" in names


def test_list_of_particles_is_whole(client: kinegate.Client) -> None:
    table = client.particles()
    assert {"p", "K+", "gamma", "Lambda"} <= {p.name for p in table}
    assert len({p.number for p in table}) == len(table)


def test_two_body_columns(client: kinegate.Client) -> None:
    angles = np.linspace(0, 40, 9) * units.DEGREE
    solution = client.two_body(
        "gamma p -> K+ Lambda", beam=1.2, product="Lambda", given={"angle": angles}
    )
    high = solution.column("laboratory_momentum_gev", product=1)
    low = solution.column("laboratory_momentum_gev", product=1, branch=1)
    beyond = angles > solution.largest_angles["Lambda"]
    assert beyond.any()
    assert np.isnan(high[beyond]).all()
    assert (high[~beyond] >= low[~beyond]).all()
    with pytest.raises(ValueError, match="unknown member"):
        solution.column("speed")
    with pytest.raises(ValueError, match="unknown variable"):
        client.two_body("gamma p -> K+ Lambda", beam=1.2, given={"speed": [1.0]})


def test_motion_in_every_form(client: kinegate.Client) -> None:
    proton = client.motion("p", momentum="1 GeV", distances=["3 m"], refractive_indices=[1.33, 1.6])
    assert proton.beta == pytest.approx(1 / (1 + 0.93827209**2) ** 0.5, rel=1e-8)
    assert proton.flight_times[0] == pytest.approx(3 / 299792458 / proton.beta, rel=1e-12)
    angle = proton.cherenkov_angles[1]
    assert proton.cherenkov_angles[0] is None
    assert angle is not None
    assert np.cos(angle) == pytest.approx(1 / (1.6 * proton.beta), rel=1e-12)
    with pytest.raises(ValueError, match="say the same thing"):
        client.motion("p", momentum=1.0, kinetic=2.0)


def test_decay_in_flight(client: kinegate.Client) -> None:
    answer = client.decay("pi0 -> gamma gamma", momentum="1 GeV")
    assert answer.opening_angle is not None
    mass = client.particle("pi0").mass
    energy = (1 + mass * mass) ** 0.5
    assert answer.opening_angle.low == pytest.approx(2 * np.arcsin(mass / energy), rel=1e-12)


def test_dalitz_boundary_closes(client: kinegate.Client) -> None:
    answer = client.dalitz("gamma p -> p pi+ pi-", at_sqrt_s=["1.5 GeV", "2.0 GeV"])
    total = sum(m * m for m in answer.message.masses_gev)
    for boundary in answer.boundaries:
        s = boundary.first_second + boundary.second_third + boundary.first_third
        assert np.allclose(s, boundary.sqrt_s**2 + total, rtol=1e-12)
        assert not boundary.first_second.flags.writeable


def test_photon_field_is_most_opaque_in_between(client: kinegate.Client) -> None:
    energies = np.geomspace(1e5, 1e9, 41)
    field = client.photon_field(energies, temperature=2.725)
    # The microwave background absorbs best near 2 PeV: a few PeV in any review of the field.
    assert 1e6 < energies[field.mean_free_path.argmin()] < 4e6
    assert (field.energies == energies).all()
    with pytest.raises(ValueError, match="one of them"):
        client.photon_field([1.0])


def test_bare_stub_beside_the_client(client: kinegate.Client) -> None:
    request = reaction_pb2.DescribeReactionRequest(reaction="gamma p -> p eta")
    reply = client.stubs.reaction.DescribeReaction(request, timeout=10)
    answer = client.reaction("gamma p -> p eta")
    assert reply.threshold.total_energy_gev == answer.threshold
    process = photon_pb2.DescribePhotonProcessRequest(
        compton=photon_pb2.ComptonScattering(particle="e-", photon_energy_gev=0.000661657)
    )
    reply_photon = client.stubs.photon.DescribePhotonProcess(process, timeout=10)
    # The edge of the 661.657 keV line of caesium 137: 477.3 keV in handbooks.
    assert reply_photon.compton.at_rest.edge_gev == pytest.approx(477.3e-6, rel=2e-4)


# Invented.
DETECTOR = {
    "name": "hall",
    "calorimeter": {
        "theta": {"min_rad": 0.1, "max_rad": 2.6},
        "stochastic": 0.028,
        "constant": 0.012,
        "noise_gev": 0.002,
        "theta_sigma_rad": 0.01,
        "phi_sigma_rad": 0.01,
        "threshold_gev": 0.03,
    },
    "tracker": {
        "theta": {"min_rad": 0.17, "max_rad": 2.4},
        "constant": 0.015,
        "per_gev": 0.01,
        "angle_sigma_rad": 0.003,
    },
    "recoil": {"theta": {"min_rad": 0.17, "max_rad": 2.4}, "angle_sigma_rad": 0.008},
    "tagger": {"edges_gev": [1.2, 1.3, 1.4], "time_sigma_ns": 1.5},
    "vertex": {"sigma_x_m": 0.001, "sigma_y_m": 0.001, "sigma_z_m": 0.002},
}


@pytest.mark.parametrize(
    "ask",
    [
        lambda c: c.reaction("gamma p -> K+ Lambda", beam=1.2),
        lambda c: c.open_channels("gamma p", beam=1.2),
        lambda c: c.two_body("gamma p -> p pi0", beam=1.2, given={"rest_cosine": [0.0]}),
        lambda c: c.motion("gamma", wavelength="532 nm"),
        lambda c: c.decay("Lambda -> p pi-", momentum=1.0),
        lambda c: c.dalitz("omega -> pi+ pi- pi0"),
        lambda c: c.particle("Lambda"),
        lambda c: c.particles("eta"),
        lambda c: c.photon_field([1e6], temperature=2.7, distance=1e20),
        lambda c: c.info(),
        lambda c: c.pair_creation("e-", photon="1 TeV", photon2="1 eV", cosines=[0.0]),
        lambda c: c.pair_creation("mu-", sqrt_s="1 MeV", max_cosine=0.9),
        lambda c: c.field_pair("e-", target="p"),
        lambda c: c.annihilation("e-", kinetic=0, cosines=[0.5]),
        lambda c: c.compton("e-", photon="1 MeV", angles=["90 deg"]),
        lambda c: c.backscatter("e-", beam="3 GeV", light="532 nm", collimators=["1 mrad"]),
        lambda c: c.check_detector(DETECTOR),
        lambda c: c.check_detector({"tracker": {}}),
        lambda c: c.bound({"channels": [{"reaction": "omega -> pi0 gamma"}]}, draws=100),
    ],
)
def test_answers_show_themselves(client: kinegate.Client, ask: object) -> None:
    answer = ask(client)  # type: ignore[operator]
    html = answer._repr_html_()
    assert html.startswith("<table>")
    assert html.count("<table>") == html.count("</table>")
    assert len(str(answer).splitlines()) >= 2
    again = pickle.loads(pickle.dumps(answer))  # noqa: S301  # made one line before
    assert again.message == answer.message


def test_html_is_escaped() -> None:
    assert "<b>x" not in kinegate.Table("t", ("a",), [["<b>x"]])._repr_html_()


def test_asyncio_asks_the_same(server: kinegate.LocalServer, client: kinegate.Client) -> None:
    async def ask() -> tuple[float | None, int, str]:
        async with kinegate.connect_async(server.address) as aio:
            reaction, channels, info = await asyncio.gather(
                aio.reaction("gamma p -> K+ Lambda", beam="1.2 GeV"),
                aio.open_channels("gamma p", beam="2.4 GeV", max_bodies=4, most=5000),
                aio.info(),
            )
            return reaction.threshold, len(channels), info.caution

    threshold, count, caution = asyncio.run(ask())
    assert threshold == client.reaction("gamma p -> K+ Lambda", beam="1.2 GeV").threshold
    assert count > 100
    assert "never" in caution


def test_both_clients_ask_every_question() -> None:
    for name in kinegate.questions.__all__:
        for kind in (kinegate.Client, kinegate.AsyncClient):
            method = getattr(kind, name)
            assert method.__doc__
            assert next(iter(inspect.signature(method).parameters)) == "self"


def test_every_public_name_has_an_example_that_is_run() -> None:
    # pytest runs the examples of every docstring; see pyproject.toml.
    named = [(name, getattr(kinegate, name)) for name in kinegate.__all__]
    for module in (kinegate.plot, kinegate.questions, kinegate.units):
        named += [(name, getattr(module, name)) for name in module.__all__]
    for name, thing in named:
        own = inspect.isclass(thing) or inspect.isfunction(thing)
        if own and thing.__module__.startswith("kinegate"):
            assert ">>>" in (thing.__doc__ or ""), name


def test_every_public_name_is_documented() -> None:
    for name in kinegate.__all__:
        thing = getattr(kinegate, name)
        if inspect.isclass(thing):
            assert thing.__doc__, name
            for member, value in vars(thing).items():
                if not member.startswith("_") and (callable(value) or isinstance(value, property)):
                    assert inspect.getdoc(value), f"{name}.{member}"
        elif callable(thing):
            assert inspect.getdoc(thing), name
