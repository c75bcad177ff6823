"""``trivector symmetries FILE``: the collineations that keep a configuration."""

import argparse
import sys
from typing import Any

from trivector.cli.options import (
    add_certificate,
    add_common,
    add_limits,
    limits_from,
    positive,
    progress,
    write_answer,
    write_certificate,
)
from trivector.errors import UsageError

__all__ = ["add_parser", "add_steps", "run"]


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    parser = verbs.add_parser(
        "symmetries",
        help="the collineations that keep a configuration or a subspace",
        description="The group of collineations, over the field of the data, that permute the "
        "planes (or keep a subspace with finitely many planes): order, generators with their "
        "matrices, orbits, stabilisers.",
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="planes or a subspace; - for stdin")
    parser.add_argument(
        "--semilinear", action="store_true", help="over F_q: admit v ↦ g·v^(p^j) as well"
    )
    parser.add_argument(
        "--fixing", metavar="I,I,…", help="only those that keep each of these planes, such as 0,3"
    )
    add_common(parser)
    add_certificate(parser)
    add_limits(parser)
    add_steps(parser)
    parser.set_defaults(run=run)


def add_steps(parser: argparse.ArgumentParser) -> None:
    """How long a search among the images of planes may go on."""
    parser.add_argument(
        "--max-steps",
        type=positive,
        default=1_000_000,
        metavar="N",
        help="partial images of planes that are tried (default 10^6)",
    )


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0: the group is known; 3: a limit was hit."""
    from trivector.configurations import Configuration
    from trivector.documents import read
    from trivector.subspaces import Subspace
    from trivector.symmetry import collineations, subspace_collineations

    # Exact integers have as many digits as they have.
    sys.set_int_max_str_digits(0)
    document = read(arguments.file, field=arguments.field)
    if isinstance(document, Configuration):
        group = collineations(
            document,
            semilinear=arguments.semilinear,
            fixing=_indices(arguments.fixing),
            limit=arguments.max_steps,
            seed=arguments.seed,
        )
    elif isinstance(document, Subspace):
        if arguments.fixing is not None:
            raise UsageError('--fixing needs a document of kind "planes"')
        group = subspace_collineations(
            document,
            semilinear=arguments.semilinear,
            limits=limits_from(arguments),
            limit=arguments.max_steps,
            seed=arguments.seed,
            on_progress=progress(arguments),
        )
    else:
        raise UsageError(
            f'{arguments.file}: symmetries needs a document of kind "planes" or "subspace"'
        )

    def certificate() -> dict[str, Any]:
        from trivector.certificates import certify_collineations

        reason = "these and those that keep every plane generate all collineations"
        if group.limit is not None:
            reason = f"there may be more collineations: {group.limit}"
        elif group.order is not None:
            reason += f": {group.order}"
        uncertified = [reason]
        source = document if group.base_field is None else group.configuration
        if group.base_field is not None:
            uncertified.append(
                f"the space over {group.base_field.name}: its planes stand here instead"
            )
        title = group.configuration.title or f"the planes in {arguments.file}"
        return certify_collineations(
            source, group.generators, uncertified=uncertified, title=title, seed=arguments.seed
        )

    write_certificate(arguments, certificate)

    def report() -> Any:
        from trivector.reports import symmetry_report

        return symmetry_report(group)

    write_answer(arguments, group.to_json(), report)
    return 0 if group.exhaustive else 3


def _indices(text: str | None) -> list[int]:
    if text is None:
        return []
    parts = [part.strip() for part in text.split(",")]
    wrong = next((part for part in parts if not (part.isascii() and part.isdigit())), None)
    if wrong is not None:
        raise UsageError(f"--fixing: {wrong!r} is not the index of a plane; write for example 0,3")
    return [int(part) for part in parts]
