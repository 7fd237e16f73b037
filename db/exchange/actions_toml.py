"""The `[actions]` table of a bridge file: the owner's own days to decide in."""

from __future__ import annotations

from dataclasses import fields as fields_of

from db.action_doc import ActionsDoc
from db.exchange.fields import Fields

ACTIONS = " ".join(one.name for one in fields_of(ActionsDoc))
DAYS_PER_YEAR = 365.25
LONGEST_YEARS = 10.0


def actions(top: Fields) -> ActionsDoc:
    """Return the `[actions]` table; what it leaves out is None.

    Raises
    ------
    BedstoneError
        If a value is no duration of 1 day to 10 years.
    """
    if not top.has("actions"):
        return ActionsDoc()
    table = top.subtable("actions", ACTIONS, 'over = "30 days"')
    made: dict[str, int] = {}
    for name in ACTIONS.split():
        if not table.has(name):
            continue
        years = table.positive(name, "duration", example="30 days")
        days = round(years * DAYS_PER_YEAR)
        if days < 1 or years > LONGEST_YEARS:
            raise table.error(
                name, "it is not between 1 day and 10 years", f'write for example {name} = "30 days"'
            )
        made[name] = days
    return ActionsDoc(**made)
