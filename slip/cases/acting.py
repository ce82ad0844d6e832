"""From cases in arrays to load states: the table's axes turned to the joint's, the other end of a case made or taken."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from slip.cases.rows import Block
from slip.clamp.states import Acting
from slip.joint.joint import Joint

Array = np.ndarray
AXIS = "xyz"


def acting(joint: Joint, block: Block, bolts: bool) -> Acting:
    """What acts in the states of a block: the given ends of all cases, then the other ends of those that have one.

    Every component of a case scales with its ratio, as in a joint file; a relief by Fclamp likewise.
    """
    scaled = np.flatnonzero(block.alternating & ~np.isin(np.arange(block.count), block.second))
    others = np.concatenate([scaled, block.second])
    order = np.argsort(others, kind="stable")
    ratio = block.ratio[scaled, None]

    def both_ends(name: str) -> Array:
        given = block.given[name]
        turned = _scaled(joint, name, given[scaled], ratio)
        return np.concatenate([given, np.concatenate([turned, block.other[name]])[order]])

    values = {name: both_ends(name) for name in block.given}
    S, n = block.count + len(others), block.present.shape[1]
    zero = np.zeros((S, n))

    def along(kind: str, index: int) -> Array:
        axis, sign = joint.table.axes[index]
        found = values.get(f"{kind}{AXIS[axis]}", zero)
        return found if sign > 0 else sign * found + 0.0

    return Acting(
        case=np.concatenate([np.arange(block.count), others[order]]),
        end=("given",) * block.count + ("other",) * len(others),
        shear=np.stack([along("F", 0), along("F", 1)]),
        axial=values.get("Fax", zero) if bolts else along("F", 2),
        couple=np.zeros((3, S, 1)) if bolts else np.stack([along("M", i) for i in range(3)]),
        at=np.broadcast_to(joint.pattern.centroid, (S, 2)),
        height=np.zeros((S, 1)),
        each=np.full((S, 1), bolts),
        thermal=values.get("thermal", np.full((S, 1), np.nan)),
        preload_low=values.get("preload_low"),
        contact=values.get("Fclamp"),
    )


def _scaled(joint: Joint, name: str, given: Array, ratio: Array) -> Array:
    """A component at the other end of a case of this ratio; what is no load stays."""
    if name in ("thermal", "preload_low"):
        return given
    if name == "Fclamp":
        preload = joint.axial.model_preload
        assert preload is not None
        return preload - ratio * (preload - given)
    return ratio * given + 0.0  # adding zero keeps -0 out of results


def part(block: Block, cases: Array) -> Block:
    """Some cases of a block, by their places in ascending order."""
    inside = np.isin(block.second, cases)
    return replace(
        block,
        names=block.names.gather(cases),
        lines=block.lines[cases],
        given={name: values[cases] for name, values in block.given.items()},
        other={name: values[inside] for name, values in block.other.items()},
        second=np.searchsorted(cases, block.second[inside]),
        present=block.present[cases],
        rows=block.rows[cases],
        alternating=block.alternating[cases],
        ratio=block.ratio[cases],
        open_reason=block.open_reason[cases],
    )
