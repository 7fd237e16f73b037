"""The `[[intervention]]` tables of a bridge file: pads replaced, seats jacked or shimmed."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from db.documents import BridgeDoc, GirderDoc
from db.errors import BedstoneError
from db.exchange.fields import Fields
from db.intervention_doc import INTERVENTION_KINDS, InterventionDoc
from db.wording import shown

_INTERVENTION = "date kind girder support remark"


def interventions(top: Fields, girders: Sequence[GirderDoc]) -> tuple[InterventionDoc, ...]:
    """Return the interventions, by date.

    Raises
    ------
    BedstoneError
        If one names no support of the bridge, replaces what is no pad, or stands there twice.
    """
    made: list[InterventionDoc] = []
    for fields in top.tables("intervention", "intervention", _INTERVENTION, by_number=True):
        one = _intervention(fields, girders)
        if any(
            (x.date, x.girder, x.support, x.kind) == (one.date, one.girder, one.support, one.kind)
            for x in made
        ):
            raise fields.error("date", "this intervention stands in the file twice", "leave one of them out")
        made.append(one)
    return tuple(sorted(made, key=lambda one: one.date))


def _intervention(fields: Fields, girders: Sequence[GirderDoc]) -> InterventionDoc:
    fields.need("date", "2019-10-04")
    date = fields.date("date")
    assert date is not None
    kind = fields.one_of("kind", INTERVENTION_KINDS)
    name = fields.reference("girder", [one.id for one in girders], "girder")
    girder = next(one for one in girders if one.id == name)
    support = fields.reference("support", [one.id for one in girder.supports], "support")
    if kind == "replaced" and girder.supports[girder.support_index(support)].kind != "pad":
        problem = f'"{shown(support)}" is no pad, so none was replaced there'
        raise fields.error("support", problem, 'name a pad, or write kind = "jacked" or "shimmed"')
    return InterventionDoc(
        date=date, kind=kind, girder=name, support=support, remark=fields.text("remark", "")
    )


def check_interventions(bridge: BridgeDoc, *, today: dt.date, file: str) -> None:
    """Check that every intervention was made between the building of the bridge and today.

    Raises
    ------
    BedstoneError
        For the first that was not.
    """
    for one in bridge.interventions:
        where = f'intervention of {one.date}, girder "{shown(one.girder)}", support "{shown(one.support)}"'
        if one.date > today:
            problem = f"{one.date} lies in the future (today is {today})"
            raise BedstoneError(
                problem, file=file, field=where, remedy="write what was done, on the day it was done"
            )
        if bridge.built is not None and one.date < bridge.built:
            problem = f"{one.date} lies before the bridge was built ({bridge.built})"
            raise BedstoneError(problem, file=file, field=where, remedy="mend the date, or that of `built`")
