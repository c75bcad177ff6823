"""The linear space that a file names: a subspace, or the planes' orthogonal."""

import argparse
import sys
from typing import Any

from trivector.errors import UsageError

__all__ = ["read_subspace"]


def read_subspace(arguments: argparse.Namespace) -> tuple[Any, str]:
    """L and a title: of a subspace document, or of the planes that meet all given ones."""
    from trivector.configurations import Configuration
    from trivector.documents import read
    from trivector.subspaces import Subspace

    # Exact integers have as many digits as they have.
    sys.set_int_max_str_digits(0)
    document = read(arguments.file, field=arguments.field)
    if isinstance(document, Subspace):
        return document, ""
    if isinstance(document, Configuration):
        title = document.title or arguments.file
        return document.section().subspace, f"Planes that meet all planes of: {title}"
    raise UsageError(
        f'{arguments.file}: {arguments.verb} needs a document of kind "subspace" or "planes"'
    )
