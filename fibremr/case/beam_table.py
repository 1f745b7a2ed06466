"""The table [beam]: spans, ends, loads, restraints, stiffeners and the deflection limit."""

from __future__ import annotations

from dataclasses import dataclass
from math import inf
from typing import Any

from fibremr.beam.model import FIXED, PINNED, Beam, Load
from fibremr.case.table import Table
from fibremr.case.units import fraction_of, quantity
from fibremr.errors import ValueFault, closest

CONTINUOUS, NONE = "continuous", "none"
_LATER = ("sections", "settlement", "factors")


@dataclass(frozen=True)
class Restraint:
    """How one flange is held between the supports, which hold it anyway.

    `places` are positions along the beam [mm]; `continuous` holds it everywhere. `words` is how the case
    says it.
    """

    continuous: bool
    places: tuple[float, ...]
    words: str


@dataclass(frozen=True)
class BeamCase:
    """The beam as asked for. `service` is the share of the design loads for deflection, None if not given.

    `deflection_limit` is a share of the span (divisor) or a length [mm].
    """

    beam: Beam
    top: Restraint
    bottom: Restraint
    stiffeners: bool
    service: float | None
    span_share: float | None
    length_limit: float | None


def read_beam(table: Table) -> BeamCase | None:
    """The beam of a case, or None after a fault."""
    table.refuse_later(_LATER)
    if table.flag("self_weight", default=False):
        table.fail("self_weight", ValueFault("not available in this version", code="not-available"))
    table.choice("arrangements", ("all",), default="all", later=("pattern",))
    spans = _spans(table)
    ends = _ends(table)
    loads = _loads(table, spans)
    top, bottom = _restraints(table, spans)
    stiffeners = table.flag("stiffeners", default=False)
    service = table.number("service_factor", least=0.0, above=True, most=10.0)
    share, length = _limit(table)
    table.finish()
    if not table.sound or spans is None or ends is None or loads is None or top is None or bottom is None:
        return None
    return BeamCase(Beam(spans, ends, loads), top, bottom, bool(stiffeners), service, share, length)


def _spans(table: Table) -> tuple[float, ...] | None:
    found = _lengths(table, "spans", required=True, least=10.0, most=1e6, said="10 mm to 1 km")
    return tuple(found) if found else None


def _lengths(
    table: Table, key: str, *, required: bool, least: float, most: float, said: str
) -> list[float] | None:
    if not table.has(key):
        if required:
            table.fail(key, ValueFault("missing", allowed='such as ["8 m", "8 m"]', code="missing"))
        return None
    value = table.data[key]
    if not isinstance(value, list) or not value:
        table.fail(key, ValueFault("not a list of lengths", allowed='such as ["8 m", "8 m"]', code="type"))
        return None
    found = []
    for i, item in enumerate(value):
        try:
            length = quantity(item, "length")
            if not least <= length <= most:
                raise ValueFault("not a possible length here", allowed=said, code="range")
            found.append(length)
        except ValueFault as error:
            table.fail((key, i), error)
    if len(found) < len(value):
        return None
    table.note(key)
    return found


def _ends(table: Table) -> tuple[str, str] | None:
    if not table.has("ends"):
        table.notes.entry((*table.path, "ends"), '["pinned", "pinned"]', "default")
        return PINNED, PINNED
    value = table.data["ends"]
    if not isinstance(value, list) or len(value) != 2:
        table.fail(
            "ends", ValueFault("not a list of the two ends", allowed='["pinned", "fixed"]', code="type")
        )
        return None
    found = []
    for i, item in enumerate(value):
        word = item.strip().lower() if isinstance(item, str) else ""
        if word in (PINNED, FIXED):
            found.append(word)
        elif word == "free":
            table.fail(
                ("ends", i),
                ValueFault(
                    "an overhang is not available in this version",
                    allowed="pinned, fixed",
                    code="not-available",
                ),
            )
        else:
            table.fail(
                ("ends", i),
                ValueFault(
                    "not a way to hold an end",
                    allowed="pinned, fixed",
                    suggestion=closest(word, [PINNED, FIXED]),
                    code="unknown-name",
                ),
            )
    if len(found) < 2:
        return None
    table.note("ends")
    return found[0], found[1]


