from __future__ import annotations

import pytest

from db.action_doc import ActionsDoc
from db.exchange import parse_bridge
from tests.db.conftest import changed, line_of


def read(text: str, table: str, head: str = ""):
    whole = changed(text, "[bridge]", f"[bridge]\n{head}") + f"\n{table}\n"
    return parse_bridge(whole, file="bridge.toml")


def test_the_owners_days_and_role_are_read(bridge_text: str) -> None:
    bridge = read(
        bridge_text, '[actions]\nover = "14 days"\nforeseen = "1 year"', 'owner_role = "bridge engineer"'
    )
    assert bridge.actions == ActionsDoc(over=14, foreseen=365)
    assert bridge.owner_role == "bridge engineer"


def test_without_them_the_rule_and_the_engineer_in_charge_stand(bridge_text: str) -> None:
    bridge = read(bridge_text, "")
    assert (bridge.actions, bridge.owner_role) == (ActionsDoc(), "the engineer in charge")


@pytest.mark.parametrize(
    ("table", "said"),
    [
        ("over = 30", "over"),
        ('over = "30 kN"', "over"),
        ('over = "0.1 days"', "not between 1 day and 10 years"),
        ('over = "11 years"', "not between 1 day and 10 years"),
        ('ovr = "30 days"', 'did you mean "over"?'),
    ],
)
def test_what_is_no_such_duration_is_refused(bridge_text: str, table: str, said: str) -> None:
    line = line_of(lambda: read(bridge_text, f"[actions]\n{table}"))
    assert line.startswith("bridge.toml, actions")
    assert said in line
