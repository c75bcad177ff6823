"""Options that mean the same in every verb, and the way answers leave."""

import argparse
import json
import sys
from collections.abc import Callable
from typing import Any, TextIO

from trivector.errors import UsageError

__all__ = ["add_common", "add_limits", "limits_from", "progress", "write_answer"]


def add_common(parser: argparse.ArgumentParser) -> None:
    """``--field``, ``--json``, ``--seed``, ``--jobs``, ``--quiet``, ``-o``."""
    parser.add_argument(
        "--field", metavar="F", help="Q or F_p; needed for plain text, reduces a document over Q"
    )
    parser.add_argument("--json", action="store_true", help="write JSON instead of a table")
    parser.add_argument(
        "--seed", type=int, default=0, metavar="N", help="for random choices; echoed (default 0)"
    )
    parser.add_argument(
        "--jobs", type=_positive, default=1, metavar="N", help="processes to use where it helps"
    )
    parser.add_argument("--quiet", action="store_true", help="no progress on standard error")
    parser.add_argument("-o", dest="output", metavar="FILE", help="write the answer to a file")


def add_limits(parser: argparse.ArgumentParser) -> None:
    """The limits beyond which an answer is "undecided"."""
    group = parser.add_argument_group("limits, beyond which the answer is “undecided”")
    group.add_argument(
        "--max-degree", type=_positive, default=12, metavar="N", help="of the Hilbert function"
    )
    group.add_argument(
        "--max-columns", type=_positive, default=1200, metavar="N", help="of a matrix"
    )
    group.add_argument(
        "--max-primes", type=_positive, default=5, metavar="N", help="tried for data over Q"
    )


def limits_from(arguments: argparse.Namespace) -> Any:
    """The limits as the engine takes them."""
    from trivector.sections import Limits

    return Limits(arguments.max_degree, arguments.max_columns, arguments.max_primes)


def progress(arguments: argparse.Namespace) -> Callable[[str], None]:
    """Progress lines on standard error, only when it is a terminal and not --quiet."""
    if arguments.quiet or not sys.stderr.isatty():
        return lambda _: None
    return lambda line: print(line, file=sys.stderr, flush=True)


def write_answer(
    arguments: argparse.Namespace, data: dict[str, Any], report: Callable[[], Any]
) -> None:
    """JSON with --json, otherwise the report; to -o FILE or standard output."""
    if arguments.output is None:
        _write(arguments, data, report, sys.stdout)
        return
    try:
        with open(arguments.output, "w", encoding="utf-8") as file:
            _write(arguments, data, report, file)
    except OSError as error:
        raise UsageError(
            f"{arguments.output}: cannot be written ({error.strerror}); name another file"
        ) from None


def _write(
    arguments: argparse.Namespace, data: dict[str, Any], report: Callable[[], Any], file: TextIO
) -> None:
    if arguments.json:
        json.dump(data, file, ensure_ascii=False)
        file.write("\n")
        return
    from rich.console import Console

    if file.isatty():
        Console(file=file, highlight=False).print(report())
        return
    # Without a terminal there is no width to respect and nothing to pad for.
    console = Console(file=file, highlight=False, width=1000, color_system=None)
    with console.capture() as capture:
        console.print(report())
    file.writelines(f"{line.rstrip()}\n" for line in capture.get().splitlines())


def _positive(text: str) -> int:
    value = int(text) if text.isascii() and text.isdigit() else 0
    if value < 1:
        raise argparse.ArgumentTypeError(f"must be a positive integer, not {text!r}")
    return value
