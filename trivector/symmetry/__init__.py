"""Which collineations keep a configuration; are two of them the same?"""

from trivector.symmetry.collineations import Collineation, CollineationGroup, collineations

__all__ = ["Collineation", "CollineationGroup", "collineations"]
