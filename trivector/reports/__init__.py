"""How is it shown?"""

from trivector.reports.blocks import plane_text
from trivector.reports.examination import examination_report
from trivector.reports.recheck import recheck_report
from trivector.reports.section import section_report
from trivector.reports.symmetry import (
    comparison_report,
    exchange_report,
    incidence_report,
    symmetry_report,
)

__all__ = [
    "comparison_report",
    "examination_report",
    "exchange_report",
    "incidence_report",
    "plane_text",
    "recheck_report",
    "section_report",
    "symmetry_report",
]
