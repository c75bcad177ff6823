"""The examination of a configuration, for people at a terminal."""

from collections.abc import Iterable

from rich.console import Group, RenderableType
from rich.text import Text

from trivector.configurations import Examination
from trivector.reports.blocks import answer, block, plane_text, section_lines

__all__ = ["examination_report"]

_MOST_PAIRS = 12
_MOST_PLANES = 12
_MOST_PLANES = 12


def examination_report(examination: Examination) -> RenderableType:
    """What was asked, what holds, over which field, and why.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    return Group(
        *_heading(examination),
        *block("Incidence", f"over {_everywhere(examination)}", _incidence(examination)),
        *block("Span in ∧³V", f"over {_everywhere(examination)}", _span(examination)),
        *block(
            "Planes that meet all of them",
            _section_name(examination),
            section_lines(examination.section),
        ),
        *block("Complete", "no further plane meets all of them", _completeness(examination)),
    )


def _heading(examination: Examination) -> Iterable[RenderableType]:
    if examination.title:
        yield Text(examination.title, style="bold")
    count, distinct = len(examination.planes), examination.distinct
    different = "" if distinct == count else f", {distinct} of them distinct"
    noun = "plane" if count == 1 else "planes"
    yield Text(f"{count} {noun} of P^{examination.n - 1} over {examination.field.name}{different}")


def _everywhere(examination: Examination) -> str:
    return f"{examination.field.name} and every extension of it"


def _name(examination: Examination, index: int) -> str:
    return f"{index} ({examination.labels[index]})" if examination.labels else str(index)


def _incidence(examination: Examination) -> Iterable[tuple[str, str]]:
    yield "pairwise incident", answer(examination.pairwise_incident)
    pairs = examination.pairs
    words = {
        "equal": pairs.equal,
        "share a line": pairs.line,
        "share exactly a point": pairs.point,
        "disjoint": pairs.disjoint,
    }
    counted = ", ".join(f"{count} {word}" for word, count in words.items() if count)
    yield "pairs", counted or "none"
    shown = examination.disjoint_pairs[:_MOST_PAIRS]
    if shown:
        named = "; ".join(f"{_name(examination, i)} and {_name(examination, j)}" for i, j in shown)
        rest = len(examination.disjoint_pairs) - len(shown)
        yield "disjoint pairs", named + (f"; and {rest} more" if rest else "")


def _span(examination: Examination) -> Iterable[tuple[str, str]]:
    yield "dimension", str(examination.span.dimension)
    if examination.isotropic is None:
        yield "isotropic", "does not apply: ∧³V has no pairing for dim V = 7"
        return
    pair = examination.offending_pair
    because = (
        ""
        if pair is None
        else f": basis vectors {pair.first} and {pair.second} of the echelon form pair to "
        f"{examination.field.format(pair.value)}"
    )
    yield "isotropic", answer(examination.isotropic) + because
    yield "Lagrangian", answer(examination.lagrangian)
    if examination.totally_singular is not None:
        yield "totally singular", answer(examination.totally_singular)


def _section_name(examination: Examination) -> str:
    dimension = examination.section.subspace.dimension
    return f"the section of G(3,{examination.n}) by L = span^⊥, dim L = {dimension}"


def _completeness(examination: Examination) -> Iterable[tuple[str, str]]:
    section = examination.section
    if not examination.pairwise_incident:
        yield "does not apply", "the configuration is not pairwise incident"
    else:
        yield f"over {examination.field.name}", answer(examination.complete_over_base)
        yield f"over {section.scope}", answer(examination.complete_over_closure)
    if section.method:
        yield "because", section.method
    if examination.missing:
        count = len(examination.missing)
        all_of_them = "all" if section.planes is not None else "found so far, maybe not all"
        yield f"missing over {examination.field.name}", f"{count} ({all_of_them})"
        for plane in examination.missing[:_MOST_PLANES]:
            yield "", plane_text(plane)
        if count > _MOST_PLANES:
            yield "", f"… and {count - _MOST_PLANES} more; --json lists them"
    if section.limit:
        yield "limit hit", section.limit
