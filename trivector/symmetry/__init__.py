"""Which collineations keep a configuration; are two of them the same?"""

from trivector.symmetry.canonical import CanonicalForm, canonical_form, equivalence_classes
from trivector.symmetry.collineations import Collineation, CollineationGroup, collineations
from trivector.symmetry.comparison import (
    Comparison,
    compare_configurations,
    distinguishing_invariant,
)
from trivector.symmetry.lagrangians import compare_subspaces, subspace_collineations

__all__ = [
    "CanonicalForm",
    "Collineation",
    "CollineationGroup",
    "Comparison",
    "canonical_form",
    "collineations",
    "compare_configurations",
    "compare_subspaces",
    "distinguishing_invariant",
    "equivalence_classes",
    "subspace_collineations",
]
