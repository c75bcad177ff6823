"""The command ``trivector``: parse, run one verb, turn errors into lines and exit codes."""

import argparse
import os
import sys
from collections.abc import Sequence
from typing import NoReturn

from trivector import __version__
from trivector.cli import compare, count, examine, graph, make, planes, recheck, symmetries
from trivector.errors import DocumentError, TrivectorError, UsageError

__all__ = ["build_parser", "main"]

_EPILOG = """\
Exit codes: 0 yes or done; 1 no; 2 bad input or usage; 3 undecided within the limits.
"""


class _Parser(argparse.ArgumentParser):
    """An argument parser whose errors are one line and go the way of all others."""

    def error(self, message: str) -> NoReturn:
        raise UsageError(f"{message}; see {self.prog} --help")


def build_parser() -> argparse.ArgumentParser:
    """The whole grammar of the command line. Loads nothing heavy."""
    parser = _Parser(
        prog="trivector",
        description="Exact answers about planes in P^5 and the planes inside Lagrangian subspaces.",
        epilog=_EPILOG,
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"trivector {__version__}")
    verbs = parser.add_subparsers(title="verbs", metavar="VERB", dest="verb", required=True)
    for verb in (examine, planes, count, graph, symmetries, compare, make, recheck):
        verb.add_parser(verbs)
    return parser


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command; the return value is the exit code."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")
    try:
        arguments = build_parser().parse_args(argv)
        code: int = arguments.run(arguments)
        if sys.stdout is not None:
            sys.stdout.flush()
    except TrivectorError as error:
        faults = error.faults if isinstance(error, DocumentError) else (str(error),)
        for fault in faults:
            print(f"trivector: {_on_one_line(fault)}", file=sys.stderr)
        return error.exit_code
    except KeyboardInterrupt:
        print("trivector: interrupted; nothing was written", file=sys.stderr)
        return 130
    except BrokenPipeError:
        # The reader has gone, as in `trivector … | head`; nothing is left to say.
        _silence_output()
        return 0
    except OSError as error:
        print(f"trivector: the answer cannot be written ({error.strerror})", file=sys.stderr)
        _silence_output()
        return 2
    return code


def _on_one_line(text: str) -> str:
    """Control characters in quoted input must not break the line."""
    return "".join(c if c.isprintable() else repr(c)[1:-1] for c in text)


def _silence_output() -> None:
    """Send what is left in standard output nowhere, or Python flushes it again at exit."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
