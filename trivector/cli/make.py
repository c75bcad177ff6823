"""``trivector make KIND``: a family, an example, or a random object, as a document."""

import argparse
import sys
from random import Random
from shlex import quote
from typing import Any

from trivector import __version__
from trivector.cli.kinds import KINDS, Kind, Made, Request
from trivector.cli.options import add_common, open_output, positive
from trivector.errors import UsageError

__all__ = ["add_parser", "run"]


_OPTIONS: dict[str, dict[str, Any]] = {
    "members": {
        "type": positive,
        "metavar": "N",
        "help": "N members of a family in place of its Lagrangian; how many trivectors",
    },
    "planes": {"type": positive, "metavar": "K", "help": "how many planes"},
    "through": {"metavar": "FILE", "help": "planes that the Lagrangian is to contain"},
    "meeting": {"metavar": "FILE", "help": "up to six planes that the plane is to meet"},
    "dimension": {"type": positive, "metavar": "M", "help": "of the subspace"},
    "orbit": {
        "metavar": "NAME",
        "help": "zero, decomposable, divisible, tangent, split or nonsplit",
    },
    "curve": {
        "metavar": "TEXT",
        "help": "its components, E1 … E4, L12 … L34 and equations, such as 'E1; L23; x*y-2*z^2'; "
        "or one sextic with double points at (1:0:0), (0:1:0), (0:0:1), (1:1:1)",
    },
    "length": {"type": positive, "metavar": "N", "help": "how many planes over the closure"},
    "rational": {
        "action": "store_const",
        "const": True,
        "help": "with --length: draw until all planes are over the field",
    },
    "lagrangian": {
        "action": "store_const",
        "const": True,
        "help": "the Lagrangian also where all planes are over the field",
    },
    "change": {"choices": ["random"], "help": "of the coordinates"},
    "height": {
        "type": positive,
        "metavar": "H",
        "help": "over Q and number fields: the size of the numbers that are drawn",
    },
}


def add_parser(verbs: Any) -> None:
    """Add the verb to the grammar."""
    widest = max(map(len, KINDS))
    lines = [
        f"  {kind.name:{widest}}  {kind.text}  [{' '.join(f'--{x}' for x in kind.options)}]"
        for kind in KINDS.values()
    ]
    parser = verbs.add_parser(
        "make",
        help="a family, an example, or a random object, as a document",
        description="Write a document that the other verbs read. For a family that is its "
        "Lagrangian, or with --members some of its planes. Random Lagrangians, also those\nthrough "
        "given planes, random planes, subspaces and trivectors of an orbit are uniform over a\n"
        "finite field; nothing is claimed of a random plane that meets given ones.",
        epilog="\n".join(["kinds, with the options that they take:", *lines]),
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    parser.add_argument("kind", metavar="KIND", help="one of those below")
    for option, keywords in _OPTIONS.items():
        parser.add_argument(f"--{option}", **keywords)
    add_common(parser)
    parser.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Exit code 0: made; whatever cannot be made is refused with a reason."""
    kind = KINDS.get(arguments.kind)
    if kind is None:
        raise UsageError(
            f"kind {arguments.kind[:40]!r} is unknown; it is one of {', '.join(KINDS)}"
        )
    given = [option for option in _OPTIONS if getattr(arguments, option) is not None]
    for option in given:
        if option not in kind.options:
            known = ", ".join(f"--{x}" for x in kind.options)
            raise UsageError(f"make {kind.name} has no option --{option}; it takes {known}")

    from trivector.documents import document_text, to_document, wanted_field

    # Exact integers have as many digits as they have.
    sys.set_int_max_str_digits(0)
    field = wanted_field(kind.field if arguments.field is None else arguments.field)
    if arguments.height is not None and field.order is not None:
        raise UsageError(f"--height is for infinite fields, not for {field.name}; leave it out")
    made = kind.make(Request(arguments, field, Random(arguments.seed)))
    title = _title(kind, arguments)
    if isinstance(made, Made):
        made, title = made.thing, made.title
    document = to_document(made, title=title, source=_source(kind, arguments))
    with open_output(arguments) as file:
        file.write(document_text(document))
    return 0


def _title(kind: Kind, arguments: argparse.Namespace) -> str:
    text = kind.text[0].upper() + kind.text[1:]
    return text if arguments.members is None else f"{arguments.members} {kind.text}"


def _source(kind: Kind, arguments: argparse.Namespace) -> str:
    """The command that makes the document again."""
    words = ["trivector make", kind.name]
    options = ["field", *_OPTIONS]
    drawn = ("members", "change") if kind.name != "del-pezzo" else ("length", "change")
    if kind.random or any(getattr(arguments, option) is not None for option in drawn):
        options.append("seed")
    for option in options:
        value = getattr(arguments, option)
        if value is not None:
            words.append(f"--{option}" if value is True else f"--{option} {quote(str(value))}")
    return f"{' '.join(words)} (version {__version__})"
