"""Words and numbers as every report says them."""

from __future__ import annotations

import math

CAUTION = (
    "an aid to a qualified engineer. Back friction and preload by test or record; "
    "local codes, tests and licensed practice decide."
)
CHECKS = {
    "gross_slip.per_bolt": "per bolt",
    "gross_slip.group": "group",
    "gross_slip.force_only": "force only",
    "separation": "separation",
    "true_slip": "true slip",
    "loosening": "loosening",
}


def check_name(check: str) -> str:
    """A check's name as a person reads it."""
    return CHECKS.get(check, check.removeprefix("standard."))


def plain(text: str, width: int = 60) -> str:
    """Text on one line without control or direction characters, cut to a width."""
    shown = " ".join("".join(c if c.isprintable() else " " for c in text).split())
    return shown if len(shown) <= width else shown[: width - 3] + "..."


def factor(value: float | None, limit: float | None = None) -> str:
    """A factor with three decimals, or as many as show on which side of its limit it is; '-' for none."""
    if value is None or math.isinf(value):
        return "-"
    for digits in range(3, 16):
        shown = f"{value:.{digits}f}"
        if limit is None or value == limit or float(shown) != float(f"{limit:.{digits}f}"):
            return shown
    return repr(value)
