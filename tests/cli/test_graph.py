"""The command ``trivector graph``: tables, graph files, matrices, pictures."""

import csv
import io
import json
import sys
from pathlib import Path

import networkx
import pytest
from commands import Run

import trivector
from trivector.configurations import Incidence, meeting_graph

ROOT = Path(__file__).parents[2]
TWENTY = str(ROOT / "data" / "twenty-planes.json")
MOVED = str(ROOT / "data" / "twenty-one-moved.json")


def test_the_table_says_what_is_shared(run: Run) -> None:
    code, out, err = run("graph", TWENTY)
    lines = [" ".join(line.split()) for line in out.splitlines()]
    assert (code, err) == (0, [])
    assert "points 30 on 2 planes, 16 on 5 planes" in lines
    assert "dim(A ∩ F_v) where 5 planes meet 4" in lines
    assert "25 1 1 1 1 1 1; planes 0 4 8 12 16" in lines


def test_graphml_is_read_back_as_the_same_graph(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "g.graphml"
    assert run("graph", TWENTY, "-o", str(path), "--hyperplanes")[0] == 0
    expected = Incidence(trivector.read(TWENTY)).graph(hyperplanes=True)
    found = networkx.read_graphml(path)
    assert dict(found.nodes(data=True)) == dict(expected.nodes(data=True))
    assert {frozenset(e) for e in found.edges} == {frozenset(e) for e in expected.edges}


def test_node_link_json_is_read_back_as_the_same_graph(run: Run) -> None:
    for kind in ("meeting", "incidence"):
        code, out, _ = run("graph", MOVED, "--kind", kind, "--json")
        data = json.loads(out)
        assert code == 0
        found = networkx.node_link_graph(data, edges="edges")
        configuration = trivector.read(MOVED)
        expected = (
            meeting_graph(configuration) if kind == "meeting" else Incidence(configuration).graph()
        )
        assert networkx.utils.graphs_equal(found, expected)
        assert ("shared" in data) is (kind == "incidence")
    # The plane moved off four points of five planes and e4 + e5, not off e0 + e1 and e2 + e3.
    assert data["shared"]["points_by_planes"] == {"2": 29, "4": 4, "5": 12}


def test_dot_names_every_node_and_edge_and_escapes_labels(run: Run, tmp_path: Path) -> None:
    planes = [[[1, 0, 0, 0, 0, 0], [0, 1, 0, 0, 0, 0], [0, 0, 1, 0, 0, 0]]]
    document = {"kind": "planes", "field": "Q", "planes": planes, "labels": ['a"b\\c']}
    path = tmp_path / "one.json"
    path.write_text(json.dumps(document), "utf-8")
    _, out, _ = run("graph", str(path), "--format", "dot")
    assert out.splitlines()[0] == "graph trivector {"
    assert r'label="a\"b\\c"' in out
    _, out, _ = run("graph", TWENTY, "--format", "dot")
    assert out.count(" -- ") == 16 * 5 + 30 * 2
    assert out.count("shape=circle") == 46


def test_matrices_are_tables_with_names(run: Run) -> None:
    _, out, _ = run("graph", MOVED, "--format", "csv", "--kind", "meeting")
    rows = list(csv.reader(io.StringIO(out)))
    assert rows[0] == ["plane", *(f"p{i}" for i in range(20))]
    values = [[int(x) for x in row[1:]] for row in rows[1:]]
    assert values == [list(column) for column in zip(*values, strict=True)]
    assert sum(x == 0 for row in values for x in row) == 2 * 17
    assert all(values[i][i] == 3 for i in range(20))
    _, out, _ = run("graph", TWENTY, "--format", "csv")
    rows = list(csv.reader(io.StringIO(out)))
    columns = list(zip(*rows[1:], strict=True))[1:]
    assert sorted(column.count("1") for column in columns) == [2] * 30 + [5] * 16


@pytest.mark.parametrize("picture", ["circle", "matrix"])
@pytest.mark.parametrize("options", [[], ["--orbits"]])
def test_pictures_are_written(run: Run, tmp_path: Path, picture: str, options: list[str]) -> None:
    pytest.importorskip("matplotlib")
    path = tmp_path / "p.svg"
    code, out, err = run("graph", MOVED, "-o", str(path), "--picture", picture, *options)
    assert (code, out, err) == (0, "", [])
    assert path.read_text("utf-8").startswith("<?xml")


def test_the_exchange_graph_of_the_moved_twenty(run: Run, tmp_path: Path) -> None:
    code, out, err = run("graph", MOVED, "--kind", "exchange")
    lines = [" ".join(line.split()) for line in out.splitlines()]
    assert (code, err) == (0, [])
    assert "families 1 of 3 planes, 1 of 19 planes" in lines
    assert "in common 2 planes for 1 pair" in lines
    code, out, _ = run("graph", MOVED, "--kind", "exchange", "--json", "--shared", "3")
    data = json.loads(out)
    assert data["families"] == [[0, 1, 2], list(range(1, 20))]
    assert networkx.node_link_graph(data, edges="edges").number_of_edges() == 0
    _, out, _ = run("graph", MOVED, "--kind", "exchange", "--format", "csv")
    assert list(csv.reader(io.StringIO(out)))[1:] == [["0", "3", "2"], ["1", "2", "19"]]
    path = tmp_path / "g.graphml"
    assert run("graph", MOVED, "--kind", "exchange", "-o", str(path))[0] == 0
    assert networkx.read_graphml(path).edges["0", "1"] == {"shared": 2}
    _, out, _ = run("graph", MOVED, "--kind", "exchange", "--format", "dot")
    assert "  0 -- 1 [shared=2];" in out.splitlines()


def test_only_complete_families_when_asked(run: Run) -> None:
    asked = ("--kind", "exchange", "--complete", "--field", "F_3", "--json")
    _, out, _ = run("graph", MOVED, *asked)
    assert json.loads(out)["families"] == []
    _, out, _ = run("graph", TWENTY, *asked)
    data = json.loads(out)
    assert data["families"] == [list(range(20))]
    assert data["scope"] == "complete over F_3"


def test_what_makes_no_sense_is_one_line_and_exit_code_2(
    run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    space = tmp_path / "l.json"
    space.write_text(json.dumps({"kind": "subspace", "field": "F_3", "basis": [[1] * 20]}))
    nowhere = str(tmp_path / "no" / "p.png")
    for argv, word in (
        ([TWENTY, "--format", "png"], "-o"),
        ([TWENTY, "-o", nowhere], "cannot be written"),
        ([TWENTY, "-o", nowhere.replace("png", "dot")], "cannot be written"),
        ([TWENTY, "--kind", "meeting", "-o", str(tmp_path / "p.png")], "meeting"),
        ([TWENTY, "--format", "gif"], "gif"),
        ([TWENTY, "--width", "wide", "-o", str(tmp_path / "p.png")], "centimetres"),
        ([TWENTY, "--width", "1", "-o", str(tmp_path / "p.png")], "7 to 60 cm"),
        ([MOVED, "--kind", "exchange", "-o", str(tmp_path / "p.png")], "exchange"),
        ([MOVED, "--kind", "exchange", "--max-families", "1"], "more than 1 maximal"),
        ([str(space)], "planes"),
    ):
        code, out, err = run("graph", *argv)
        assert (code, out, len(err)) == (2, "", 1)
        assert word in err[0]
    monkeypatch.setitem(sys.modules, "matplotlib", None)
    monkeypatch.setitem(sys.modules, "matplotlib.figure", None)
    code, _, err = run("graph", TWENTY, "-o", str(tmp_path / "p.png"))
    assert (code, len(err)) == (2, 1)
    assert "pip install 'trivector[pictures]'" in err[0]
