"""Warnings of an examined run: what does not fit together, with both numbers."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from slip.base.notes import Note
from slip.base.units import System
from slip.cases.parse import LINE
from slip.stiffness.run_found import SLIPS, Examined
from slip.stiffness.run_steps import WALKS

OFF = 0.05  # of the clamp: contact force further away is a warning
BEYOND = 0.01  # of mu p, beside the tolerance: traction above it says that the friction is another one
APART = 0.05  # declared and own stiffness, and both energies
TOLD = 3  # refused rows that a warning tells of


def fine(value: float, system: System) -> str:
    """A small length [mm] as text, in um or uin."""
    scale, unit = (1e3, "um") if system.length == "mm" else (1e6, "uin")
    return f"{scale * system.out(value, 'length'):.4g} {unit}"


def notes_of(found: Examined, system: System) -> tuple[Note, ...]:
    """Every warning in the system's units, the gravest first."""
    parts = (_rows, _force, _limit, _motion, _stiffness, _energy, _goes_on)
    return tuple(note for each in parts for note in each(found, system))


def _rows(found: Examined, system: System) -> Iterator[Note]:
    refused, table = found.table.refused, found.table
    if refused.height:
        told = "; ".join(f"line {row[LINE]}: {row['reason']}" for row in refused.head(TOLD).iter_rows(named=True))
        more = f"; {refused.height - TOLD} more" if refused.height > TOLD else ""
        text = f"{refused.height} of {table.count} rows are not used ({told}{more}): their area is missing in every sum"
        yield Note("run-rows-refused", text, "--interface")


def _force(found: Examined, system: System) -> Iterator[Note]:
    if abs(found.off) <= OFF:
        return
    force, (low, high) = float(found.steps.force[found.off_step]), found.clamp
    end = low if found.off < 0 else high
    text = (
        f"contact force {system.say(force, 'force')}{_at(found, found.off_step)} is {abs(found.off):.1%} "
        f"{'below' if found.off < 0 else 'above'} the {'lowest' if found.off < 0 else 'highest'} clamp of {system.say(end, 'force')}: "
        "check tightening, areas and units of the model"
    )
    yield Note("run-force", text, "--interface")


def _limit(found: Examined, system: System) -> Iterator[Note]:
    if found.beyond > 1 + found.tolerance + BEYOND:
        text = (
            f"tractions reach {found.beyond:.3g} times mu p with friction {found.friction:g}: "
            "the model's friction is higher, or p and t are not of one step"
        )
        yield Note("run-above-limit", text, "finite_elements.friction")


def _motion(found: Examined, system: System) -> Iterator[Note]:
    if found.turned:
        text = "tx, ty point against gx, gy: taken as the friction that holds the moving part back, and turned round"
        yield Note("run-turned", text, "--interface")
    if found.motion == "path":
        text = "a path has no direction: its slip is taken along the traction at the limit"
        yield Note("run-path-direction", text, "--motion")
    if found.motion == "slip" and found.own is not None and found.own.sure:
        text = (
            f"points that stick move in step with their traction, as on {_k(found.own.k, system)}: "
            "gx, gy look like the total motion, though slip is declared"
        )
        yield Note("run-motion-elastic", text, "--motion")
    if found.slips is None:
        text = "elastic and true slip are not told apart: no stiffness is declared, and no sticking points tell it"
        yield Note("run-no-stiffness", text, "finite_elements.present")


def _stiffness(found: Examined, system: System) -> Iterator[Note]:
    own, k_t = found.own, found.k_t
    if found.motion != "total" or own is None or k_t is None:
        return
    inside = own.low / (1 + APART) <= k_t <= own.high * (1 + APART)
    if not inside:
        text = (
            f"sticking points move as on {_k(own.k, system)} ({_k(own.low, system)} to {_k(own.high, system)}), "
            f"{own.k / k_t:.3g} times the declared {_k(k_t, system)}: the model has another stiffness, or friction that is smoothed "
            "over the slip rate; true slip rests on the declared one"
        )
        yield Note("run-own-stiffness", text, "finite_elements.present")


def _energy(found: Examined, system: System) -> Iterator[Note]:
    if found.energy is None or found.energy_at_limit is None:
        return
    mean, limit = float(found.energy.sum()), float(found.energy_at_limit.sum())
    if limit > 0 and abs(mean - limit) > APART * limit and (found.state == SLIPS).any():
        text = (
            f"energy is {_e(mean, system)} by mean tractions and {_e(limit, system)} with mu p over the slip: "
            "points turn round between steps, or slip below mu p; give more steps"
        )
        yield Note("run-steps-coarse", text, "--interface")


def _goes_on(found: Examined, system: System) -> Iterator[Note]:
    for hold in found.holds:
        if hold.creeps:
            first, last = (found.table.steps[i] for i in (hold.first, hold.last))
            text = (
                f"from step {first} to {last} load and tractions are held and motion goes on by {fine(hold.motion, system)}: "
                "creep of a friction law that is smoothed over the slip rate, no slip of the joint"
            )
            yield Note("run-creep", text, "--interface")
    if found.cycles is not None and found.cycles.verdict == WALKS:
        text = f"the face walks: {fine(found.cycles.net[-1], system)} a cycle stay, and it does not fall from cycle to cycle"
        yield Note("run-walks", text, "--interface")
    if np.isfinite(found.steps.share).all() and "gross slip" in found.steps.face:
        step = found.steps.face.index("gross slip")
        yield Note("run-gross-slip", f"the whole face slips{_at(found, step)}: gross slip", "case")


def _at(found: Examined, step: int) -> str:
    name = found.table.steps[step]
    return f" at step {name}" if name else ""


def _k(value: float, system: System) -> str:
    return f"{system.out(value, 'stiffness per area'):.4g} {system.unit('stiffness per area')}"


def _e(value: float, system: System) -> str:
    return f"{system.out(value, 'energy'):.4g} {system.unit('energy')}"
