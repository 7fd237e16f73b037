"""Open actions on the page: they stand first, the most pressing one at the top."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from assess.report import words
from assess.results import ActionResult


@dataclass(frozen=True, kw_only=True)
class ActionLine:
    """An open action as it is printed."""

    head: str
    finding: str
    closes: str


def action_lines(actions: Sequence[ActionResult], names: Sequence[str]) -> list[ActionLine]:
    """Return the open actions in words, in the order given; `names` are the supports of the bridge."""
    return [
        ActionLine(
            head=words.prose(f"Action {one.action}{_again(one)}, {one.escalation}.", names),
            finding=words.prose(
                f"Girder {one.girder}, {one.where}: {one.finding}; opened on {one.opened_on}", names
            ),
            closes=words.prose(one.check_reading, names),
        )
        for one in actions
    ]


def _again(one: ActionResult) -> str:
    return "" if one.reopens is None else f" (again, after action {one.reopens})"
