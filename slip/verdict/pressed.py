"""Checks of a pressed contact: gross slip of the whole, and the file's own limit of true slip."""

from __future__ import annotations

from collections.abc import Mapping

from slip.friction.pressed.records import NO_SHEAR, PressedSlip
from slip.joint.contact import PressedContact
from slip.verdict.checks import Check
from slip.verdict.stage import Verdict, against, conclude


def pressed_verdict(contact: PressedContact, slips: Mapping[tuple[int, str], PressedSlip]) -> Verdict:
    """All checks of a contact and what they add up to. The contact slips as a whole: the group factor is the only one, and decides."""
    checks = []
    for (i, end), found in slips.items():
        case = contact.cases[i]
        least = contact.required.alternating if case.alternating else contact.required.static
        factor = found.safety
        reason = "no shear" if found.reason == NO_SHEAR else ""
        checks.append(
            Check(
                "gross_slip.group",
                case.name,
                end,
                "",
                factor,
                factor,
                least,
                factor / least,
                factor >= least,
                True,
                reason,
            )
        )
        if contact.required.true_slip is not None:
            checks.append(_true_slip(contact, contact.required.true_slip, case.name, end, found))
    return conclude(checks, (), {})


def _true_slip(contact: PressedContact, most: float, case: str, end: str, found: PressedSlip) -> Check:
    """The largest true slip of the routes that tell it, at any reading of the face's stiffness; out of their range it proves nothing."""
    if found.reason and found.reason != NO_SHEAR:
        return Check("true_slip", case, end, "", None, None, None, 0.0, False, True, found.reason)
    readings = [reading for route in found.routes for reading in (route, *route.band)]
    slip = max((reading.true_slip for reading in readings if reading.true_slip is not None), default=0.0)
    reserve = most / slip if slip > 0 else float("inf")
    said = against(slip, most)
    if found.beyond and 0 < slip <= most:
        said = f"not solved: {found.beyond}"
        return Check("true_slip", case, end, "", None, None, None, None, False, True, said, solved=False)
    return Check("true_slip", case, end, "", None, None, None, reserve, bool(slip <= most), True, said)
