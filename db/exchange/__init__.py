"""Files a person writes, to and from documents."""

from db.exchange.bridge_toml import parse_bridge, read_bridge
from db.exchange.checks import check_visit
from db.exchange.draft import draft_bridge
from db.exchange.intervention_toml import check_interventions
from db.exchange.plates_toml import check_losses
from db.exchange.plausibility import bridge_queries, visit_queries
from db.exchange.visit_toml import parse_visit, read_visit

__all__ = [
    "bridge_queries",
    "check_interventions",
    "check_losses",
    "check_visit",
    "draft_bridge",
    "parse_bridge",
    "parse_visit",
    "read_bridge",
    "read_visit",
    "visit_queries",
]
