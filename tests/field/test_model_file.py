"""The model file: written and read without loss; what cannot be read is named by its key."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.field.antennas import LIGHT_HZ, over_plane
from tests.field.demos import NAMES, demo_model
from wavejig.field import Insulation, Model, ModelError, Port, Wire, solve

coordinate = st.floats(-1e3, 1e3, allow_nan=False)
point = st.tuples(coordinate, coordinate, coordinate)
positive = st.floats(1e-9, 1e9)
sleeve = st.none() | st.builds(Insulation, outer_radius_m=positive, permittivity=positive)
wires = st.builds(
    Wire,
    start=point,
    end=point,
    radius_m=positive,
    conductivity_s_per_m=st.none() | positive,
    insulation=sleeve,
)
models = st.builds(
    Model,
    wires=st.lists(wires, max_size=4).map(tuple),
    triangles=st.lists(st.tuples(point, point, point), max_size=3),
    ports=st.lists(st.builds(Port, wire=st.integers(0, 3), end=st.integers(0, 1), impedance_ohm=positive), max_size=2),
    plane=st.sampled_from([None, "z=0"]),
    sheet_conductivity_s_per_m=st.none() | positive,
)  # fmt: skip


def same(a: Model, b: Model) -> bool:
    return (
        (a.wires, a.ports, a.plane, a.sheet_conductivity_s_per_m)
        == (b.wires, b.ports, b.plane, b.sheet_conductivity_s_per_m)
    ) and np.array_equal(a.triangles, b.triangles)


@given(models)
def test_round_trip_is_exact(model: Model) -> None:
    assert same(Model.from_dict(json.loads(json.dumps(model.to_dict()))), model)


def test_save_and_load(tmp_path: Path) -> None:
    model = demo_model(NAMES[0])
    model.save(tmp_path / "model.json")
    assert same(Model.load(tmp_path / "model.json"), model)
    assert (tmp_path / "model.json").read_bytes().endswith(b"\n")


def test_loaded_models_solve_alike(tmp_path: Path) -> None:
    model = over_plane(0.5, 1e-3, 10, 0.2)
    model.save(tmp_path / "m.json")
    loaded = solve(Model.load(tmp_path / "m.json"), [LIGHT_HZ])
    assert loaded.impedance_ohm[0] == solve(model, [LIGHT_HZ]).impedance_ohm[0]


def test_the_documented_form() -> None:
    """As the contract writes it: by hand, optional keys left out."""
    model = Model.from_dict(
        {
            "wires": [{"start": [0, 0, 0], "end": [0, 0, 0.1], "radius": 0.001}],
            "triangles": [[[0, 0, 0], [0.1, 0, 0], [0, 0.1, 0]]],
            "ports": [{"wire": 0, "end": 0, "impedance": 75}],
            "plane": None,
        }
    )
    assert model.wires == (Wire(start=(0.0, 0.0, 0.0), end=(0.0, 0.0, 0.1), radius_m=0.001),)
    assert model.ports == (Port(wire=0, end=0, impedance_ohm=75.0),)
    assert model.triangles.shape == (1, 3, 3)
    assert model.plane is None
    assert sorted(model.to_dict()) == ["plane", "ports", "triangles", "wires"]


WIRE = {"start": [0, 0, 0], "end": [0, 0, 1], "radius": 0.1}

BAD = [
    ([], "the file"),
    ({"wire": []}, 'unknown key "wire"'),
    ({"wires": {}}, "wires: need a list"),
    ({"wires": [1]}, "wires[0]"),
    ({"wires": [WIRE, {"start": [0, 0, 0], "radius": 1}]}, "wires[1]: 'end' is missing"),
    ({"wires": [{**WIRE, "start": [0, 0]}]}, "wires[0].start: need a list of 3"),
    ({"wires": [{**WIRE, "end": [0, "1", 0]}]}, "wires[0].end: need a finite number"),
    ({"wires": [{**WIRE, "radius": None}]}, "wires[0].radius"),
    ({"wires": [{**WIRE, "radius": True}]}, "wires[0].radius"),
    ({"wires": [{**WIRE, "radius": float("inf")}]}, "wires[0].radius"),
    ({"wires": [{**WIRE, "diameter": 1}]}, 'unknown key "diameter"'),
    ({"wires": [{**WIRE, "conductivity": "copper"}]}, "wires[0].conductivity"),
    ({"wires": [{**WIRE, "insulation": 2}]}, "wires[0].insulation"),
    ({"wires": [{**WIRE, "insulation": {"permittivity": 2}}]}, "'outer_radius' is missing"),
    ({"triangles": [[[0, 0, 0], [1, 0, 0]]]}, "triangles[0]: need a list of 3"),
    ({"triangles": [[[0, 0, 0], [1, 0, 0], [1, 0]]]}, "triangles[0]: need a list of 3"),
    ({"ports": [{"wire": 0}]}, "ports[0]: 'end' is missing"),
    ({"ports": [{"wire": 0.5, "end": 0}]}, "ports[0].wire: need a whole number"),
    ({"ports": [{"wire": 0, "end": 0, "impedance": "50 ohm"}]}, "ports[0].impedance"),
    ({"sheet_conductivity": "brass"}, "sheet_conductivity"),
]


@pytest.mark.parametrize(("data", "says"), BAD, ids=[b[1] for b in BAD])
def test_malformed_files_are_named_by_key(data: object, says: str, tmp_path: Path) -> None:
    path = tmp_path / "m.json"
    path.write_text(json.dumps(data), encoding="utf-8")
    with pytest.raises(ModelError) as caught:
        Model.load(path)
    assert caught.value.code == "file"
    assert says in str(caught.value)


@pytest.mark.parametrize("content", [b"", b"{", b"\xff\xfe", b"wires = 1"])
def test_files_that_are_no_json(content: bytes, tmp_path: Path) -> None:
    path = tmp_path / "m.json"
    path.write_bytes(content)
    with pytest.raises(ModelError, match=r"m\.json(:1)?: not a readable JSON file"):
        Model.load(path)


def test_faults_are_told_with_their_line(tmp_path: Path) -> None:
    """In the last wire's end, in a file laid out over lines; other wires' values look alike."""
    wires = [WIRE, {**WIRE, "insulation": {"a]": [1, "}"], "outer_radius": 1}}, {**WIRE, "end": [0, 0, "1"]}]
    path = tmp_path / "m.json"
    for n, key in ((1, "insulation: unknown key"), (2, "end: need a finite number")):
        chosen = [WIRE, wires[n]]
        text = json.dumps({"plane": None, "wires": chosen}, indent=1)
        path.write_text(text, encoding="utf-8")
        with pytest.raises(ModelError) as caught:
            Model.load(path)
        line = text.split("\n").index('   "insulation": {' if n == 1 else '   "end": [', 10) + 1
        assert str(caught.value).startswith(f"file: {path}:{line}: wires[1].{key}")


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ('{"wires": [], "wires": []}', 'the key "wires" stands twice'),
        ("[" * 100_000, "too deep"),
        ('{"sheet_conductivity": ' + "9" * 5000 + "}", "sheet_conductivity: need a finite number, got inf"),
        ('{"plane": {"z": 0}}', "plane: need null or"),
        ('{"ports": [{"wire": 99999999, "end": 0}]}', "ports[0].wire: need a whole number"),
        ('{"triangles": [' + "[]," * 30_000 + "[]]}", "at most 20000"),
        ('{"triangles": [' + "[]," * 300_000 + "[]]}", "too large"),
        (" " * 5_000_000, "too large"),
    ],
)
def test_files_beyond_every_use_are_refused(text: str, says: str, tmp_path: Path) -> None:
    path = tmp_path / "m.json"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(ModelError) as caught:
        Model.load(path)
    assert caught.value.code == "file" and says in str(caught.value)


def test_a_file_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(ModelError, match="not a readable"):
        Model.load(tmp_path / "none.json")


def test_triangles_of_a_wrong_shape() -> None:
    with pytest.raises(ModelError, match=r"shape \(2, 3\)"):
        Model(triangles=np.zeros((2, 3)))


def test_models_cannot_be_changed() -> None:
    given_array = np.zeros((1, 3, 3))
    model = Model(triangles=given_array)
    given_array[0, 0, 0] = 1.0
    assert model.triangles[0, 0, 0] == 0.0
    with pytest.raises(ValueError, match="read-only"):
        model.triangles[0] = 1.0
