"""The rules of actions, read from `data/action_rules.toml`: days to decide in, words past them, options."""

from __future__ import annotations

import datetime as dt
import shlex
import tomllib
from functools import cache
from importlib import resources
from typing import Any

from assess.results import ActionOption
from db.action_doc import ActionsDoc

SEVERITIES = ("over", "uplift", "rival", "may_be_over", "pad_over", "foreseen")
"""The gravest first."""


@cache
def _rules() -> dict[str, Any]:
    text = resources.files("assess.workflow").joinpath("data/action_rules.toml").read_text(encoding="utf-8")
    return tomllib.loads(text)


def due(severity: str, found: dt.date, own: ActionsDoc, *, before: dt.date | None = None) -> dt.date:
    """Return the day by which a finding wants a decision: the owner's days, else the rule's.

    Parameters
    ----------
    severity : str
        One of `SEVERITIES`.
    found : date
        The day it was found.
    own : ActionsDoc
        The owner's own days.
    before : date, optional
        A day that it must not pass; one in the past makes it due at once.
    """
    days = getattr(own, severity)
    day = found + dt.timedelta(days=int(_rules()["days"][severity] if days is None else days))
    return day if before is None else max(found, min(day, before))


def escalation(role: str, days_overdue: int, due_on: dt.date, today: dt.date) -> str:
    """Say how pressing an open action is; the longer overdue, the higher it is addressed."""
    if days_overdue <= 0:
        left = (due_on - today).days
        return (
            f"due in {left} day{'s' * (left != 1)}: {role} decides" if left else f"due today: {role} decides"
        )
    level = max(
        (one for one in _rules()["level"] if one["past"] <= days_overdue), key=lambda one: one["past"]
    )
    return f"OVERDUE by {days_overdue} day{'s' * (days_overdue != 1)}: {level['words'].format(role=role)}"


def options(what: str, bridge: str, girder: str) -> list[ActionOption]:
    """Return what could be done about a finding on a section ("capacity"), a "pad" or an "uplift"."""
    quoted, inner = shlex.quote(bridge), girder.replace('"', "'")
    return [
        ActionOption(
            option=one["option"], does=one["does"], command=one["command"].format(bridge=quoted, girder=inner)
        )
        for one in _rules()["option"]
        if what in one["of"]
    ]
