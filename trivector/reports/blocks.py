"""Titled blocks of lines, and the lines that describe a section."""

from collections import Counter
from collections.abc import Iterable, Sequence

from rich.console import RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from trivector.sections import ClosedPoint, SectionReport
from trivector.subspaces import Plane

__all__ = ["answer", "block", "plane_text", "section_lines"]

_LONGEST_NAME = 60


def block(name: str, scope: str, rows: Iterable[tuple[str, str]]) -> Iterable[RenderableType]:
    """A title with its scope, and under it a table of names and values."""
    yield Text()
    yield Text.assemble((name, "bold"), (f"  ({scope})", "dim"))
    table = Table.grid(padding=(0, 2))
    table.add_column(no_wrap=True)
    table.add_column(overflow="fold")
    for key, value in rows:
        table.add_row(key, Text(value))
    yield Padding(table, (0, 0, 0, 2))


def answer(value: bool | None) -> str:
    """``"yes"``, ``"no"`` or ``"undecided"``."""
    return {True: "yes", False: "no", None: "undecided"}[value]


def section_lines(section: SectionReport) -> Iterable[tuple[str, str]]:
    """Dimension, degree, Hilbert function, points and planes, as far as known."""
    if section.projective_dimension is not None:
        word = {-1: "empty", 0: "finite"}.get(
            section.projective_dimension, f"infinite, of dimension {section.projective_dimension}"
        )
        yield "section", word
    else:
        yield "section", "infinite" if section.infinite else "undecided"
    if section.degree is not None:
        yield "degree", f"{section.degree}, multiplicities counted"
    if section.hilbert_function is not None:
        more = "" if section.hilbert_function[-1] == 0 else ", …"
        yield "Hilbert function", ", ".join(map(str, section.hilbert_function)) + more
    if section.projective_dimension and section.hilbert_polynomial is not None:
        yield "Hilbert polynomial", str(section.hilbert_polynomial)
    if section.reduced is not None:
        yield "reduced", answer(section.reduced)
    if section.points:
        yield "closed points", "; ".join(_point_classes(section.points))
    if section.planes is not None:
        yield f"planes over {section.subspace.field.name}", str(len(section.planes))
    if section.planes_over_closure is not None:
        yield f"planes over {section.scope}", str(section.planes_over_closure)
    if section.multiplicities and set(section.multiplicities) != {1}:
        yield (
            "multiplicities",
            ", ".join("not isolated" if m is None else str(m) for m in section.multiplicities),
        )
    if section.further and section.known:
        yield (
            "not among the given",
            f"{section.further} over {section.scope}, counted with multiplicity",
        )


def _point_classes(points: Sequence[ClosedPoint]) -> Iterable[str]:
    """``"17 of degree 1"``, ``"1 of degree 2 and multiplicity 3 over Q(a), a^2-2 = 0"``."""
    classes = Counter((point.degree, point.multiplicity, _residue_name(point)) for point in points)
    for (degree, multiplicity, name), count in classes.items():
        times = f" and multiplicity {multiplicity}" if multiplicity > 1 else ""
        yield f"{count} of degree {degree}{times}{name}"


def _residue_name(point: ClosedPoint) -> str:
    if point.degree == 1 or point.residue_field is None:
        return ""
    name = point.residue_field.name
    return f" over {name}" if len(name) <= _LONGEST_NAME else ""


def plane_text(plane: Plane) -> str:
    """The rows of a plane on one line: ``1 0 0 2 0 0 | 0 1 0 0 3 0 | 0 0 1 0 0 4``."""
    return " | ".join(" ".join(str(x) for x in row) for row in plane.to_entries())
