"""Columns against one message for each four-vector (A7)."""

from __future__ import annotations

import time
from typing import TYPE_CHECKING, Any

import numpy as np
from google.protobuf import descriptor_pb2, descriptor_pool, message_factory

from kinegate import Events
from kinegate.v1 import event_pb2, kinematics_pb2

if TYPE_CHECKING:
    from collections.abc import Callable

ROWS = 100_000


def _list_of_four_momenta() -> Any:
    """Make a message with one sub-message for each four-vector."""
    file = descriptor_pb2.FileDescriptorProto(
        name="rows.proto",
        package="rows",
        syntax="proto3",
        dependency=["kinegate/v1/kinematics.proto"],
    )
    field = file.message_type.add(name="Rows").field.add(name="rows", number=1)
    field.label = descriptor_pb2.FieldDescriptorProto.LABEL_REPEATED
    field.type = descriptor_pb2.FieldDescriptorProto.TYPE_MESSAGE
    field.type_name = ".kinegate.v1.FourMomentum"
    assert kinematics_pb2.DESCRIPTOR.name == "kinegate/v1/kinematics.proto"
    pool = descriptor_pool.Default()
    pool.Add(file)  # type: ignore[no-untyped-call,unused-ignore]
    return message_factory.GetMessageClass(pool.FindMessageTypeByName("rows.Rows"))


def _best(run: Callable[[], object], tries: int) -> float:
    times = []
    for _ in range(tries):
        before = time.process_time()
        run()
        times.append(time.process_time() - before)
    return min(times)


def test_columns_are_read_thirty_times_faster() -> None:
    rng = np.random.default_rng(1)
    px, py, pz, m = rng.random((4, ROWS))
    energy = np.sqrt(px**2 + py**2 + pz**2 + m**2)
    events = Events.of(
        energy_gev=energy.reshape(-1, 2),
        px_gev=px.reshape(-1, 2),
        py_gev=py.reshape(-1, 2),
        pz_gev=pz.reshape(-1, 2),
        classes=[2, 3],
    )
    columns = events.to_message().SerializeToString()
    kind = _list_of_four_momenta()
    rows = kind(
        rows=[
            kinematics_pb2.FourMomentum(energy_gev=e, px_gev=x, py_gev=y, pz_gev=z)
            for e, x, y, z in zip(energy, px, py, pz, strict=True)
        ]
    ).SerializeToString()

    def read_columns() -> Any:
        return Events.from_message(event_pb2.EventBlock.FromString(columns))["px_gev"]

    def read_rows() -> Any:
        parsed = kind.FromString(rows).rows
        return np.array([(r.energy_gev, r.px_gev, r.py_gev, r.pz_gev) for r in parsed])

    assert (read_columns() == read_rows()[:, 1]).all()
    ratio = _best(read_rows, 3) / _best(read_columns, 9)
    print(f"columns are read {ratio:.0f} times faster than sub-messages")  # noqa: T201
    assert ratio >= 30
