"""Fits in verdicts, and verdicts laid open."""

from __future__ import annotations

import asyncio

import numpy as np
import pytest

import kinegate
from kinegate import Verdicts
from kinegate.selection import Hypothesis
from kinegate.v1 import explanation_pb2, fit_pb2, verdict_pb2
from tests.test_generation import GENERATION

PLAIN = Hypothesis("plain", "-> mu+ mu-", ["mu+", "mu-"], ["M"])
PAIR = ["gamma[0]", "gamma[1]"]
FITTED = Hypothesis("fitted", "pi0 -> gamma gamma", ["gamma[0]", "gamma[1]"], ["M"], 1)


def message() -> verdict_pb2.VerdictBlock:
    """Make the verdict on two events: an entry without a fit, and two with."""
    nan = float("nan")
    entries = verdict_pb2.EntryColumns(
        offsets=np.array([0, 2, 3], "<i4").tobytes(),
        hypothesis_indices=np.array([0, 1, 1], "<i2").tobytes(),
        beam_rows=np.array([-1, -1, -1], "<i2").tobytes(),
        weights=np.ones(3, "<f8").tobytes(),
        statuses=bytes([1, 1, 3]),
        assignment_counts=np.ones(3, "<i4").tobytes(),
        assignment_offsets=np.array([0, 2, 4, 6], "<i4").tobytes(),
        assignments=np.array([0, 1, 0, 1, 0, 1], "<i2").tobytes(),
        observable_offsets=np.array([0, 1, 2, 3], "<i4").tobytes(),
        observables=np.array([91.0, 0.13, 0.2], "<f8").tobytes(),
        observable_uncertainties=np.array([nan, 0.01, 0.02], "<f8").tobytes(),
        fits=verdict_pb2.FitColumns(
            statuses=bytes([0, 1, 3]),
            chi_squares=np.array([nan, 0.5, 99.0], "<f8").tobytes(),
            degrees_of_freedom=np.array([0, 1, 1], "<i2").tobytes(),
            probabilities=np.array([nan, 0.48, nan], "<f8").tobytes(),
            iteration_counts=np.array([0, 4, 50], "<i2").tobytes(),
        ),
    )
    bits = [verdict_pb2.HypothesisBits(accepted=bytes([b])) for b in (1, 1)]
    return verdict_pb2.VerdictBlock(
        event_count=2, statuses=bytes([1, 1]), gate=bytes([1]), hypotheses=bits, entries=entries
    )


def verdicts() -> Verdicts:
    return Verdicts.from_message(message(), [PLAIN, FITTED], [], np.arange(2))


@pytest.mark.parametrize("joined", [False, True])
def test_fits_of_a_hypothesis(joined: bool) -> None:  # noqa: FBT001
    found = Verdicts.concatenate([verdicts()] * 2) if joined else verdicts()
    times = 2 if joined else 1
    fits = found.fits("fitted")
    assert fits.events.tolist() == [0, 1, 2, 3][: 2 * times]
    assert fits.converged.tolist() == [True, False] * times
    assert fits.status_names.tolist() == ["CONVERGED", "INFEASIBLE"] * times
    assert fits.probability[0] == 0.48
    assert fits.iteration_counts.tolist() == [4, 50] * times
    mass = found.observable("fitted", "M")
    assert mass.uncertainties is not None
    assert mass.uncertainties.tolist() == [0.01, 0.02] * times
    with pytest.raises(kinegate.ArgumentError, match="has no fit"):
        found.fits("plain")
    assert found.entries is not None
    assert found.entries.fit_failed is not None
    assert found.entries.fit_failed.tolist() == [False, False, True] * times
    table = found.entries_to_pandas()
    assert table["degrees_of_freedom"].tolist() == [0, 1, 1] * times
    assert table["M uncertainty"][1] == 0.01


def test_verdicts_without_fits_have_no_columns_of_them() -> None:
    plain = message()
    plain.entries.ClearField("fits")
    plain.entries.ClearField("observable_uncertainties")
    found = Verdicts.from_message(plain, [PLAIN, FITTED], [], np.arange(2))
    assert found.entries is not None
    assert found.entries.chi_square is None
    assert found.observable("plain", "M").uncertainties is None
    with pytest.raises(kinegate.ArgumentError, match="has no fit"):
        found.fits("fitted")


