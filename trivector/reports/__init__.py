"""How is it shown?"""

from trivector.reports.examination import examination_report

__all__ = ["examination_report"]