def _loads(table: Table, spans: tuple[float, ...] | None) -> tuple[Load, ...] | None:
    tables = table.tables("loads", kind='[ { span = "all", uniform = "38 kN/m" }, ... ]')
    if tables is None:
        if "loads" not in table.data:
            table.fail(
                "loads",
                ValueFault("missing", allowed='[ { span = "all", uniform = "38 kN/m" } ]', code="missing"),
            )
        return None
    found: list[Load] = []
    for item in tables:
        item.refuse_later(("kind",))
        where = _which(item, spans)
        uniform = item.quantity("uniform", "line load", signed=True) if item.has("uniform") else None
        point = item.quantity("point", "force", signed=True) if item.has("point") else None
        at = (
            item.quantity("at", "length", zero=True, most=1e6, least=0.0, text="from 0 to the span")
            if item.has("at")
            else None
        )
        if item.has("uniform") == item.has("point"):
            item.fail(
                "",
                ValueFault(
                    "a load is either uniform or point", allowed='uniform = "38 kN/m", or point and at'
                ),
            )
        if item.has("point") and not item.has("at"):
            item.fail(
                "at",
                ValueFault(
                    "missing: where the point load acts", allowed='such as at = "4 m"', code="missing"
                ),
            )
        if item.has("at") and not item.has("point"):
            item.fail("at", ValueFault("only a point load has a place"))
        item.finish()
        table.sound &= item.sound
        if not item.sound or where is None:
            continue
        for span in where:
            if at is not None and spans is not None and at > spans[span]:
                item.fail(
                    "at",
                    ValueFault(
                        "outside the span", allowed=f"from 0 to {spans[span] / 1e3:g} m", code="range"
                    ),
                )
                table.sound = False
                break
            found.append(Load(span, uniform or 0.0, point or 0.0, at or 0.0))
    if table.sound and not any(load.uniform or load.point for load in found):
        table.fail("loads", ValueFault("all loads are zero: nothing bends", allowed="a load on some span"))
    return tuple(found)


def _which(item: Table, spans: tuple[float, ...] | None) -> list[int] | None:
    """Spans that a load is on, counted from 0."""
    if not item.has("span"):
        item.fail("span", ValueFault("missing", allowed='1, 2, ... or "all"', code="missing"))
        return None
    value: Any = item.data["span"]
    count = len(spans) if spans else 1
    if isinstance(value, str) and value.strip().lower() == "all":
        return list(range(count))
    if isinstance(value, bool) or not isinstance(value, int):
        item.fail("span", ValueFault("not a span", allowed='1, 2, ... or "all"', code="type"))
        return None
    if spans is not None and not 1 <= value <= count:
        item.fail("span", ValueFault("there is no such span", allowed=f"1 to {count}", code="range"))
        return None
    return [value - 1]


def _restraints(table: Table, spans: tuple[float, ...] | None) -> tuple[Restraint | None, Restraint | None]:
    nothing = Restraint(False, (), "at the supports only")
    if not table.has("restraints"):
        table.notes.entry((*table.path, "restraints"), "at the supports only", "default")
        return nothing, nothing
    inner = table.table("restraints", kind='{ top = "continuous", bottom = "2 m" }')
    if inner is None:
        return None, None
    if inner.has("both"):
        for key in ("top", "bottom"):
            if inner.has(key):
                inner.fail(key, ValueFault("both already says how both flanges are held"))
        both = _restraint(inner, "both", spans)
        found: tuple[Restraint | None, Restraint | None] = (both, both)
    else:
        found = tuple(  # type: ignore[assignment]
            _restraint(inner, key, spans) if inner.has(key) else nothing for key in ("top", "bottom")
        )
    inner.finish()
    table.sound &= inner.sound
    return found


def _restraint(table: Table, key: str, spans: tuple[float, ...] | None) -> Restraint | None:
    value = table.data[key]
    if isinstance(value, str) and value.strip().lower() in (CONTINUOUS, NONE):
        table.note(key)
        if value.strip().lower() == CONTINUOUS:
            return Restraint(True, (), "continuously")
        return Restraint(False, (), "at the supports only")
    total = sum(spans) if spans else inf
    if isinstance(value, list):
        places = _lengths(table, key, required=False, least=0.0, most=total, said="places along the beam")
        return None if places is None else Restraint(False, tuple(sorted(places)), "at the places given")
    spacing = table.quantity(
        key, "length", least=10.0, most=1e6, text='a spacing, "continuous", "none" or places'
    )
    if spacing is None or spans is None:
        return None
    places = []
    start = 0.0
    for length in spans:
        count = int(length / spacing + 1e-9)
        for k in range(1, count + 1):  # from each support to both sides
            places += [start + k * spacing, start + length - k * spacing]
        start += length
    return Restraint(False, tuple(sorted(set(places))), f"every {spacing / 1e3:g} m")


def _limit(table: Table) -> tuple[float | None, float | None]:
    """The deflection limit: the divisor of the span, or a length [mm]."""
    if not table.has("deflection_limit"):
        return None, None
    try:
        share = fraction_of(table.data["deflection_limit"], "L")
    except ValueFault as error:
        table.fail("deflection_limit", error)
        return None, None
    if share is not None:
        table.note("deflection_limit")
        return share, None
    return None, table.quantity("deflection_limit", "length", least=0.1, most=1e5, text='"L/360" or a length')
