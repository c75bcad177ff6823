"""``trivector planes FILE``: every plane in a subspace, or meeting all given planes."""

import argparse
import json
import sys
import time
from collections.abc import Iterator
from typing import Any, TextIO

from trivector.cli.options import (
    add_certificate,
    add_common,
    add_limits,
    add_sweep,
    limits_from,
    open_output,
    print_report,
    progress,
    write_certificate,
)
from trivector.cli.subspaces import read_subspace

__all__ = ["add_parser", "run"]

# So many planes are held in memory, to be sorted; longer lists stay in sweep order.
_MOST_SORTED = 100_000
_SECONDS_BETWEEN_FLUSHES = 1.0


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    parser = verbs.add_parser(
        "planes",
        help="every plane in a subspace of ∧³V, or meeting all planes of a configuration",
        description="All decomposables in a linear space L: dimension, degree, closed points with "
        "residue field and multiplicity, and the planes over the field of L. Infinite sections "
        "over F_q are listed by a sweep, as a stream.",
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="a subspace or planes; - for stdin")
    add_common(parser)
    add_certificate(parser)
    add_limits(parser)
    add_sweep(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0: answered; 3: a limit was hit; 130: interrupted, what was found is written."""
    from dataclasses import replace

    from trivector.sections import LinearSection, iter_rational_planes, sweep_points

    subspace, title = read_subspace(arguments)
    tell = progress(arguments)
    report = LinearSection(subspace).examine(
        limits=replace(limits_from(arguments), max_points=0), seed=arguments.seed, on_progress=tell
    )
    whole = subspace.dimension == subspace.ambient_dimension
    planes: Iterator[Any] | None = None
    swept = [0, 0]

    def note(done: int, total: int) -> None:
        swept[:] = [done, total]
        tell(f"sweep: {done:,} of {total:,} points")

    if report.planes is not None:
        planes = iter(report.planes)
    elif report.infinite and subspace.field.order is not None and not whole:
        swept[1] = sweep_points(subspace.n, subspace.field.order)
        planes = iter_rational_planes(
            subspace, jobs=arguments.jobs, max_points=arguments.max_points, on_progress=note
        )

    def certificate() -> dict[str, Any]:
        from trivector.certificates import certify_section

        return certify_section(report, title=title, seed=arguments.seed)

    write_certificate(arguments, certificate)
    with open_output(arguments) as file:
        answer = _Answer(file, as_json=arguments.json)
        answer.begin(arguments, report, title, planes is not None)
        finished = _write_planes(answer, planes or iter(()), ordered=report.planes is not None)
        answer.end(None if planes is None else answer.count, finished, swept)
    if not finished:
        where = arguments.output or "standard output"
        print(
            f"trivector: interrupted after {swept[0]:,} of {swept[1]:,} points of the sweep; "
            f"the {answer.count} planes found until then were written to {where}",
            file=sys.stderr,
        )
        return 130
    return 3 if report.limit and planes is None else 0


def _write_planes(answer: "_Answer", planes: Iterator[Any], *, ordered: bool) -> bool:
    """Write planes, sorted unless there are too many to hold; False if interrupted.

    A file gets each plane as it is found and is rewritten in order at the
    end; a pipe gets them at the end, or as they are found once they are many.
    """
    held: list[Any] = []
    direct, last, finished = ordered or answer.seekable, time.monotonic(), True
    try:
        for plane in planes:
            if direct:
                answer.plane(plane)
            if not ordered and len(held) <= _MOST_SORTED:
                held.append(plane)
                if len(held) > _MOST_SORTED and not direct:
                    direct = True
                    for earlier in held:
                        answer.plane(earlier)
            if time.monotonic() - last > _SECONDS_BETWEEN_FLUSHES:
                answer.file.flush()
                last = time.monotonic()
    except KeyboardInterrupt:
        finished = False
    answer.sorted = len(held) <= _MOST_SORTED and (finished or not direct)
    if answer.sorted and not ordered:
        answer.rewind()
        for plane in sorted(held, key=lambda plane: plane.sort_key()):
            answer.plane(plane)
    return finished


class _Answer:
    """One answer on its way out: what precedes the planes, each plane, and the end."""

    def __init__(self, file: TextIO, *, as_json: bool) -> None:
        self.file = file
        self.as_json = as_json
        self.seekable = file is not sys.stdout
        self.count = 0
        self.sorted = True
        self._start = 0

    def begin(self, arguments: argparse.Namespace, report: Any, title: str, listed: bool) -> None:
        """Everything that is known before the planes."""
        space = report.subspace
        if self.as_json:
            section = {
                key: value
                for key, value in report.to_json().items()
                if key not in ("planes", "planes_over_base", "further_planes")
            }
            head = {
                "kind": "section",
                "title": title,
                "field": space.field.to_spec(),
                "dimension": space.n,
                **section,
                "dependent_rows": sorted(space.dependent),
                "seed": arguments.seed,
            }
            self.file.write(json.dumps(head, ensure_ascii=False)[:-1] + ', "planes": ')
            if listed:  # otherwise null: no list at all is not an empty list
                self.file.write("[")
        else:
            from trivector.reports import section_report

            print_report(section_report(report, title), self.file)
            self.file.write("\n")
        self._start = self.file.tell() if self.seekable else 0

    def plane(self, plane: Any) -> None:
        """One plane."""
        if self.as_json:
            comma = ",\n" if self.count else "\n"
            self.file.write(comma + json.dumps(plane.to_entries(), ensure_ascii=False))
        else:
            from trivector.reports import plane_text

            self.file.write(plane_text(plane) + "\n")
        self.count += 1

    def rewind(self) -> None:
        """Back to the first plane."""
        if self.seekable:
            self.file.seek(self._start)
            self.file.truncate()
            self.count = 0

    def end(self, count: int | None, finished: bool, swept: list[int]) -> None:
        """What is known only after the planes; ``count`` None: they were not to be listed."""
        if not self.as_json:
            if not finished:
                self.file.write(f"interrupted after {swept[0]} of {swept[1]} points\n")
            return
        tail = {
            "planes_over_base": count if finished else None,
            "planes_sorted": self.sorted,
            "interrupted": not finished,
            "swept": {"done": swept[0], "total": swept[1]} if swept[1] else None,
        }
        closing = "null" if count is None else "]"
        self.file.write(f"{closing}, " + json.dumps(tail)[1:] + "\n")
