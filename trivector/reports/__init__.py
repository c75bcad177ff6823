"""How is it shown?"""

from trivector.reports.blocks import plane_text
from trivector.reports.examination import examination_report
from trivector.reports.recheck import recheck_report
from trivector.reports.section import section_report

__all__ = ["examination_report", "plane_text", "recheck_report", "section_report"]
