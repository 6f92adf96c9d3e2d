"""Columns: there and back, without copies, in every coordinate set."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

import kinegate
from kinegate import COORDINATES, Events
from kinegate.v1 import event_pb2

if TYPE_CHECKING:
    from pathlib import Path


def _positions(rows: int) -> dict[str, Any]:
    x, y, z = np.random.default_rng(8).random((3, rows))
    return {"x_m": x, "y_m": y, "z_m": z}


def sample(coordinates: str = "momentum_mass", events: int = 50, *, full: bool = True) -> Events:
    """Invented events of 0 to 6 objects, with every optional part."""
    rng = np.random.default_rng(7)
    offsets = np.concatenate([[0], np.cumsum(rng.integers(0, 7, events))]).astype(np.int32)
    n = int(offsets[-1])
    beams = np.concatenate([[0], np.cumsum(rng.integers(0, 3, events))]).astype(np.int32)
    groups = np.concatenate([[0], np.cumsum(rng.integers(0, 2, events))]).astype(np.int32)
    optional: dict[str, Any] = {}
    if full:
        optional = {
            "measured_mask": rng.integers(0, 8, n).astype(np.uint8),
            "species_mask": rng.integers(0, 64, n).astype(np.uint8),
            "covariance": rng.random((n, 6)),
            "beam": kinegate.BeamCandidates(beams, *rng.random((3, beams[-1]))),
            "vertex": kinegate.Vertices(
                **_positions(events), covariance_m2=rng.random((events, 6))
            ),
            "vertex_group": kinegate.VertexGroups(
                np.zeros(n, np.int32), groups, *rng.random((3, groups[-1]))
            ),
            "cluster_position": kinegate.ClusterPositions(*rng.random((3, n))),
            "polarisation": kinegate.Polarisation(*rng.random((3, events))),
        }
    return Events.of(
        classes=rng.integers(1, 5, n),
        offsets=offsets,
        event_ids=np.arange(events) + 10**12,
        run_number=42,
        extra={"true_mass": rng.random(events)},
        **optional,
        **{name: rng.random(n) for name in COORDINATES[coordinates]},
    )


def test_coordinates_are_those_of_the_contract() -> None:
    sets = event_pb2.EventBlock.DESCRIPTOR.oneofs_by_name["coordinates"].fields
    columns = {f.name: f.message_type for f in sets}
    assert set(columns) == set(COORDINATES)
    for name, message in columns.items():
        assert message is not None
        assert tuple(f.name for f in message.fields) == COORDINATES[name]


def same(one: Events, other: Events) -> None:
    """Compare every column, bit by bit."""
    assert one.to_message() == other.to_message()


@pytest.mark.parametrize("coordinates", list(COORDINATES))
def test_message_there_and_back(coordinates: str) -> None:
    events = sample(coordinates)
    raw = events.to_message(3).SerializeToString()
    block = event_pb2.EventBlock.FromString(raw)
    assert block.sequence == 3
    same(Events.from_message(block), events)


def test_columns_of_a_message_are_views() -> None:
    block = sample().to_message()
    events = Events.from_message(block)
    for column in (events["px_gev"], events.offsets, events.classes, events.event_ids):
        assert not column.flags.owndata
        assert not column.flags.writeable


def test_cuts_share_columns_and_join_again() -> None:
    events = sample()
    parts = list(events.blocks(7))
    assert [len(p) for p in parts] == [7] * 7 + [1]
    assert np.shares_memory(parts[1]["px_gev"], events["px_gev"])
    same(Events.concatenate(parts), events)
    assert (Events.concatenate(parts).extra["true_mass"] == events.extra["true_mass"]).all()
    assert len(events.cut(-3, 99)) == 3
    assert len(events.cut(5, 2)) == 0


def test_parts_must_match_to_join() -> None:
    with pytest.raises(ValueError, match="some samples only"):
        Events.concatenate([sample(), sample(full=False)])
    with pytest.raises(ValueError, match="one coordinate set"):
        Events.concatenate([sample(), sample("momentum_angles")])


def test_fixed_multiplicity_needs_no_offsets() -> None:
    px = np.ones((10, 3))
    events = Events.of(px_gev=px, py_gev=px, pz_gev=px, mass_gev=px, classes=[1, 2, 3])
    assert np.shares_memory(events["px_gev"], px)
    assert events.offsets.tolist() == list(range(0, 31, 3))
    assert events.classes[:4].tolist() == [1, 2, 3, 1]


@pytest.mark.parametrize(
    ("arguments", "complaint"),
    [
        ({"px_gev": [[1.0]]}, "no coordinate set"),
        ({"classes": [1], "offsets": [0, 2]}, "offsets end at 2"),
        ({"classes": [1], "offsets": [1, 1]}, "begin with 0"),
        (
            {"classes": [1], "offsets": [0, 1], "event_ids": [1, 2]},
            "event_ids: 2 rows, 1 are needed",
        ),
        ({"classes": [1], "offsets": [0, 1], "species_mask": np.zeros(3)}, "species_mask: 3 rows"),
        (
            {"classes": [1], "offsets": [0, 1], "vertex": kinegate.Vertices(*np.zeros((3, 4)))},
            "vertex.x_m: 4 rows, 1 are needed",
        ),
        ({"classes": [1]}, "need offsets"),
    ],
)
def test_lengths_are_checked(arguments: dict[str, Any], complaint: str) -> None:
    columns = {"momentum_gev": [1.0], "theta_rad": [0.1], "phi_rad": [0.2]}
    given = {"classes": [1], **({} if "px_gev" in arguments else columns), **arguments}
    with pytest.raises(ValueError, match=complaint):
        Events.of(**given)


def test_arrow_there_and_back_without_copies() -> None:
    events = sample(full=False)
    table = events.to_arrow()
    again = Events.from_arrow(table)
    same(again, events)
    assert np.shares_memory(again["px_gev"], events["px_gev"])
    assert (again.extra["true_mass"] == events.extra["true_mass"]).all()


def test_arrow_carries_every_optional_column(tmp_path: Path) -> None:
    parquet = pytest.importorskip("pyarrow.parquet")
    whole = sample()
    parquet.write_table(whole.to_arrow(), tmp_path / "events.parquet")
    again = Events.from_arrow(parquet.read_table(tmp_path / "events.parquet"))
    assert again.run_number == 42
    assert again.vertex_group is not None
    same(again, whole)


def test_pandas_has_a_row_for_each_object() -> None:
    events = sample()
    frame = events.to_pandas()
    assert len(frame) == len(events.classes)
    assert (frame["px_gev"].to_numpy() == events["px_gev"]).all()
    counts = frame.groupby("event_id").size()
    assert counts.sum() == events.offsets[-1]


def test_pandas_there_and_back() -> None:
    whole = sample()
    filled = np.flatnonzero(np.diff(whole.offsets))
    again = Events.from_pandas(whole.to_pandas())
    assert again.event_ids.tolist() == whole.event_ids[filled].tolist()
    assert np.diff(again.offsets).tolist() == np.diff(whole.offsets)[filled].tolist()
    for name in whole.values:
        assert (again[name] == whole[name]).all()
    for column in ("classes", "measured_mask", "species_mask"):
        assert (getattr(again, column) == getattr(whole, column)).all()
    plain = whole.to_pandas().reset_index().drop(columns="object").assign(comment="mine")
    same(Events.from_pandas(plain), again)


def test_pandas_with_an_event_id_for_several_events() -> None:
    pandas = pytest.importorskip("pandas")
    columns = {"class": 1, "momentum_gev": 1.0, "theta_rad": 0.1, "phi_rad": 0.2}
    frame = pandas.DataFrame({"event_id": [5, 5, 5, 6], "object": [0, 1, 0, 0], **columns})
    assert Events.from_pandas(frame).event_ids.tolist() == [5, 5, 6]
    assert Events.from_pandas(frame.set_index(["event_id", "object"])).offsets.tolist() == [
        *(0, 2, 3, 4)
    ]


@pytest.mark.parametrize(
    ("change", "complaint"),
    [
        ({"event_id": [5, 6, 5]}, "do not follow one another"),
        ({"object": [0, 1, 1]}, "do not follow one another"),
        ({"object": [1, 0, 1]}, "do not follow one another"),
        ({"event_id": [5, 6, 6], "object": [0, 1, 0]}, "do not follow one another"),
        ({"class": None}, "no column class; beside event_id, class the columns of one"),
        ({"event_id": None, "phi_rad": None}, "no column event_id, phi_rad"),
        ({"theta_rad": ["a", "b", "c"]}, "theta_rad"),
        ({"event_id": [1.5, 2, 2]}, "event_id: .* whole numbers"),
    ],
)
def test_pandas_faults(change: dict[str, Any], complaint: str) -> None:
    pandas = pytest.importorskip("pandas")
    columns = {"event_id": 1, "class": 1, "momentum_gev": 1.0, "theta_rad": 0.1, "phi_rad": 0.2}
    given = {k: v for k, v in {**columns, **change}.items() if v is not None}
    with pytest.raises(kinegate.ArgumentError, match=complaint):
        Events.from_pandas(pandas.DataFrame(given, index=range(3)))


def test_arrow_table_from_elsewhere(tmp_path: Path) -> None:
    arrow = pytest.importorskip("pyarrow")
    parquet = pytest.importorskip("pyarrow.parquet")
    whole = sample()
    bare = whole.to_arrow().replace_schema_metadata(None)
    again = Events.from_arrow(bare)
    assert again.run_number == 0
    assert again.to_message().momentum_mass == whole.to_message().momentum_mass
    # As other programs write it: long offsets, single precision, no ids, a column of their own.
    lists = {"px_gev": [[1, 2], [], [3]], "py_gev": [[1, 2], [], [3]], "pz_gev": [[1, 2], [], [3]]}
    columns = {n: arrow.array(v, arrow.large_list(arrow.float32())) for n, v in lists.items()}
    columns |= {"mass_gev": arrow.array([[0, 0], [], [0]]), "class": arrow.array([[1, 1], [], [2]])}
    columns["comment"] = arrow.array(["a", "b", "c"])
    parquet.write_table(arrow.table(columns), tmp_path / "other.parquet")
    other = Events.from_arrow(parquet.read_table(tmp_path / "other.parquet"))
    assert other.offsets.tolist() == [0, 2, 2, 3]
    assert other.event_ids.tolist() == [0, 1, 2]
    assert other["pz_gev"].tolist() == [1, 2, 3]
    # Lists of fixed length, six of them, which are no triangles.
    six = arrow.array([[1.0] * 6] * 2, arrow.list_(arrow.float64(), 6))
    fixed = {"class": six.cast(arrow.list_(arrow.int8(), 6)), "momentum_gev": six}
    fixed |= {"theta_rad": six, "phi_rad": six}
    assert Events.from_arrow(arrow.table(fixed)).offsets.tolist() == [0, 6, 12]


@pytest.mark.parametrize(
    ("change", "complaint"),
    [
        ({"class": None}, "no column class; beside class the columns of one coordinate set"),
        ({"phi_rad": None, "theta_rad": None}, "no column .*, .*; beside class"),
        ({"phi_rad": [[0.1], [0.2, 0.3]]}, "phi_rad: its lists are not as long"),
        ({"phi_rad": [0.1, 0.2]}, "phi_rad: a column of double .* lists are needed"),
        ({"phi_rad": [[0.1, 0.2], None]}, "phi_rad: .* 1 nulls"),
    ],
)
def test_arrow_faults(change: dict[str, Any], complaint: str) -> None:
    arrow = pytest.importorskip("pyarrow")
    lists = [[0.1, 0.2], [0.3]]
    columns = {"class": [[1, 1], [1]], "momentum_gev": lists, "theta_rad": lists, "phi_rad": lists}
    given = {k: v for k, v in {**columns, **change}.items() if v is not None}
    with pytest.raises(kinegate.ArgumentError, match=complaint):
        Events.from_arrow(arrow.table(given))


def test_csv_faults(tmp_path: Path) -> None:
    path = tmp_path / "events.csv"
    path.write_text("a,b\n1,2\n")
    with pytest.raises(ValueError, match="no column px1"):
        Events.read_csv(path)
    path.write_text("px1,py1\n1,2\n")
    with pytest.raises(ValueError, match="no column"):
        Events.read_csv(path)


def test_blocks_keep_to_a_number_of_beam_candidates() -> None:
    counts = np.array([1, 5, 0, 3, 9, 1, 1])
    offsets = np.concatenate([[0], np.cumsum(counts)]).astype(np.int32)
    column = np.arange(offsets[-1], dtype=float)
    events = Events.of(
        momentum_gev=np.ones((7, 1)),
        theta_rad=np.ones((7, 1)),
        phi_rad=np.ones((7, 1)),
        classes=[kinegate.PHOTON],
        beam=kinegate.BeamCandidates(offsets, column, column, column),
    )
    blocks = list(events.blocks(4, candidates_per_block=8))
    assert [len(b) for b in blocks] == [3, 1, 1, 2]
    assert np.concatenate([b.event_ids for b in blocks]).tolist() == list(range(7))
    energies = [b.beam.energy_gev for b in blocks if b.beam is not None]
    assert (np.concatenate(energies) == column).all()
