"""Load, compute, keep: the only room that knows both the record and the mechanics."""

from assess.workflow.actions import close_action, list_actions, note_action, show_action
from assess.workflow.assessing import assess
from assess.workflow.calibrating import calibrate
from assess.workflow.fitting import Options
from assess.workflow.intervening import add_intervention, list_interventions, withdraw_intervention
from assess.workflow.planning import plan
from assess.workflow.ranking import network
from assess.workflow.records import (
    add_bridge,
    draft_bridge,
    init_record,
    list_bridges,
    list_visits,
    log_visit,
)
from assess.workflow.shimming import Stock, shim
from assess.workflow.showing import bridge_view, show_bridge
from assess.workflow.study import Progress
from assess.workflow.trending import trend
from assess.workflow.triggers import triggers
from assess.workflow.viewing import report_view
from assess.workflow.visit_draft import draft_visit

__all__ = [
    "Options",
    "Progress",
    "Stock",
    "add_bridge",
    "add_intervention",
    "assess",
    "bridge_view",
    "calibrate",
    "close_action",
    "draft_bridge",
    "draft_visit",
    "init_record",
    "list_actions",
    "list_bridges",
    "list_interventions",
    "list_visits",
    "log_visit",
    "network",
    "note_action",
    "plan",
    "report_view",
    "shim",
    "show_action",
    "show_bridge",
    "trend",
    "triggers",
    "withdraw_intervention",
]
