"""The cases of testdata/rpc: calls against a server, and streams against a double of one.

The double is the Go program clients/go/conformance/double: that of the environment variable
DOUBLE_PROGRAM, else built here where there is Go.
"""

from __future__ import annotations

import base64
import json
import os
import shutil
import signal
import subprocess
import tempfile
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import grpc
import pytest
from google.protobuf import descriptor_pool, json_format, message_factory

import kinegate
from kinegate import Events, Selection, errors
from kinegate.v1 import event_pb2, generation_pb2, photon_pb2, selection_pb2

if TYPE_CHECKING:
    from collections.abc import Iterator

ROOT = Path(__file__).parent.parent.parent.parent
CASES = ROOT / "testdata" / "rpc"
TOLERANCE = 4e-15
# Their services must be known to the pool of descriptors.
KNOWN = (event_pb2, generation_pb2, photon_pb2, selection_pb2)


def cases(folder: str) -> dict[str, Any]:
    found = {p.stem: json.loads(p.read_text()) for p in sorted((CASES / folder).glob("*.json"))}
    assert found
    return found


CALLS = cases("calls")
STREAMS = {name: s for name, s in cases("streams").items() if s["against"] != "server"}


def agree(path: str, due: object, came: object, tolerance: float) -> None:
    """Compare by the rules of the README there: what is named must be there and agree."""
    if isinstance(due, dict):
        assert isinstance(came, dict), f"{path} is {came}"
        for name, value in due.items():
            agree(f"{path}.{name}", value, came.get(name), tolerance)
    elif isinstance(due, list):
        assert isinstance(came, list), f"{path} is {came}"
        assert len(came) == len(due), f"{path} has {len(came)} entries where {len(due)} are due"
        for i, value in enumerate(due):
            agree(f"{path}[{i}]", value, came[i], tolerance)
    elif isinstance(due, int | float) and not isinstance(due, bool):
        assert isinstance(came, int | float), f"{path} is {came} where {due} is due"
        assert abs(came - due) <= tolerance * abs(due), f"{path} is {came} where {due} is due"
    else:
        assert came == due, f"{path} is {came} where {due} is due"


@pytest.fixture(scope="module")
def channel() -> Iterator[grpc.Channel]:
    """A channel to a server with the selection of the cases."""
    with (
        kinegate.start_server(selection_files=[CASES / "pairs.yaml"]) as running,
        grpc.insecure_channel(running.address) as opened,
    ):
        yield opened


@pytest.mark.parametrize("name", CALLS)
def test_call(name: str, channel: grpc.Channel) -> None:
    case = CALLS[name]
    service, method = case["method"].split(".")
    pool = descriptor_pool.Default()
    described = pool.FindServiceByName(f"kinegate.v1.{service}").methods_by_name[method]
    request = message_factory.GetMessageClass(described.input_type)()
    json_format.ParseDict(case["request"], request)
    streams = described.server_streaming
    call: Any = (channel.unary_stream if streams else channel.unary_unary)(
        f"/kinegate.v1.{service}/{method}",
        request_serializer=lambda m: m.SerializeToString(),
        response_deserializer=message_factory.GetMessageClass(described.output_type).FromString,
    )
    if "failure" in case:
        with pytest.raises(grpc.RpcError) as raised:
            call(request, timeout=10)
        error = errors.from_rpc(raised.value, "")
        assert (error.code, error.reason) == (case["failure"]["code"], case["failure"]["reason"])
        if field := case["failure"].get("field"):
            assert field in [v.field for v in error.violations]
        return
    answer = call(request, timeout=10)
    replies = [
        json_format.MessageToDict(
            m, preserving_proto_field_name=True, always_print_fields_with_no_presence=True
        )
        for m in (answer if streams else [answer])
    ]
    reply = replies if streams else replies[0]
    agree("", case["reply"], reply, case.get("tolerance", TOLERANCE))


def test_calls_can_fail() -> None:
    came = {"number": "3122", "mass": 1.115683, "list": [1, 2]}
    for due in ({"mass": 1.1156831}, {"list": [1]}, {"other": 1}, {"mass": None}, {"number": 3122}):
        with pytest.raises(AssertionError):
            agree("", due, came, TOLERANCE)


