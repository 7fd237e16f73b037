"""The report: figures and pages over the results; it computes nothing."""

from assess.report.page import render, write_report

__all__ = ["render", "write_report"]
