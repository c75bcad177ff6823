"""A section and its planes, for people at a terminal."""

from rich.console import Group, RenderableType
from rich.text import Text

from trivector.reports.blocks import answer, block, section_lines
from trivector.sections import SectionReport

__all__ = ["section_report"]


def section_report(section: SectionReport, title: str = "") -> RenderableType:
    """L, its section, and what kind of points it has; the planes follow as lines.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    space = section.subspace
    heading = [Text(title, style="bold")] if title else []
    lines = [("dimension", str(space.dimension))]
    if space.dependent:
        named = ", ".join(f"row {i}" for i in sorted(space.dependent))
        lines.append(("dropped", f"{named}: dependent on rows before"))
    if space.n == 6:
        lines.append(("isotropic", answer(space.is_isotropic())))
        lines.append(("Lagrangian", answer(space.is_lagrangian())))
    why = [("because", section.method)] if section.method else []
    if section.limit:
        why.append(("limit hit", section.limit))
    return Group(
        *heading,
        *block("L ⊂ ∧³V", f"dim V = {space.n}, over {space.field.name}", lines),
        *block(
            f"G(3,{space.n}) ∩ P(L)",
            f"over {space.field.name} and {section.scope}",
            [*section_lines(section), *why],
        ),
    )
