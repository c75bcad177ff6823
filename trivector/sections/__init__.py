"""Which decomposables lie in this linear space, over which field, and is that all of them?"""

from trivector.sections.linear_section import ClosedPoint, LinearSection, SectionReport
from trivector.sections.study import Limits

__all__ = ["ClosedPoint", "Limits", "LinearSection", "SectionReport"]