@pytest.fixture(scope="module")
def double() -> str:
    """The program that plays a server."""
    if found := os.environ.get("DOUBLE_PROGRAM"):
        return found
    go = shutil.which("go")
    assert go, "neither DOUBLE_PROGRAM nor go is there"
    made = ROOT / "build" / "double"
    command = [go, "build", "-o", str(made), "./clients/go/conformance/double"]
    subprocess.run(command, cwd=ROOT, check=True)  # our own program
    return str(made)


@dataclass
class Outcome:
    """What a client made of a script."""

    held: str
    """What the double says: "held", or the rule that was broken."""
    verdicts: list[dict[str, Any]]
    outlines: list[dict[str, Any]]
    failed: bool

    def check(self, script: dict[str, Any]) -> None:
        assert self.held == "held"
        due = script["verdicts"]
        assert self.failed == script.get("fails", False), script["rule"]
        assert len(self.verdicts) == len(due), script["rule"]
        for mine, theirs in zip(self.verdicts, due, strict=True):
            agree(script["rule"], theirs, mine, 0)
        for mine, theirs in zip(self.outlines, script.get("outlines", []), strict=False):
            agree(script["rule"], theirs, mine, 0)


def play(double: str, name: str, late: str) -> Outcome:
    """Judge the blocks of a script with the double as the server."""
    script = STREAMS[name]
    # Paths of sockets are short.
    with tempfile.TemporaryDirectory(prefix="gate") as folder:
        address = f"unix:{folder}/s"
        command = [double, str(CASES / "streams" / f"{name}.json"), address]
        with subprocess.Popen(command, stdout=subprocess.PIPE, text=True) as process:
            assert process.stdout is not None
            assert process.stdout.readline() == "listening\n"
            verdicts, outlines, failed = judge(script, address, late)
            process.send_signal(signal.SIGTERM)
            held = process.stdout.read().strip()
        return Outcome(held, verdicts, outlines, failed)


def judge(
    script: dict[str, Any], address: str, late: str
) -> tuple[list[dict[str, Any]], list[dict[str, Any]], bool]:
    blocks = [
        Events.from_message(json_format.ParseDict(b, event_pb2.EventBlock()))
        for b in script["blocks"]
    ]
    verdicts: list[dict[str, Any]] = []
    outlines: list[dict[str, Any]] = []
    with kinegate.connect(address, gate_address=address) as client:
        try:
            for _, verdict in client.judge(
                blocks,
                Selection.named("pairs"),
                late=late,
                first_sequence=script["first_sequence"],
                follow=script.get("follow", False),
                patience=10,
            ):
                bits = sum(int(bit) << i for i, bit in enumerate(verdict.gate))
                gate = base64.b64encode(bytes([bits])).decode()
                assert len(verdict.status_names) == len(verdict)
                verdicts.append({"sequence": str(verdict.sequence), "gate": gate})
                outlines.append(
                    {
                        "selection_digest": verdict.digest,
                        "hypotheses": [{"name": h.name} for h in verdict.hypotheses],
                        "groups": list(verdict.best),
                    }
                )
        except kinegate.KinegateError:
            return verdicts, outlines, True
    return verdicts, outlines, False


@pytest.mark.parametrize("name", STREAMS)
def test_stream(name: str, double: str) -> None:
    play(double, name, STREAMS[name]["late"]).check(STREAMS[name])


@pytest.mark.parametrize("name", [n for n, s in STREAMS.items() if s["against"] == "both"])
def test_stream_of_a_server(name: str) -> None:
    script = STREAMS[name]
    with kinegate.start_server(selection_files=[CASES / "pairs.yaml"]) as running:
        Outcome("held", *judge(script, running.gate_address, script["late"])).check(script)


def test_streams_can_fail(double: str) -> None:
    outcome = play(double, "late-accept", "reject")
    with pytest.raises(AssertionError, match="late policy"):
        outcome.check(STREAMS["late-accept"])
