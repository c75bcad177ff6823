"""Which decomposables lie in this linear space, over which field, and is that all of them?"""

from trivector.sections.linear_section import LinearSection
from trivector.sections.section_report import ClosedPoint, SectionReport
from trivector.sections.study import Limits

__all__ = ["ClosedPoint", "Limits", "LinearSection", "SectionReport"]
