"""Typical mistakes: each is refused by a KinegateError that names the argument and the value."""

from __future__ import annotations

import asyncio
import pickle
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

import kinegate

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    # The client is of no type, or mypy would refuse the mistakes before they are made.
    Act = Callable[[Any], Any]

events_of: Any = kinegate.Events.of
REACTION = "gamma p -> p eta"
DECAY = {"channels": [{"reaction": "pi0 -> gamma gamma"}]}
PAIRS = {"name": "pairs", "hypotheses": [{"name": "pair", "reaction": "-> mu+ mu-"}]}
COLUMNS = {"momentum_gev": [[0.5]], "theta_rad": [[0.3]], "phi_rad": [[0.1]]}

# What is done, the argument that is named, and what the sentence says.
MISTAKES: dict[str, tuple[Act, str, str]] = {
    "list for a number": (lambda c: c.reaction(REACTION, beam=[1, 2]), "beam", "[1, 2] is not"),
    "no quantity": (lambda c: c.reaction(REACTION, beam={}), "beam", "{} is not"),
    "unknown unit": (lambda c: c.reaction(REACTION, beam="1.2 Gev"), "beam", "unknown unit 'Gev'"),
    "no unit": (lambda c: c.reaction(REACTION, beam="1.2"), "beam", "'1.2' is not a number with"),
    "other dimension": (lambda c: c.decay("pi0 -> gamma gamma", momentum="2 m"), "momentum", "2 m"),
    "unknown argument": (lambda c: c.reaction(REACTION, beams=1), "beams", "known: beam, "),
    "missing argument": (lambda c: c.reaction(), "", "missing a required argument: 'text'"),
    "number for a text": (lambda c: c.reaction(5), "text", "5 is not a text"),
    "second of many": (
        lambda c: c.photon_field(["1 TeV", "2 foo"], temperature=2.7),
        "energies[1]",
        "unknown unit 'foo'",
    ),
    "one for many": (lambda c: c.photon_field(1.0, temperature=2.7), "energies", "1.0 is not a"),
    "text for a number": (
        lambda c: c.photon_field([1.0], temperature="2.7 K"),
        "temperature",
        "'2.7 K' is not a number",
    ),
    "short tuple": (
        lambda c: c.photon_field([1.0], power_law=(1, 2)),
        "power_law",
        "(1, 2) is not 4 values",
    ),
    "text for a count": (
        lambda c: c.open_channels("gamma p", max_bodies="x"),
        "max_bodies",
        "'x' is not an integer",
    ),
    "huge count": (
        lambda c: c.open_channels("gamma p", max_bodies=2**70),
        "max_bodies",
        str(2**70),
    ),
    "one text for many": (
        lambda c: c.open_channels("gamma p", products="p"),
        "products",
        "'p' is not a list",
    ),
    "unknown variable": (
        lambda c: c.two_body(REACTION, beam=1.2, given={"theta": [1]}),
        "given",
        "known: angle, ",
    ),
    "wrong value of a variable": (
        lambda c: c.two_body(REACTION, beam=1.2, given={"angle": ["5 degrees"]}),
        "given['angle'][0]",
        "unknown unit 'degrees'",
    ),
    "unknown initial particle": (
        lambda c: c.reaction(REACTION, momentum_transfers=[("b", ["p"])]),
        "momentum_transfers",
        "'b' is neither",
    ),
    "short four-momentum": (
        lambda c: c.reaction(REACTION, four_momenta=[(1, 2), (3, 4)]),
        "four_momenta",
        "(1, 2) is not (E, px, py, pz)",
    ),
    "no such file": (lambda c: c.selection("nowhere.yaml"), "selection", "cannot read"),
    "no selection": (lambda c: c.selection(5), "selection", "5 is not a YAML file"),
    "no generation": (lambda c: c.generate(5, 1), "generation", "5 is not"),
    "negative count": (lambda c: c.generate(DECAY, -1), "count", "-1 is not at least 0"),
    "text for events": (lambda c: c.generate(DECAY, "many"), "count", "'many' is not an integer"),
    "mapping for events": (lambda c: list(c.judge({"a": 1}, PAIRS)), "events", "{'a': 1} is not"),
    "number for events": (lambda c: c.judge_block(5, PAIRS), "events", "5 is not kinegate.Events"),
    "blocks that are none": (lambda c: list(c.judge(["a"], PAIRS)), "events", "'a' is not"),
    "unknown setting": (lambda c: c.judge([], PAIRS, latency=1), "", "latency"),
    "text for a setting": (
        lambda c: c.judge([], PAIRS, patience="long"),
        "patience",
        "'long' is not a number",
    ),
    "text column": (
        lambda _: events_of(**{**COLUMNS, "phi_rad": [["east"]]}, classes=[1]),
        "phi_rad",
        "[['east']] is not a column",
    ),
    "ragged column": (
        lambda _: events_of(**{**COLUMNS, "phi_rad": [[1], [2, 3]]}, classes=[1]),
        "phi_rad",
        "[[1], [2, 3]] is not a column",
    ),
    "column of another shape": (
        lambda _: events_of(**{**COLUMNS, "phi_rad": [[1, 2]]}, classes=[1]),
        "phi_rad",
        "shape (1, 2), (1, 1) is needed",
    ),
    "class that is none": (
        lambda _: events_of(**COLUMNS, classes=[-1]),
        "classes",
        "[-1] is not a column of uint8",
    ),
    "broken id": (
        lambda _: events_of(**COLUMNS, classes=[1], event_ids=[0.5]),
        "event_ids",
        "[0.5] is not a column of int64",
    ),
    "unknown column": (
        lambda _: events_of(**COLUMNS, classes=[1])["pt"],
        "name",
        "no column 'pt'",
    ),
    "no file of events": (lambda _: kinegate.Events.read_csv("no.csv"), "path", "'no.csv'"),
    "unknown member": (
        lambda _: events_of(**COLUMNS, classes=[1], ids=[4]),
        "ids",
        "there are beam, classes, cluster_position, covariance, event_ids, ",
    ),
    "mask of text": (
        lambda _: events_of(**COLUMNS, classes=[1], measured_mask="x"),
        "measured_mask",
        "'x' is not a column of uint8",
    ),
    "covariance too small": (
        lambda _: events_of(**COLUMNS, classes=[1], covariance=[[1, 2]]),
        "covariance",
        "(objects, 6) is needed",
    ),
    "part that is none": (
        lambda _: events_of(**COLUMNS, classes=[1], beam=5),
        "beam",
        "5 is not BeamCandidates",
    ),
    "samples that are none": (lambda _: kinegate.Events.concatenate([1]), "samples", "1 is not"),  # type: ignore[list-item]
    "text for a patience": (lambda c: c.generate(DECAY, 1, patience="x"), "patience", "'x' is not"),
    "no file of authorities": (
        lambda _: kinegate.connect("a:1", tls=True, ca_file="no.pem"),
        "ca_file",
        "cannot read 'no.pem'",
    ),
    "text for a timeout": (lambda c: c.with_timeout("5 s"), "seconds", "'5 s' is not a number"),
}


