"""Proves that a bolted, friction-clamped joint does not slip, with every number traceable.

`check` walks the whole path from a joint file or a Joint, `check_table` for a table of load cases; the formulas lie in
slip.clamp, slip.pressure, slip.friction and slip.verdict and take plain numbers.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

__version__ = "0.1.0"

# Public names and where they live; resolved on first use, so that `import slip` costs nothing. A public name must not be that of a
# module or package here: importing that would take the name's place.
_NAMES = {
    "Assessment": ("slip.assess", "Assessment"),
    "check": ("slip.assess", "assess"),
    "check_table": ("slip.cases.run", "check_table"),
    "TableResult": ("slip.cases.run", "TableResult"),
    "penalty": ("slip.stiffness.stage", "penalty"),
    "Joint": ("slip.joint.joint", "Joint"),
    "read_file": ("slip.read.build", "read"),
    "read_text": ("slip.read.build", "read_text"),
    "SlipError": ("slip.base.errors", "SlipError"),
    "InputError": ("slip.base.errors", "InputError"),
    "Problems": ("slip.base.errors", "Problems"),
    "NotConverged": ("slip.base.errors", "NotConverged"),
    "gross_slip_limit": ("slip.friction.march.limit", "limit"),
    "result": ("slip.report.machine", "result"),
    "explain": ("slip.report.equations", "explain"),
}
__all__ = ["__version__", *_NAMES]


def __getattr__(name: str) -> Any:
    if name not in _NAMES:
        raise AttributeError(f"module 'slip' has no attribute {name!r}")
    module, attribute = _NAMES[name]
    return getattr(import_module(module), attribute)


def __dir__() -> list[str]:
    return sorted(__all__)
