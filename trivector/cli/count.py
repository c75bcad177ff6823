"""``trivector count FILE``: how many planes, over extensions or modulo primes."""

import argparse
from typing import Any

from trivector.cli.options import (
    add_common,
    add_limits,
    add_sweep,
    limits_from,
    positive,
    progress,
    write_answer,
)
from trivector.cli.subspaces import read_subspace
from trivector.errors import UsageError

__all__ = ["add_parser", "run"]


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    parser = verbs.add_parser(
        "count",
        help="how many planes, over F_q and its extensions or modulo primes",
        description="Numbers of planes in a subspace (or meeting all planes of a configuration): "
        "over a finite field and its extensions, or for data over Q modulo primes.",
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="a subspace or planes; - for stdin")
    parser.add_argument(
        "--extensions", type=positive, metavar="N", help="over F_q, F_q^2, …, F_q^N (default 1)"
    )
    parser.add_argument("--primes", metavar="P,P,…", help="for data over Q, such as 3,5,7")
    add_common(parser)
    add_limits(parser)
    add_sweep(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0; whatever cannot be counted is refused with a reason."""
    from trivector.sections import count_modulo_primes, count_over_extensions

    subspace, title = read_subspace(arguments)
    field = subspace.field
    common: dict[str, Any] = {
        "limits": limits_from(arguments),
        "max_points": arguments.max_points,
        "jobs": arguments.jobs,
        "on_progress": progress(arguments),
    }
    data: dict[str, Any] = {"kind": "count", "title": title, "field": field.to_spec()}
    if arguments.primes is not None:
        if arguments.extensions is not None:
            raise UsageError("--primes and --extensions do not go together; give one of them")
        counts = count_modulo_primes(subspace, _primes(arguments.primes), **common)
        data["primes"] = {str(c.prime): c.count for c in counts}
        data["bad_primes"] = [c.prime for c in counts if c.why_bad]
        data["why_bad"] = {str(c.prime): c.why_bad for c in counts if c.why_bad}
        lines = [
            f"modulo {c.prime}: {c.count}" + (f" (bad prime: {c.why_bad})" if c.why_bad else "")
            for c in counts
        ]
    elif field.order is None and arguments.extensions is None:
        raise UsageError(
            f"{arguments.file} is over {field.name}; say --primes 3,5,7 or --field F_q"
        )
    else:
        found = count_over_extensions(subspace, arguments.extensions or 1, **common)
        data["counts"] = {str(j): number for j, number in found.items()}
        name = field.name
        lines = [
            f"over {name if j == 1 else f'the extension of degree {j} of {name}'}: {number}"
            for j, number in found.items()
        ]
    write_answer(arguments, data, lambda: "\n".join([title, *lines] if title else lines))
    return 0


def _primes(text: str) -> list[int]:
    parts = [part.strip() for part in text.split(",")]
    wrong = next((part for part in parts if not (part.isascii() and part.isdigit())), None)
    if wrong is not None:
        raise UsageError(f"--primes: {wrong!r} is not a number; write for example 3,5,7")
    return [int(part) for part in parts]
