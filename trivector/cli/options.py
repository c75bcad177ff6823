"""Options that mean the same in every verb, and the way answers leave."""

import argparse
import json
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import Any, TextIO

from trivector.errors import UsageError

__all__ = [
    "add_certificate",
    "add_common",
    "add_limits",
    "add_sweep",
    "limits_from",
    "open_output",
    "positive",
    "print_report",
    "progress",
    "write_answer",
    "write_certificate",
]


def add_common(parser: argparse.ArgumentParser) -> None:
    """``--field``, ``--json``, ``--seed``, ``--jobs``, ``--quiet``, ``-o``."""
    parser.add_argument(
        "--field",
        metavar="F",
        help="Q, F_q or a field in JSON; needed for plain text, reduces a document over Q or Q(a)",
    )
    parser.add_argument("--json", action="store_true", help="write JSON instead of a table")
    parser.add_argument(
        "--seed", type=int, default=0, metavar="N", help="for random choices; echoed (default 0)"
    )
    parser.add_argument(
        "--jobs", type=positive, default=1, metavar="N", help="processes to use where it helps"
    )
    parser.add_argument("--quiet", action="store_true", help="no progress on standard error")
    parser.add_argument("-o", dest="output", metavar="FILE", help="write the answer to a file")


def add_limits(parser: argparse.ArgumentParser) -> None:
    """The limits beyond which an answer is "undecided"."""
    group = parser.add_argument_group("limits, beyond which the answer is “undecided”")
    group.add_argument(
        "--max-degree", type=positive, default=12, metavar="N", help="of the Hilbert function"
    )
    group.add_argument(
        "--max-columns", type=positive, default=1200, metavar="N", help="of a matrix"
    )
    group.add_argument(
        "--max-primes", type=positive, default=5, metavar="N", help="tried for data over Q"
    )
    group.add_argument(
        "--max-lift-primes",
        type=positive,
        default=150,
        metavar="N",
        help="combined to find points over Q",
    )


def limits_from(arguments: argparse.Namespace) -> Any:
    """The limits as the engine takes them."""
    from trivector.sections import Limits

    return Limits(
        arguments.max_degree,
        arguments.max_columns,
        arguments.max_primes,
        arguments.max_lift_primes,
    )


def progress(arguments: argparse.Namespace) -> Callable[[str], None]:
    """Progress lines on standard error, only when it is a terminal and not --quiet."""
    if arguments.quiet or not sys.stderr.isatty():
        return lambda _: None
    return lambda line: print(line, file=sys.stderr, flush=True)


def write_answer(
    arguments: argparse.Namespace, data: dict[str, Any], report: Callable[[], Any]
) -> None:
    """JSON with --json, otherwise the report; to -o FILE or standard output."""
    with open_output(arguments) as file:
        if arguments.json:
            json.dump(data, file, ensure_ascii=False)
            file.write("\n")
        else:
            print_report(report(), file)


@contextmanager
def open_output(arguments: argparse.Namespace) -> Iterator[TextIO]:
    """The file of -o, or standard output."""
    if arguments.output is None:
        if sys.stdout is None:
            raise UsageError("standard output is closed; name a file with -o")
        yield sys.stdout
        return
    try:
        file = open(arguments.output, "w", encoding="utf-8")  # noqa: SIM115 - closed below
    except OSError as error:
        raise UsageError(
            f"{arguments.output}: cannot be written ({error.strerror}); name another file"
        ) from None
    with file:
        yield file


def print_report(report: Any, file: TextIO) -> None:
    """A report of the room `reports`, on a terminal or as plain lines."""
    from rich.console import Console

    if file.isatty():
        Console(file=file, highlight=False).print(report)
        return
    # Without a terminal there is no width to respect and nothing to pad for.
    console = Console(file=file, highlight=False, width=1000, color_system=None)
    with console.capture() as capture:
        console.print(report)
    file.writelines(f"{line.rstrip()}\n" for line in capture.get().splitlines())


def add_sweep(parser: argparse.ArgumentParser) -> None:
    """How far a sweep over a finite field may go."""
    parser.add_argument(
        "--max-points",
        type=positive,
        default=2 * 10**8,
        metavar="N",
        help="points that a sweep over F_q may examine (default 2·10^8)",
    )


def add_certificate(parser: argparse.ArgumentParser) -> None:
    """A certificate beside the answer."""
    parser.add_argument(
        "--certificate",
        metavar="FILE",
        help="also write a certificate, which `recheck` and a lone checker can check again",
    )


def write_certificate(arguments: argparse.Namespace, make: Callable[[], dict[str, Any]]) -> None:
    """The certificate to the file of --certificate, when it was asked for."""
    if arguments.certificate is None:
        return
    text = json.dumps(make(), ensure_ascii=False, indent=None, separators=(",", ":"))
    try:
        with open(arguments.certificate, "w", encoding="utf-8") as file:
            file.write(text + "\n")
    except OSError as error:
        raise UsageError(
            f"{arguments.certificate}: cannot be written ({error.strerror}); name another file"
        ) from None


def positive(text: str) -> int:
    """An option's value that must be 1, 2, 3, ….

    Raises
    ------
    argparse.ArgumentTypeError
    """
    value = int(text) if text.isascii() and text.isdigit() else 0
    if value < 1:
        raise argparse.ArgumentTypeError(f"must be a positive integer, not {text!r}")
    return value
