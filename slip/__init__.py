"""Proves that a bolted, friction-clamped joint does not slip, with every number traceable.

`assess` walks the whole path from a joint file or a Joint; the formulas lie in slip.clamp, slip.pressure, slip.friction
and slip.verdict and take plain numbers.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

__version__ = "0.1.0"

# Public names and where they live; resolved on first use, so that `import slip` costs nothing.
_NAMES = {
    "Assessment": "slip.assess",
    "assess": "slip.assess",
    "Joint": "slip.joint.joint",
    "read": "slip.read.build",
    "read_text": "slip.read.build",
    "SlipError": "slip.base.errors",
    "InputError": "slip.base.errors",
    "Problems": "slip.base.errors",
    "NotConverged": "slip.base.errors",
    "limit": "slip.friction.march.limit",
    "result": "slip.report.machine",
    "explain": "slip.report.equations",
}
__all__ = ["__version__", *_NAMES]


def __getattr__(name: str) -> Any:
    if name not in _NAMES:
        raise AttributeError(f"module 'slip' has no attribute {name!r}")
    return getattr(import_module(_NAMES[name]), name)


def __dir__() -> list[str]:
    return sorted(__all__)