@pytest.mark.parametrize("mistake", MISTAKES)
def test_mistake_is_named(client: kinegate.Client, mistake: str) -> None:
    act, field, says = MISTAKES[mistake]
    with pytest.raises(kinegate.KinegateError) as caught:
        act(client)
    error = caught.value
    assert isinstance(error, kinegate.ArgumentError)
    assert isinstance(error, ValueError)
    assert error.field == field or not field
    assert says in str(error)
    assert str(error).startswith(field)
    again = pickle.loads(pickle.dumps(error))  # noqa: S301  # made one line before
    assert (str(again), again.field) == (str(error), error.field)


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("", "no column px1"),
        ("px1,py1,pz1,Q1\n1,2,3\n", "line 2: 3 fields, 4 are needed"),
        ("px1,py1,pz1,Q1\n1,2,x,1\n", "columns pz1, ...: could not convert"),
        ("px1,py1,pz1,Q1\n1,2,3,0\n", "charge 0 is none of 1, -1"),
        ("px1,py1,pz1,Q1,PID1\n1,2,3,1,15\n", "particle number 15 is none of 11, 13"),
        ("Event,px1,py1,pz1,Q1\na,1,2,3,1\n", "column Event"),
    ],
)
def test_faulty_file_of_events(tmp_path: Path, text: str, says: str) -> None:
    path = tmp_path / "events.csv"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(kinegate.ArgumentError) as caught:
        kinegate.Events.read_csv(path)
    assert says in str(caught.value)
    assert str(path) in str(caught.value)


def test_asynchronous_client_refuses_alike(server: kinegate.LocalServer) -> None:
    async def act() -> None:
        async with kinegate.connect_async(server.address) as client:
            with pytest.raises(kinegate.ArgumentError, match=r"^beam: unknown unit"):
                await client.reaction(REACTION, beam="1.2 Gev")
            with pytest.raises(kinegate.ArgumentError, match=r"^events: 5 is not"):
                client.judge(5, PAIRS)  # type: ignore[arg-type]  # the mistake
            with pytest.raises(kinegate.ArgumentError, match="latency"):
                await anext(client.judge([], PAIRS, latency=1))  # type: ignore[call-arg]  # likewise

    asyncio.run(act())


def test_what_fits_is_taken(client: Any) -> None:
    assert client.reaction(REACTION, beam=np.float32(1.25)).is_open
    assert client.reaction(REACTION, beam=np.int64(2)).is_open
    field = client.photon_field((e for e in ("1 TeV", 2e3)), temperature=np.float64(2.7))
    assert len(field.energies) == 2
    solved = client.two_body(REACTION, beam=1.25, given={"rest_cosine": np.linspace(-1, 1, 5)})
    assert len(solved.column("t_gev2")) == 5
