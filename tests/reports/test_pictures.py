"""Pictures: every plane is drawn, no label touches another, the same bytes each time."""

import re
import struct
from itertools import combinations
from pathlib import Path
from typing import Any

import examples
import oracle_f4
import pytest

import trivector
from trivector.configurations import Configuration, Incidence
from trivector.errors import UsageError
from trivector.fields import QQ, field_from_spec
from trivector.reports.pictures import (
    PlaneClasses,
    circle_picture,
    matrix_picture,
    save_picture,
)

pytest.importorskip("matplotlib")

DATA = Path(__file__).parents[2] / "data"


def configurations() -> dict[str, Configuration]:
    found = {name: trivector.read(DATA / f"{name}.json") for name in NAMES[:4]}
    for length in LENGTHS:
        found[f"length-{length}"] = trivector.read(DATA / "atlas" / f"length-{length}-over-q.json")
    field = field_from_spec("F_4")
    rows = [
        [[field.from_code(x) for x in row] for row in plane]
        for plane in oracle_f4.twenty_two_planes()
    ]
    labels = [f"a long label no. {i} of it" for i in range(22)]
    found["twenty-two"] = Configuration.from_rows(field, rows, labels=labels)
    return found


NAMES = [
    "del-pezzo-seventeen",
    "seven-planes-p6",
    "twenty-one-moved",
    "twenty-planes",
    "twenty-two",
]
LENGTHS = (10, 11, 12, 13, 15, 16, 19)
ATLAS = [f"length-{length}" for length in LENGTHS]
WIDTHS = (8.6, 17.0)  # a column and a page


@pytest.fixture(scope="module")
def drawn() -> Any:
    """Name and width ↦ configuration, circle, matrix; drawn when first asked for."""
    everything = configurations()
    pictures: dict[tuple[str, float], tuple[Configuration, Any, Any]] = {}

    def pick(name: str, width: float = 17.0) -> tuple[Configuration, Any, Any]:
        if (name, width) not in pictures:
            configuration = everything[name]
            incidence = Incidence(configuration)
            classes = PlaneClasses.from_refinement(configuration)
            pictures[name, width] = (
                configuration,
                circle_picture(incidence, classes, width=width),
                matrix_picture(incidence, classes, width=width),
            )
        return pictures[name, width]

    return pick


def writings(figure: Any) -> list[Any]:
    return [
        text
        for text in figure.findobj(lambda artist: hasattr(artist, "get_unitless_position"))
        if text.get_text() and text.get_visible()
    ]


def outlines(figure: Any) -> list[tuple[str, Any]]:
    """Each text with the corners of its box, turned as it is drawn, in pixels."""
    import numpy as np
    from matplotlib.backends.backend_agg import FigureCanvasAgg

    canvas = FigureCanvasAgg(figure)
    canvas.draw()
    renderer = canvas.get_renderer()
    found = []
    for text in writings(figure):
        words = text.get_text()
        angle = text.get_rotation()
        text.set_rotation(0)
        box = text.get_window_extent(renderer)
        text.set_rotation(angle)
        x, y = text.get_transform().transform(text.get_unitless_position())
        corners = np.array([[box.x0, box.y0], [box.x1, box.y0], [box.x1, box.y1], [box.x0, box.y1]])
        turn = np.deg2rad(angle)
        rotation = np.array([[np.cos(turn), np.sin(turn)], [-np.sin(turn), np.cos(turn)]])
        found.append((words, (corners - [x, y]) @ rotation + [x, y]))
    return found


def overlap(first: Any, second: Any) -> bool:
    """Whether two rectangles meet: no side of either separates them."""
    import numpy as np

    for corners in (first, second):
        for i in range(2):
            axis = corners[i + 1] - corners[i]
            a, b = first @ axis, second @ axis
            if np.max(a) <= np.min(b) + 1e-6 or np.max(b) <= np.min(a) + 1e-6:
                return False
    return True


@pytest.mark.parametrize("name", NAMES + ATLAS)
@pytest.mark.parametrize("width", WIDTHS)
def test_no_label_touches_another_or_the_edge(name: str, width: float, drawn: Any) -> None:
    _, circle, matrix = drawn(name, width)
    for figure in (circle, matrix):
        texts = outlines(figure)
        assert len(texts) >= 7
        assert [(a, b) for (a, x), (b, y) in combinations(texts, 2) if overlap(x, y)] == []
        across, height = figure.get_size_inches() * figure.dpi
        assert across <= width / 2.54 * figure.dpi + 1e-6
        for words, corners in texts:
            assert corners.min() >= 0, words
            assert corners[:, 0].max() <= across, words
            assert corners[:, 1].max() <= height, words
        assert min(text.get_fontsize() for text in writings(figure)) >= 6
        for legend in figure.legends:
            box = legend.get_window_extent()
            assert min(box.x0, box.y0) >= 0
            assert box.x1 <= across
            # Every label of planes and points is above the legend.
            others = [corners for words, corners in texts if "plane" not in words]
            assert box.y1 <= min(corners[:, 1].min() for corners in others)


