"""The examination of a configuration, for people at a terminal."""

from collections.abc import Iterable

from rich.console import Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from trivector.configurations import Examination

__all__ = ["examination_report"]

_MOST_PAIRS = 12


def examination_report(examination: Examination) -> RenderableType:
    """What was asked, what holds, over which field, and why.

    Returns
    -------
    RenderableType
        For ``rich.console.Console.print``.
    """
    return Group(
        *_heading(examination),
        *_block("Incidence", f"over {_everywhere(examination)}", _incidence(examination)),
        *_block("Span in ∧³V", f"over {_everywhere(examination)}", _span(examination)),
        *_block("Planes that meet all of them", _section_name(examination), _section(examination)),
        *_block("Complete", "no further plane meets all of them", _completeness(examination)),
    )


def _heading(examination: Examination) -> Iterable[RenderableType]:
    if examination.title:
        yield Text(examination.title, style="bold")
    count, distinct = len(examination.planes), examination.distinct
    different = "" if distinct == count else f", {distinct} of them distinct"
    noun = "plane" if count == 1 else "planes"
    yield Text(f"{count} {noun} of P^{examination.n - 1} over {examination.field.name}{different}")


def _block(name: str, scope: str, rows: Iterable[tuple[str, str]]) -> Iterable[RenderableType]:
    yield Text()
    yield Text.assemble((name, "bold"), (f"  ({scope})", "dim"))
    table = Table.grid(padding=(0, 2))
    table.add_column(no_wrap=True)
    table.add_column(overflow="fold")
    for key, value in rows:
        table.add_row(key, Text(value))
    yield Padding(table, (0, 0, 0, 2))


def _everywhere(examination: Examination) -> str:
    return f"{examination.field.name} and every extension of it"


def _answer(value: bool | None) -> str:
    return {True: "yes", False: "no", None: "undecided"}[value]


def _name(examination: Examination, index: int) -> str:
    return f"{index} ({examination.labels[index]})" if examination.labels else str(index)


def _incidence(examination: Examination) -> Iterable[tuple[str, str]]:
    yield "pairwise incident", _answer(examination.pairwise_incident)
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
    yield "isotropic", _answer(examination.isotropic) + because
    yield "Lagrangian", _answer(examination.lagrangian)
    if examination.totally_singular is not None:
        yield "totally singular", _answer(examination.totally_singular)


def _section_name(examination: Examination) -> str:
    dimension = examination.section.subspace.dimension
    return f"the section of G(3,{examination.n}) by L = span^⊥, dim L = {dimension}"


def _section(examination: Examination) -> Iterable[tuple[str, str]]:
    section = examination.section
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
        yield "reduced", _answer(section.reduced)
    if section.multiplicities and set(section.multiplicities) != {1}:
        yield (
            "multiplicities",
            ", ".join("not isolated" if m is None else str(m) for m in section.multiplicities),
        )
    if section.further:
        yield (
            "further planes",
            (f"{section.further} over {section.scope}, counted with multiplicity"),
        )


def _completeness(examination: Examination) -> Iterable[tuple[str, str]]:
    section = examination.section
    if not examination.pairwise_incident:
        yield "does not apply", "the configuration is not pairwise incident"
    else:
        yield f"over {examination.field.name}", _answer(examination.complete_over_base)
        yield f"over {section.scope}", _answer(examination.complete_over_closure)
    if section.method:
        yield "because", section.method
    if section.limit:
        yield "limit hit", section.limit
