"""Exact answers about planes in P^5 and the decomposables of linear spaces of trivectors.

Examples
--------
>>> import trivector
>>> configuration = trivector.read("data/twenty-planes.json")
>>> configuration.examine().complete_over_closure
True
"""

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from trivector.configurations import Configuration, Examination, Incidence
    from trivector.documents import read
    from trivector.errors import TrivectorError
    from trivector.exterior import Trivector
    from trivector.fields import QQ, field_from_spec, prime_field
    from trivector.sections import LinearSection
    from trivector.subspaces import Flat, Lagrangian, Plane, Subspace
    from trivector.symmetry import canonical_form, collineations, compare_configurations

__all__ = [
    "QQ",
    "Configuration",
    "Examination",
    "Flat",
    "Incidence",
    "Lagrangian",
    "LinearSection",
    "Plane",
    "Subspace",
    "Trivector",
    "TrivectorError",
    "__version__",
    "canonical_form",
    "collineations",
    "compare_configurations",
    "field_from_spec",
    "prime_field",
    "read",
]

__version__ = "0.1.0"

# Names are resolved when first used, so that `import trivector` stays light.
_HOMES = {
    "Configuration": "trivector.configurations",
    "Examination": "trivector.configurations",
    "Flat": "trivector.subspaces",
    "Incidence": "trivector.configurations",
    "Lagrangian": "trivector.subspaces",
    "LinearSection": "trivector.sections",
    "Plane": "trivector.subspaces",
    "QQ": "trivector.fields",
    "Subspace": "trivector.subspaces",
    "Trivector": "trivector.exterior",
    "TrivectorError": "trivector.errors",
    "canonical_form": "trivector.symmetry",
    "collineations": "trivector.symmetry",
    "compare_configurations": "trivector.symmetry",
    "field_from_spec": "trivector.fields",
    "prime_field": "trivector.fields",
    "read": "trivector.documents",
}


def __getattr__(name: str) -> Any:
    home = _HOMES.get(name)
    if home is None:
        raise AttributeError(f"module 'trivector' has no attribute {name!r}")
    value = getattr(import_module(home), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted(__all__)
