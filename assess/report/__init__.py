"""The report: figures and pages over the results; it computes nothing."""

from assess.report.page import render, write_report
from assess.report.planned import write_plan

__all__ = ["render", "write_plan", "write_report"]
