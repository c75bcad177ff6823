"""Pictures of incidences for paper: planes on a circle, and the incidence matrix.

Colours are those of a palette made for all kinds of colour vision ("Color
Universal Design", 2008), and never carry information alone: classes are
adjacent and named, points differ by shape as well.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from trivector.configurations import Configuration, Incidence, SharedFlat
from trivector.errors import UsageError
from trivector.symmetry.collineations import orbits
from trivector.symmetry.refinement import IncidenceColours

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["FORMATS", "WIDTH", "PlaneClasses", "circle_picture", "matrix_picture", "save_picture"]

FORMATS = ("png", "svg", "pdf")

_COLOURS = ("#0072B2", "#E69F00", "#009E73", "#CC79A7", "#D55E00", "#56B4E9", "#F0E442", "#999999")
_MARKERS = ("o", "s", "^", "D", "p", "h", "v", "8")
_INK, _FAINT = "#222222", "#9A9A9A"

WIDTH = 17.0  # centimetres: the text width of A4 paper; a column of two has 8.6
_NARROWEST, _WIDEST = 7.0, 60.0
_LONGEST_LABEL = 22
_MOST_PLANES = 80
_FEW_HUBS = 20  # whose places are improved; the time grows with the third power


@dataclass(frozen=True)
class _Sizes:
    """What is printed how large; lengths in inches, type and marks in points.

    Nothing is set in less than 6 points: a narrow picture is drawn anew, with
    the numbers of the planes only, not made smaller.
    """

    width: float
    narrow: bool
    dpi: int
    label: int
    small: int
    legend: float
    plane: float
    hub: float
    line: float
    row: float

    @classmethod
    def of(cls, centimetres: float, count: int) -> "_Sizes":
        if not _NARROWEST <= centimetres <= _WIDEST:
            raise UsageError(
                f"a picture is from {_NARROWEST:g} to {_WIDEST:g} cm wide, "
                f"not {centimetres:g} cm; 8.6 is a column, 17 a page"
            )
        width, many = centimetres / 2.54, count > 30
        if centimetres < 12:
            return cls(width, True, 300, 6 if many else 7, 6, 6.5, 6, 10.5, 0.6, 0.13)
        return cls(width, False, 200, 6 if many else 9, 7, 8, 9, 13, 1.0, 0.12 if many else 0.2)


@dataclass(frozen=True)
class PlaneClasses:
    """Planes in groups, in the order in which they are drawn.

    Attributes
    ----------
    name : str
        What a group is: ``"orbit"``, ``"class"``.
    groups : tuple of tuples of int
    """

    name: str
    groups: tuple[tuple[int, ...], ...]

    @classmethod
    def from_refinement(cls, configuration: Configuration) -> "PlaneClasses":
        """The classes of colour refinement on the incidence graph."""
        distinct = Configuration(tuple(dict.fromkeys(configuration.planes)))
        repeated = [configuration.planes.count(plane) for plane in distinct.planes]
        colours = IncidenceColours(distinct, repeated).start.colours
        of_plane = dict(zip(distinct.planes, colours, strict=False))
        groups: dict[int, list[int]] = {}
        for i, plane in enumerate(configuration.planes):
            groups.setdefault(of_plane[plane], []).append(i)
        return cls("class", tuple(tuple(groups[c]) for c in sorted(groups)))

    @classmethod
    def from_permutations(cls, permutations: Sequence[Sequence[int]], count: int) -> "PlaneClasses":
        """The orbits of a group given by generators."""
        return cls("orbit", orbits(permutations, count))


def circle_picture(
    incidence: Incidence, classes: PlaneClasses, *, width: float = WIDTH
) -> "Figure":
    """The planes on a circle, grouped; inside it the points and lines that they share.

    A point on exactly two planes is the chord between them; every other
    point or line is a node joined to its planes, with its number (of a line: L).
    Up to eight groups have colours of their own; more are shown by gaps only.

    Parameters
    ----------
    incidence : Incidence
    classes : PlaneClasses
    width : float
        In centimetres, as it is to be printed: type has at least 6 points
        then. Below 12 cm planes carry their numbers without labels.

    Returns
    -------
    matplotlib.figure.Figure
        For `save_picture`.

    Raises
    ------
    UsageError
        If there are more than 80 planes, the width is not from 7 to 60 cm, or
        matplotlib is missing.
    """
    configuration = incidence.configuration
    _check_size(configuration)
    pairs = [p for p in incidence.points if len(p.planes) == 2]
    hubs = [p for p in incidence.points if len(p.planes) > 2] + list(incidence.lines)
    styles = _hub_styles(hubs)
    sizes = _Sizes.of(width, len(configuration.planes))
    side = sizes.width
    figure = _new_figure(side, side, sizes.dpi)  # fails early where matplotlib is missing
    handles = _legend_handles(incidence, classes, styles, sizes)
    columns = 2 if sizes.narrow else 3
    legend = (0.15 + 0.18 * math.ceil(len(handles) / columns)) * sizes.legend / 8
    height = side + legend
    figure.set_size_inches(side, height)
    figure.legend(handles=handles, loc="lower center", ncols=min(columns, len(handles)),
                  fontsize=sizes.legend, frameon=False, bbox_to_anchor=(0.5, 0.0))  # fmt: skip
    axes = figure.add_axes((0.0, legend / height, 1.0, side / height))
    axes.set_axis_off()
    axes.set_aspect("equal")
    labels = _labels(configuration, sizes)
    longest = max(_text_width(label, sizes.label) for label in labels)
    # A number that is turned may be read as another: 6 as 9.
    upright = max(len(label) for label in labels) <= 2
    # Labels begin at 1.07 and end before the edge, half the width from the centre.
    reach = 1.07 / (0.97 - longest / (side / 2))
    axes.set_xlim(-reach, reach)
    axes.set_ylim(-reach, reach)

    angles = _plane_angles(classes)
    places = {i: (math.sin(a), math.cos(a)) for i, a in angles.items()}
    for point in pairs:
        (x0, y0), (x1, y1) = (places[i] for i in point.planes)
        axes.plot([x0, x1], [y0, y1], color=_FAINT, linewidth=0.7 * sizes.line, zorder=1)
    numbers = {
        id(flat): f"{letter}{j}"
        for letter, kind in (("", incidence.points), ("L", incidence.lines))
        for j, flat in enumerate(kind)
    }
    for hub, (x, y) in zip(hubs, _hub_places(hubs, angles), strict=True):
        marker, colour, _ = styles[_hub_key(hub)]
        for i in hub.planes:
            px, py = places[i]
            axes.plot([x, px], [y, py], color=colour, linewidth=0.9 * sizes.line, alpha=0.75,
                      zorder=2)  # fmt: skip
        axes.plot([x], [y], marker=marker, markersize=sizes.hub, color="white",
                  markeredgecolor=colour, markeredgewidth=1.6 * sizes.line, zorder=4)  # fmt: skip
        axes.text(x, y, numbers[id(hub)], ha="center", va="center_baseline", fontsize=sizes.small,
                  color=_INK, zorder=5)  # fmt: skip
    for position, group in enumerate(classes.groups):
        colour = _group_colour(position, classes)
        for i in group:
            x, y = places[i]
            axes.plot([x], [y], marker="o", markersize=sizes.plane, color=colour,
                      markeredgecolor=_INK, markeredgewidth=0.8 * sizes.line, zorder=6,
                      gid=f"plane-{i}")  # fmt: skip
            write = _upright_label if upright else _radial_label
            write(axes, angles[i], labels[i], sizes.label)
    return figure


def _group_colour(position: int, classes: PlaneClasses) -> str:
    """No two groups share a colour, unless all do."""
    return _COLOURS[position if len(classes.groups) <= len(_COLOURS) else 0]


def _check_size(configuration: Configuration) -> None:
    count = len(configuration.planes)
    if count > _MOST_PLANES:
        raise UsageError(
            f"a picture of {count} planes cannot be read; draw at most {_MOST_PLANES}, "
            "or write the graph with --format graphml"
        )


def _new_figure(width: float, height: float, dpi: int) -> "Figure":
    try:
        from matplotlib.figure import Figure
    except ImportError:
        raise UsageError(
            "pictures need the library matplotlib: pip install 'trivector[pictures]'"
        ) from None
    return Figure(figsize=(width, height), dpi=dpi, facecolor="white")


def _labels(configuration: Configuration, sizes: _Sizes) -> list[str]:
    """The number of each plane, and its label if there is one and room for it."""
    result = []
    for i in range(len(configuration.planes)):
        label = configuration.labels[i] if configuration.labels and not sizes.narrow else ""
        label = "".join(c if c.isprintable() else " " for c in label).replace("$", r"\$")
        text = str(i) if not label or label == str(i) else f"{i}  {label}"
        result.append(text if len(text) <= _LONGEST_LABEL else text[: _LONGEST_LABEL - 1] + "…")
    return result


def _text_width(text: str, size: int) -> float:
    """In inches."""
    from matplotlib.textpath import TextPath

    return float(TextPath((0, 0), text, size=size).get_extents().width) / 72


def _plane_angles(classes: PlaneClasses) -> dict[int, float]:
    """Clockwise from the top, with a gap between groups."""
    gap = 0.6 if len(classes.groups) > 1 else 0.0
    total = sum(len(group) + gap for group in classes.groups)
    angles, position = {}, 0.0
    for group in classes.groups:
        for i in group:
            angles[i] = 2 * math.pi * position / total
            position += 1
        position += gap
    return angles


def _hub_places(hubs: Sequence[SharedFlat], angles: dict[int, float]) -> list[tuple[float, float]]:
    """On inner circles, each hub near the mean direction of its planes, away from other spokes.

    Of some radii and rotations the one is taken that keeps every hub farthest
    from the spokes of the others.
    """
    if not hubs:
        return []
    if len(hubs) == 1:
        return [(0.0, 0.0)]
    directions = []
    for j, hub in enumerate(hubs):
        x = sum(math.sin(angles[i]) for i in hub.planes)
        y = sum(math.cos(angles[i]) for i in hub.planes)
        # Without a mean direction any place is as good.
        mean = math.atan2(x, y) if math.hypot(x, y) > 1e-6 else 2 * math.pi * j / len(hubs)
        directions.append((round(mean % (2 * math.pi), 6), j))
    order = [j for _, j in sorted(directions)]
    offset = directions[order[0]][0]
    # Up to 24 hubs fit on one circle; more go round two or three in turn.
    rings = 1 + (len(hubs) - 1) // 24
    best: tuple[float, list[tuple[float, float]]] | None = None
    rotations = 12 if len(hubs) <= 40 else 1
    for rotation in range(rotations):
        for radius in (0.62, 0.68, 0.56, 0.74, 0.50):
            places = [(0.0, 0.0)] * len(hubs)
            for position, j in enumerate(order):
                turn = (position + (rotation - rotations // 2) / 6) / len(hubs)
                angle = offset + 2 * math.pi * turn
                r = radius - 0.17 * (position % rings)
                places[j] = (r * math.sin(angle), r * math.cos(angle))
            room = _room(hubs, places, angles) if rotations > 1 else 0.0
            if best is None or room > best[0] + 1e-6:
                best = room, places
    assert best is not None
    return _moved_apart(hubs, best[1], angles) if len(hubs) <= _FEW_HUBS else best[1]


def _moved_apart(
    hubs: Sequence[SharedFlat], places: list[tuple[float, float]], angles: dict[int, float]
) -> list[tuple[float, float]]:
    """Small steps of one hub at a time, as long as they make more room."""
    room = _room(hubs, places, angles)
    for step in (0.12, 0.08, 0.05):
        for j in range(len(hubs)):
            x, y = places[j]
            for eighth in range(8):
                turn = math.pi * eighth / 4
                place = (x + step * math.sin(turn), y + step * math.cos(turn))
                if math.hypot(*place) > 0.78:
                    continue
                trial = [*places[:j], place, *places[j + 1 :]]
                found = _room(hubs, trial, angles)
                if found > room + 1e-6:
                    room, places = found, trial
    return places


def _room(
    hubs: Sequence[SharedFlat], places: Sequence[tuple[float, float]], angles: dict[int, float]
) -> float:
    """How the hubs keep off the spokes of others: the smallest distance, then the mean of all."""
    distances = []
    for j, (x, y) in enumerate(places):
        nearest = 1.0
        for k, (u, v) in enumerate(places):
            if k == j:
                continue
            for i in hubs[k].planes:
                du, dv = math.sin(angles[i]) - u, math.cos(angles[i]) - v
                t = ((x - u) * du + (y - v) * dv) / (du * du + dv * dv)
                t = min(max(t, 0.0), 1.0)
                nearest = min(nearest, math.hypot(x - u - t * du, y - v - t * dv))
        distances.append(min(nearest, 0.08))
    return min(distances) + sum(distances) / len(distances)


def _hub_key(hub: SharedFlat) -> tuple[int, int]:
    return hub.flat.projective_dimension, len(hub.planes)


def _hub_styles(hubs: Sequence[SharedFlat]) -> dict[tuple[int, int], tuple[str, str, str]]:
    """Marker, colour and words for each kind of point and line."""
    styles = {}
    for position, key in enumerate(sorted({_hub_key(hub) for hub in hubs})):
        dimension, planes = key
        count = sum(_hub_key(hub) == key for hub in hubs)
        noun, preposition = ("point", "on") if dimension == 0 else ("line", "in")
        words = f"{_count(count, noun)} {preposition} {planes} planes"
        colour = (_INK, _COLOURS[4], _COLOURS[0], _COLOURS[3], _COLOURS[2])[position % 5]
        styles[key] = (_MARKERS[position % len(_MARKERS)], colour, words)
    return styles


def _radial_label(axes: Any, angle: float, text: str, size: int) -> None:
    x, y = 1.07 * math.sin(angle), 1.07 * math.cos(angle)
    flipped = angle % (2 * math.pi) > math.pi
    degrees = 90 - math.degrees(angle) + (180 if flipped else 0)
    side = "right" if flipped else "left"
    axes.text(x, y, text, rotation=degrees, rotation_mode="anchor", ha=side, va="center",
              fontsize=size, color=_INK)  # fmt: skip


def _upright_label(axes: Any, angle: float, text: str, size: int) -> None:
    axes.annotate(text, (math.sin(angle), math.cos(angle)), fontsize=size, color=_INK,
                  xytext=(1.45 * size * math.sin(angle), 1.45 * size * math.cos(angle)),
                  textcoords="offset points", ha="center", va="center")  # fmt: skip


def _legend_handles(
    incidence: Incidence,
    classes: PlaneClasses,
    styles: dict[tuple[int, int], tuple[str, str, str]],
    sizes: _Sizes,
) -> list[Any]:
    from matplotlib.lines import Line2D

    entries: list[tuple[str, Any, str, str]] = []  # marker, line, colour, words
    if len(classes.groups) <= len(_COLOURS):
        for position, group in enumerate(classes.groups):
            words = f"{_count(len(group), 'plane')} ({classes.name} {position + 1})"
            entries.append(("o", "", _COLOURS[position], words))
    else:
        words = f"planes, in {len(classes.groups)} {_plural(classes.name)}"
        entries.append(("o", "", _COLOURS[0], words))
    entries += [(marker, "-", colour, words) for marker, colour, words in styles.values()]
    pairs = incidence.profile("points").get(2)
    if pairs:
        entries.append(("", "-", _FAINT, f"{_count(pairs, 'point')} on 2 planes"))
    return [
        Line2D(
            [],
            [],
            marker=marker,
            linestyle=line,
            color=colour,
            label=words,
            markersize=sizes.legend,
            linewidth=1.5 * sizes.line,
            markerfacecolor="white" if line else colour,
            markeredgecolor=colour if line else _INK,
        )
        for marker, line, colour, words in entries
    ]


def _count(number: int, noun: str) -> str:
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def _plural(noun: str) -> str:
    return noun + ("es" if noun.endswith("s") else "s")


def matrix_picture(
    incidence: Incidence, classes: PlaneClasses, *, width: float = WIDTH
) -> "Figure":
    """The incidence matrix: planes by groups, points by the number of planes on them.

    Within a block the points are sorted by their planes, so that structure
    shows as pattern. Numbers above the blocks say how many planes are on each
    of their points; lines that planes share follow after the points.

    Parameters
    ----------
    incidence : Incidence
    classes : PlaneClasses
    width : float
        The largest width in centimetres, as in `circle_picture`.

    Returns
    -------
    matplotlib.figure.Figure

    Raises
    ------
    UsageError
        As `circle_picture`.
    """
    configuration = incidence.configuration
    _check_size(configuration)
    order = [i for group in classes.groups for i in group]
    position_of = {i: position for position, i in enumerate(order)}
    flats = list(incidence.points) + list(incidence.lines)
    flats.sort(key=lambda flat: (flat.flat.projective_dimension, -len(flat.planes),
                                 sorted(position_of[i] for i in flat.planes)))  # fmt: skip
    count, columns = len(order), max(len(flats), 1)
    sizes = _Sizes.of(width, count)
    figure = _new_figure(1, 1, sizes.dpi)  # fails early where matplotlib is missing
    labels = _labels(configuration, sizes)
    size = min(sizes.label, 8)
    left = 0.2 + max(_text_width(label, size) for label in labels)
    cell = min(0.24 if not sizes.narrow else sizes.row, (sizes.width - left - 0.1) / columns)
    height = sizes.row * count + 0.95
    across = max(left + cell * columns + 0.1, min(5.2, sizes.width))
    figure.set_size_inches(across, height)
    axes = figure.add_axes(
        (left / across, 0.55 / height, cell * columns / across, sizes.row * count / height)
    )
    from matplotlib.collections import PatchCollection
    from matplotlib.patches import Rectangle

    # Thin cells fill their column: an outline or a gap would vary with the pixels.
    edge, gap = (0.25, 0.06) if cell > 0.06 else (0.0, 0.0)
    for group_position, group in enumerate(classes.groups):
        rectangles = [
            Rectangle((column + gap, position_of[i] + 0.06), 1 - 2 * gap, 0.88)
            for column, flat in enumerate(flats)
            for i in flat.planes
            if i in group
        ]
        colour = _group_colour(group_position, classes)
        cells = PatchCollection(rectangles, facecolor=colour, edgecolor=_INK, linewidth=edge)
        cells.set_snap(False)
        axes.add_collection(cells)
    axes.set_xlim(0, columns)
    axes.set_ylim(count, 0)
    axes.set_yticks([p + 0.5 for p in range(count)], [labels[i] for i in order], fontsize=size)
    axes.set_xticks([])
    axes.tick_params(length=0, pad=3)
    border = 0
    for group in classes.groups[:-1]:
        border += len(group)
        axes.axhline(border, color=_INK, linewidth=0.8)
    _column_blocks(axes, flats, cell, sizes)
    names = _count(len(incidence.points), "point")
    if incidence.lines:
        names += " and " + _count(len(incidence.lines), "line")
    words = f"{names}, by the number of planes (above); planes by {classes.name}"
    figure.text(0.15 / across, 0.2 / height, words, fontsize=sizes.legend, color=_INK)
    return figure


def _column_blocks(axes: Any, flats: Sequence[SharedFlat], cell: float, sizes: _Sizes) -> None:
    """A line between blocks of columns, and the number of planes above each block."""
    starts = [
        j for j in range(len(flats)) if j == 0 or _hub_key(flats[j]) != _hub_key(flats[j - 1])
    ]
    last_centre, raised = -1.0, False
    for start, end in zip(starts, [*starts[1:], len(flats)], strict=True):
        if start:
            axes.axvline(start, color=_INK, linewidth=0.8)
        dimension, planes = _hub_key(flats[start])
        centre = (start + end) / 2
        raised = not raised if (centre - last_centre) * cell < 0.3 and start else False
        words = f"{'line ' if dimension else ''}{planes}"
        axes.annotate(words, (centre, 0), xytext=(0, 14 if raised else 3), fontsize=sizes.legend,
                      textcoords="offset points", ha="center", va="bottom")  # fmt: skip
        last_centre = centre


def save_picture(figure: "Figure", path: str | Path, kind: str) -> None:
    """Write a figure as PNG, SVG or PDF; same figure and same library, same bytes.

    Parameters
    ----------
    figure : matplotlib.figure.Figure
    path : str or Path
    kind : str
        ``"png"``, ``"svg"`` or ``"pdf"``.
    """
    import matplotlib

    metadata: dict[str, dict[str, Any]] = {
        "png": {"Software": None},
        "svg": {"Date": None},
        "pdf": {"CreationDate": None},
    }
    if kind not in metadata:
        raise UsageError(f"pictures are written as {', '.join(FORMATS)}, not as {kind}")
    with matplotlib.rc_context({"svg.hashsalt": "trivector", "font.family": "DejaVu Sans"}):
        figure.savefig(path, format=kind, metadata=metadata[kind])
