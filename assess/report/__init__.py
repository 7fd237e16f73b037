"""The report and the field card: figures and pages over the results; they compute nothing."""

from assess.report.card import render_card, write_card
from assess.report.network import render_network, write_network
from assess.report.page import render, write_report
from assess.report.planned import write_plan

__all__ = [
    "render",
    "render_card",
    "render_network",
    "write_card",
    "write_network",
    "write_plan",
    "write_report",
]
