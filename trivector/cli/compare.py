"""``trivector compare FILE FILE``: are two configurations projectively equivalent?"""

import argparse
import sys
from typing import Any

from trivector.cli.options import (
    add_certificate,
    add_common,
    add_limits,
    limits_from,
    progress,
    write_answer,
    write_certificate,
)
from trivector.cli.symmetries import add_steps
from trivector.errors import UsageError

__all__ = ["add_parser", "run"]


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    parser = verbs.add_parser(
        "compare",
        help="are two configurations (or subspaces) projectively equivalent",
        description="Whether a collineation carries one to the other, over the field of the data "
        "and over its closure: the matrix and the permutation, or what tells them apart.",
        allow_abbrev=False,
    )
    parser.add_argument("first", metavar="FILE", help="planes or a subspace; - for stdin")
    parser.add_argument("second", metavar="FILE", help="another one of the same kind")
    parser.add_argument(
        "--semilinear", action="store_true", help="over F_q: admit v ↦ g·v^(p^j) as well"
    )
    add_common(parser)
    add_certificate(parser)
    add_limits(parser)
    add_steps(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0: equivalent over the field; 1: not; 3: undecided."""
    from trivector.configurations import Configuration
    from trivector.documents import read
    from trivector.subspaces import Subspace
    from trivector.symmetry import compare_configurations, compare_subspaces

    if arguments.first == arguments.second == "-":
        raise UsageError("only one of the two files can be standard input; name the other")
    # Exact integers have as many digits as they have.
    sys.set_int_max_str_digits(0)
    first = read(arguments.first, field=arguments.field)
    second = read(arguments.second, field=arguments.field)
    if isinstance(first, Configuration) and isinstance(second, Configuration):
        comparison = compare_configurations(
            first,
            second,
            semilinear=arguments.semilinear,
            limit=arguments.max_steps,
            seed=arguments.seed,
        )
    elif isinstance(first, Subspace) and isinstance(second, Subspace):
        comparison = compare_subspaces(
            first,
            second,
            semilinear=arguments.semilinear,
            limits=limits_from(arguments),
            limit=arguments.max_steps,
            seed=arguments.seed,
            on_progress=progress(arguments),
        )
    else:
        raise UsageError(
            f"{arguments.first}, {arguments.second}: compare needs two documents of kind "
            '"planes", or two of kind "subspace"'
        )

    def certificate() -> dict[str, Any]:
        from trivector.certificates import certify_collineations

        found = comparison.collineation
        answer = "undecided" if comparison.equivalent is None else "not equivalent"
        return certify_collineations(
            first,
            [] if found is None else [found],
            target=second,
            uncertified=[] if found else [f"{answer}: {comparison.difference or comparison.limit}"],
            title=f"{arguments.first} and {arguments.second}",
            seed=arguments.seed,
        )

    write_certificate(arguments, certificate)

    def report() -> Any:
        from trivector.reports import comparison_report

        return comparison_report(comparison)

    write_answer(arguments, comparison.to_json(), report)
    return comparison.exit_code
