"""How far both routes hold: contacts that are small against the radius, bodies that stay elastic."""

from __future__ import annotations

from collections.abc import Iterator

from slip.base.records import record
from slip.base.trace import Trace
from slip.friction.closed import reach
from slip.friction.pressed.pair import Pair
from slip.joint.contact import PressedContact

# practice: at a/R = 0.3 a circle is 2.3 % deeper than the parabola that all these forms have in its place
SMALL = 0.3


@record
class Range:
    """notes: what the range says of a contact; beyond: why the forms do not hold for it, '' where they do."""

    notes: tuple[str, ...]
    beyond: str


def range_of(c: PressedContact, ready: Pair, trace: Trace) -> Range:
    """Size against the radius of the profile, and peak pressure against the first yield of each body that has a yield strength.

    A sharp flat has no radius, and its edge no finite pressure: nothing is said of it. How large the bodies are the file does not
    tell.
    """
    if c.radius is None:
        return Range((), "")
    share = _share(c, ready.size, trace)
    beyond = f"{share[0]} = {share[1]:.2g}: the forms hold for contacts small against the radius, up to {SMALL:g}"
    beyond = beyond if share[1] > SMALL else ""
    return Range(tuple(filter(None, (beyond, *_yields(c, ready, trace)))), beyond)


def _share(c: PressedContact, size: float, trace: Trace) -> tuple[str, float]:
    """Which share of the radius the curved part of the contact is, and how it is called."""
    name = "size of the contact against the radius"
    if c.flat_width:
        half = c.flat_width / 2
        return "(a - b)/R", float(trace(name, reach.rounded_share, a=size, b=half, R=c.radius))
    return "a/R", float(trace(name, reach.profile_share, a=size, R=c.radius))


def _yields(c: PressedContact, ready: Pair, trace: Trace) -> Iterator[str]:
    """A sentence on the bodies whose first yield the peak pressure exceeds; a rounded flat is judged as a sphere or a cylinder."""
    first = reach.plane_first_yield if ready.plane else reach.round_first_yield
    limits = {
        which: float(trace(f"peak pressure at the first yield of the {which} body", first, Y=body.yield_strength))
        for which, body in zip(("first", "second"), c.bodies, strict=True)
        if body.yield_strength is not None
    }
    least = min(limits.values(), default=ready.peak)
    if ready.peak > least:
        weak = [which for which, limit in limits.items() if limit == least]
        who = "both bodies yield" if len(weak) > 1 else f"the {weak[0]} body yields"
        peak, limit = (c.system.say(p, "pressure") for p in (ready.peak, least))
        times = "1.67" if ready.plane else "1.6"
        yield (
            f"{who} below the face: the peak pressure, {peak}, is above {limit}, {times} times the yield strength; "
            "the forms are elastic"
        )
