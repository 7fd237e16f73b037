"""Files a person writes, to and from documents."""

from db.exchange.bridge_toml import parse_bridge, read_bridge
from db.exchange.checks import check_visit
from db.exchange.draft import draft_bridge
from db.exchange.plates_toml import check_losses
from db.exchange.visit_toml import parse_visit, read_visit

__all__ = [
    "check_losses",
    "check_visit",
    "draft_bridge",
    "parse_bridge",
    "parse_visit",
    "read_bridge",
    "read_visit",
]