def test_explanation_shows_itself() -> None:
    assignment = explanation_pb2.AssignmentExplanation(
        beam_row=1,
        weight=1,
        objects=[-1, 2, 0],
        complete=True,
        passed=True,
        best=True,
        windows=[
            explanation_pb2.WindowExplanation(
                path="condition.window",
                label="M(pi0)",
                unit="GeV",
                value=0.14,
                uncertainty=0.005,
                above_min=0.03,
                below_max=0.02,
                inside=True,
            )
        ],
        fit=explanation_pb2.FitExplanation(
            status=fit_pb2.FIT_STATUS_CONVERGED,
            chi_square=1.5,
            probability=0.22,
            iteration_count=3,
            constraints=[
                explanation_pb2.ConstraintExplanation(
                    name="mass of pi0", unit="GeV^2", before=0.001, after=1e-19
                )
            ],
            particles=[
                explanation_pb2.FittedParticle(
                    name="gamma[0]",
                    object_index=2,
                    parameters=[
                        explanation_pb2.FittedParameter(
                            name="momentum",
                            unit="GeV",
                            measured=0.5,
                            uncertainty=0.02,
                            fitted=0.48,
                            pull=1.2,
                        ),
                        explanation_pb2.FittedParameter(name="theta", unit="rad", fitted=0.3),
                    ],
                )
            ],
        ),
    )
    reply = explanation_pb2.ExplainVerdictResponse(
        selection_digest="ab",
        event_id=17,
        status=verdict_pb2.EVENT_STATUS_JUDGED,
        gate=True,
        hypotheses=[
            explanation_pb2.HypothesisExplanation(
                name="pion",
                reaction="pi0 -> gamma gamma",
                products=["pi0", "gamma[0]", "gamma[1]"],
                accepted=True,
                assignment_count=1,
                assignments=[assignment],
            ),
            explanation_pb2.HypothesisExplanation(name="muons", obstacle="no positive track"),
        ],
    )
    why = kinegate.Explanation(reply)
    assert (why.event_id, why.status, why.gate) == (17, "JUDGED", True)
    best = why.hypotheses["pion"].best
    assert best is not None
    assert best.objects == {"gamma[0]": 2, "gamma[1]": 0}
    assert best.beam_row == 1
    assert best.windows[0].room == 0.02
    assert best.fit_status == "CONVERGED"
    assert best.probability == 0.22
    assert [(p.particle, p.parameter, p.pull) for p in best.pulls] == [
        ("gamma[0]", "momentum", 1.2)
    ]
    assert sum(best.fitted["gamma[0]"]) == 0
    assert not why.hypotheses["muons"].assignments
    text = str(why)
    for part in ("event 17: judged, accepted", "gamma[0]=2, gamma[1]=0", "+1.20", "no positive"):
        assert part in text
    assert why._repr_html_().count("<table>") == len(why.tables())


def test_explanations_are_those_of_the_stream(client: kinegate.Client) -> None:
    sample = client.generate(GENERATION, 300).read().events
    assert sample is not None
    selection = client.selection(
        {
            "name": "photons",
            "hypotheses": [
                {
                    "name": "eta",
                    "reaction": "eta -> gamma gamma",
                    "extra_objects": {"any": {}},
                    "fit": {"masses": [{"products": PAIR, "mass_gev": 0.547862}]},
                    "condition": {"window": {"fit_probability": {"min": 0.05}}},
                    "record": [{"name": "M", "invariant_mass": {"products": PAIR}}],
                    "record_uncertainties": True,
                }
            ],
        }
    )
    assert selection.hypotheses["eta"].degrees_of_freedom == 1
    whole = Verdicts.concatenate([v for _, v in client.judge(sample, selection, entries="all")])
    fits, mass = whole.fits("eta"), whole.observable("eta", "M")
    assert fits.converged.mean() > 0.9
    assert mass.uncertainties is not None
    by_event = dict(zip(fits.events.tolist(), range(len(fits.events)), strict=True))
    compared = 0
    for event in range(0, len(sample), 7):
        why = client.explain(sample, selection, event=event).hypotheses["eta"]
        assert why.accepted == whole.accepted["eta"][event]
        if event not in by_event:
            assert why.best is None
            continue
        row, best = by_event[event], why.best
        assert best is not None
        assert best.probability == fits.probability[row]
        recorded = next(w for w in best.windows if w.path == "record[0]")
        assert recorded.value == mass.values[row]
        assert recorded.uncertainty == mass.uncertainties[row]
        compared += 1
    assert compared > 10


def test_pulls_of_both_clients(client: kinegate.Client, server: kinegate.LocalServer) -> None:
    sample = client.generate(GENERATION, 600).read().events
    assert sample is not None
    fit = {"masses": [{"products": PAIR, "mass_gev": 0.547862}]}
    hypothesis = {"name": "eta", "reaction": "eta -> gamma gamma", "fit": fit}
    selection = client.selection({"name": "etas", "hypotheses": [hypothesis]})
    pulls = client.pulls(sample, selection, "eta", most=150)
    assert len(pulls.rows) == 150
    assert len(pulls.columns) == 6
    # Energies of photons carry a mass fit; 150 pulls: spread 1 within 5/sqrt(2 * 150).
    assert abs(np.nanstd(pulls.columns["gamma[0] momentum"]) - 1) < 0.3
    assert len(kinegate.plot.pulls(pulls).get_legend().get_texts()) == 7
    assert "<table>" in pulls._repr_html_()

    async def again() -> kinegate.Pulls:
        gate = server.gate_address
        async with kinegate.connect_async(server.address, gate_address=gate) as aio:
            return await aio.pulls(sample, selection, "eta", most=150)

    other = asyncio.run(again())
    assert (other.rows == pulls.rows).all()
    for name, column in pulls.columns.items():
        assert np.array_equal(other.columns[name], column, equal_nan=True)
    with pytest.raises(kinegate.ArgumentError, match="known: eta"):
        client.pulls(sample, selection, "omega")


def test_an_event_must_be_there(client: kinegate.Client) -> None:
    events = kinegate.Events.of(
        momentum_gev=[[0.5, 0.7]],
        theta_rad=[[0.3, 1.2]],
        phi_rad=[[0.1, 3.0]],
        classes=[kinegate.PHOTON, kinegate.PHOTON],
    )
    selection = {"name": "pion", "hypotheses": [{"name": "p", "reaction": "pi0 -> gamma gamma"}]}
    with pytest.raises(kinegate.ArgumentError, match="event 1 of 1"):
        client.explain(events, selection, event=1)