@pytest.mark.parametrize("name", NAMES + ATLAS)
@pytest.mark.parametrize("width", WIDTHS)
def test_no_point_lies_on_another(name: str, width: float, drawn: Any) -> None:
    _, circle, _ = drawn(name, width)
    (axes,) = circle.axes
    marks = [line for line in axes.lines if len(line.get_xdata()) == 1]
    assert len(marks) >= 7
    for a, b in combinations(marks, 2):
        (x, y), (u, v) = (axes.transData.transform(m.get_xydata()[0]) for m in (a, b))
        touching = (a.get_markersize() + b.get_markersize()) / 2 * circle.dpi / 72
        assert (x - u) ** 2 + (y - v) ** 2 > touching**2


def test_numbers_alone_are_upright_since_six_turned_is_nine(drawn: Any) -> None:
    _, circle, _ = drawn("twenty-planes", 8.6)
    assert {text.get_rotation() for text in writings(circle)} == {0.0}
    _, circle, _ = drawn("twenty-planes", 17.0)
    assert len({text.get_rotation() for text in writings(circle)}) > 10


def test_groups_share_a_colour_only_if_all_do(drawn: Any) -> None:
    for name, colours in (("length-11", 1), ("length-12", 8), ("length-16", 4)):
        _, circle, _ = drawn(name)
        (axes,) = circle.axes
        assert len({line.get_color() for line in axes.lines if line.get_gid()}) == colours


def test_the_check_of_overlaps_sees_one() -> None:
    from matplotlib.figure import Figure

    figure = Figure()
    figure.text(0.5, 0.5, "first")
    figure.text(0.51, 0.5, "second", rotation=30)
    figure.text(0.1, 0.1, "third")
    (_, a), (_, b), (_, c) = outlines(figure)
    assert overlap(a, b)
    assert not overlap(a, c)


@pytest.mark.parametrize("name", NAMES)
def test_every_plane_and_every_shared_point_is_drawn(name: str, drawn: Any) -> None:
    configuration, circle, matrix = drawn(name)
    count = len(configuration.planes)
    (axes,) = circle.axes
    planes = {line.get_gid() for line in axes.lines if line.get_gid()}
    assert planes == {f"plane-{i}" for i in range(count)}
    incidence = Incidence(configuration)
    spokes = sum(len(p.planes) if len(p.planes) > 2 else 1 for p in incidence.points)
    hubs = sum(len(p.planes) > 2 for p in incidence.points)
    assert incidence.lines == ()
    assert len(axes.lines) == count + spokes + hubs
    (axes,) = matrix.axes
    cells = sum(len(collection.get_paths()) for collection in axes.collections)
    assert cells == sum(len(p.planes) for p in incidence.points)
    assert len(axes.get_yticklabels()) == count


def test_shared_lines_are_drawn_with_names_of_their_own() -> None:
    unit = examples.unit
    planes = [[unit(0), unit(1), unit(i)] for i in (2, 3, 4)]
    configuration = Configuration.from_rows(QQ, planes)
    figure = circle_picture(Incidence(configuration), PlaneClasses("class", ((0, 1, 2),)))
    assert {"0", "1", "2", "L0"} <= {words for words, _ in outlines(figure)}
    (legend,) = figure.legends
    assert [t.get_text() for t in legend.get_texts()] == [
        "3 planes (class 1)",
        "1 line in 3 planes",
    ]


def test_classes_and_orbits_group_the_planes() -> None:
    seventeen = trivector.read(DATA / "del-pezzo-seventeen.json")
    classes = PlaneClasses.from_refinement(seventeen)
    assert sorted(i for group in classes.groups for i in group) == list(range(17))
    swap = [1, 0, *range(2, 17)]
    assert PlaneClasses.from_permutations([swap], 17).groups[:2] == ((0, 1), (2,))


@pytest.mark.parametrize("kind", ["png", "svg", "pdf"])
def test_files_have_the_right_form_and_the_same_bytes(
    kind: str, drawn: Any, tmp_path: Path
) -> None:
    configuration, circle, _ = drawn("twenty-planes")
    again = circle_picture(Incidence(configuration), PlaneClasses.from_refinement(configuration))
    one, two = tmp_path / f"one.{kind}", tmp_path / f"two.{kind}"
    save_picture(circle, one, kind)
    save_picture(again, two, kind)
    content = one.read_bytes()
    assert content == two.read_bytes()
    if kind == "png":
        width, height = struct.unpack(">II", content[16:24])
        assert width == int(17 / 2.54 * 200)
        assert width < height < 1.3 * width
    elif kind == "svg":
        planes = re.findall(r'id="(plane-[0-9]+)"', content.decode("utf-8"))
        assert sorted(planes) == sorted(f"plane-{i}" for i in range(20))
    else:
        assert content.startswith(b"%PDF")


def test_more_planes_than_can_be_read_are_refused(tmp_path: Path) -> None:
    many = trivector.LinearSection(
        examples.families()[0].lagrangian(field_from_spec("F_2"))
    ).examine()
    assert many.planes is not None
    configuration = Configuration(many.planes)
    with pytest.raises(UsageError, match="155 planes"):
        circle_picture(Incidence(configuration), PlaneClasses("class", (tuple(range(155)),)))
    seven = Incidence(trivector.read(DATA / "seven-planes-p6.json"))
    for draw in (circle_picture, matrix_picture):
        for width in (3.0, 1000.0, float("nan")):
            with pytest.raises(UsageError, match="from 7 to 60 cm"):
                draw(seven, PlaneClasses("class", (tuple(range(7)),)), width=width)
    with pytest.raises(UsageError, match="not as gif"):
        save_picture(None, tmp_path / "x.gif", "gif")  # type: ignore[arg-type]
