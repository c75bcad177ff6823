"""What can go wrong, and what does the person do then?

Every class names one situation, is a built-in exception as well, and carries
the exit code of the command line. Every message says where, what was
required, what was found and what to do.
"""

from collections.abc import Iterable

__all__ = [
    "BadReductionError",
    "DependentRowsError",
    "DimensionError",
    "DocumentError",
    "EntryError",
    "FieldError",
    "MixedFieldsError",
    "NotDecomposableError",
    "NotLagrangianError",
    "TrivectorError",
    "UndecidedError",
    "UsageError",
]


class TrivectorError(Exception):
    """Anything this package refuses. Catch this one to catch them all."""

    exit_code: int = 2


class UsageError(TrivectorError, ValueError):
    """A command or a function was asked something that makes no sense."""


class FieldError(TrivectorError, ValueError):
    """A field that does not exist, or that is not supported."""


class EntryError(TrivectorError, ValueError):
    """An entry that is not an element of the field."""


class MixedFieldsError(TrivectorError, TypeError):
    """Objects over different fields, or of different V, were put together."""


class DimensionError(TrivectorError, ValueError):
    """A vector or a matrix of the wrong shape."""


class DependentRowsError(TrivectorError, ValueError):
    """Rows that should be a basis and are not."""


class NotDecomposableError(TrivectorError, ValueError):
    """A trivector that was to be a plane and violates a Plücker relation."""


class NotLagrangianError(TrivectorError, ValueError):
    """A subspace that was to be Lagrangian and is not."""


class BadReductionError(TrivectorError, ZeroDivisionError):
    """Data that cannot be reduced modulo this prime."""


class UndecidedError(TrivectorError, RuntimeError):
    """A question whose answer is not known; the message says what is missing."""

    exit_code = 3


class DocumentError(TrivectorError, ValueError):
    """A file with faults; ``faults`` holds one sentence for each of them.

    Parameters
    ----------
    faults : iterable of str
        At least one; each names the place, the requirement, the offending
        value and what to do.
    """

    def __init__(self, faults: Iterable[str]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(self.faults))
