"""The result for a person at a terminal: at most 80 columns and 24 lines, what decides in the first of them."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from typing import NamedTuple

import numpy as np

from slip.assess import Assessment
from slip.base.notes import Note
from slip.base.units import System
from slip.report.checked import NO_SHEAR, WIDTH, case_lines, entries, other_lines
from slip.report.partial import partial_lines
from slip.report.words import CAUTION, NOT_ASSESSED, at_most, check_name, columns, cut, factor, plain, wrapped
from slip.verdict.checks import Check

HEIGHT = 24
VERDICTS = {0: "HOLDS", 1: "FAILS"}


class Room(NamedTuple):
    """Most lines of each part; `reason` of each sentence that says why."""

    cases: int
    others: int
    reason: int
    assumed: int
    warnings: int
    rules: bool


ROOMY, TIGHT = Room(8, 9, 3, 4, 3, True), Room(1, 1, 1, 1, 1, False)
SHRINK = ("assumed", "reason", "warnings", "cases", "others")  # in turn, by a line each; the rules go last


def check_text(assessment: Assessment, units: System | None = None) -> str:
    """The assessment as text."""
    system, room, kept = units or assessment.joint.system, ROOMY, dict[tuple[object, ...], list[str]]()
    lines = _lines(assessment, system, room, kept)
    while len(lines) > HEIGHT and room != TIGHT:
        room = _smaller(room)
        lines = _lines(assessment, system, room, kept)
    return "\n".join(cut(line.rstrip(), WIDTH) for line in lines) + "\n"


def _smaller(room: Room) -> Room:
    """A line less for the part that is the furthest from its least, in the order of SHRINK."""
    left = {part: getattr(room, part) - getattr(TIGHT, part) for part in SHRINK}
    if not any(left.values()):
        return TIGHT
    part = max(SHRINK, key=lambda part: left[part] / (getattr(ROOMY, part) - getattr(TIGHT, part)))
    return room._replace(**{part: getattr(room, part) - 1})


def _lines(assessment: Assessment, system: System, room: Room, kept: dict[tuple[object, ...], list[str]]) -> list[str]:
    """All lines at most as many as there is room for; parts of a size that was made before are taken from `kept`."""
    title = plain(assessment.joint.title or assessment.joint.file, WIDTH - 8)
    parts: list[tuple[Callable[..., Iterable[str]], tuple[object, ...]]] = [
        (verdict_lines, (room.reason,)),
        (lambda _: [f"-- {title} ".ljust(WIDTH - columns(title) + len(title), "-")], ()),
        (case_lines, (room.cases,)),
        (other_lines, (room.others, room.reason)),
        (lambda _, rules: ["-" * WIDTH] * rules, (room.rules,)),
        (_ledger, (system,)),
        (_partial, (system, room.reason)),
        (_notes, ("Assumed", assessment.assumptions, room.assumed)),
        (_notes, ("Warnings", assessment.warnings, room.warnings)),
        (lambda _: wrapped(f"Not assessed: {NOT_ASSESSED}. Caution: {CAUTION}", WIDTH), ()),
    ]
    lines = []
    for i, (make, sizes) in enumerate(parts):
        key = (i, *sizes)
        if key not in kept:
            kept[key] = list(make(assessment, *sizes))
        lines += kept[key]
    return lines


# the verdict


def verdict_lines(assessment: Assessment, reason: int = 3) -> Iterator[str]:
    """What governs, against what, where; at which end of the inputs; why, in at most `reason` lines, where there is something to say."""
    joint, verdict = assessment.joint, assessment.verdict
    grows, governing = joint.required.grows, verdict.governing
    unsolved = [c for c in verdict.checks if c.decides and not c.solved]
    g = unsolved[0] if verdict.exit_code not in VERDICTS and unsolved else governing
    yield _with_place(assessment, f"{VERDICTS.get(verdict.exit_code, 'NOT SOLVED')}: {_against(g, grows)}", g)
    if g.reason and g.reason != NO_SHEAR:
        yield from at_most(wrapped(plain(g.reason, 400), WIDTH, "  ", "    "), reason, WIDTH)
    if g is not governing and governing.solved:
        yield _with_place(assessment, f"  what was solved holds: {_against(governing, grows)}", governing)
    yield "  " + _circumstances(assessment)
    if joint.required.decides == "group":
        why = f"the group decides: {plain(joint.required.decides_reason, 200)}"
        yield from at_most(wrapped(why, WIDTH, "  ", "    "), reason, WIDTH)


def _with_place(assessment: Assessment, said: str, check: Check) -> str:
    """What is said of a check, with its case, end and bolt."""
    tail = [*end_of(assessment, check.case, check.end), f"bolt {plain(check.bolt, 14)}" if check.bolt else ""]
    left = WIDTH - columns(said) - columns(", ".join(tail)) - 5
    place = ", ".join(part for part in (plain(check.case, max(left, 8)), *tail) if part)
    return f"{said} ({place})" if place else said


def end_of(assessment: Assessment, case: str, end: str) -> list[str]:
    """The end in words, where the case has two."""
    both = any(c.name == case and len(c.ends) > 1 for c in assessment.joint.cases)
    return [f"{end} end"] if both and end else []


def _against(check: Check, grows: str) -> str:
    name, value = check_name(check.check), check.factor(grows)
    if check.reason == NO_SHEAR:
        return f"{name}, {NO_SHEAR}"
    if check.required is not None:
        return f"{name} {factor(value, check.required)}, required {check.required:g}"
    return f"{name} reserve {factor(check.reserve_factor, 1.0)}" if check.reserve_factor is not None else name


def _circumstances(assessment: Assessment) -> str:
    """At which end of the inputs the governing check was made, and its reserve."""
    joint, g = assessment.joint, assessment.verdict.governing
    if g.check.startswith("standard."):
        entry = entries(assessment).get((g.check, g.case, g.end))
        level = entry.standard.to_standard_level if entry else None
        basis = f", basis {entry.judgement.basis}" if entry and entry.judgement else ""
        return f"by the standard's own rules{basis}" + (f", at {level:g} x the loads of the file" if level else "")
    grows = {"all loads": "all loads growing", "shear": "shear growing, clamp held"}[joint.required.grows]
    parts = [f"at lowest friction {joint.interface.friction_low:g} and lowest preload", grows]
    if g.check == "separation":
        parts = ["at lowest preload"]
    if g.reserve_factor is not None and np.isfinite(g.reserve_factor):
        parts.append(f"reserve {factor(g.reserve_factor, 1.0)}")
    return ", ".join(parts)


# the clamp


def _ledger(assessment: Assessment, system: System) -> Iterator[str]:
    """The clamp of the governing bolt in five lines: from the assembly preload to the shear that it holds."""
    verdict, joint, a, found = assessment.verdict, assessment.joint, assessment.clamp.assembly, assessment.clamp.ledger
    g = verdict.governing
    own = [e for e in verdict.ends if joint.cases[e.case].name == g.case and e.end == g.end]
    end = (own or verdict.ends)[0]
    b = joint.pattern.names.index(g.bolt) if g.bolt else end.bolt
    s = end.bolt_states[b]

    def say(value: float) -> str:
        return f"{system.out(float(value), 'force'):,.0f}".replace(",", " ")

    gain = f" (gain {say(found.thermal_gain[s, b])} not credited)" if found.thermal_gain[s, b] else ""
    losses = [
        f"embedding {say(a.embedding[b])}",
        f"relaxation {say(found.relaxation[s, b])}",
        f"thermal {say(found.thermal_loss[s, b])}{gain}",
        f"axial {say(found.relief[s, b])}",
    ]
    top = [f"bolt up to {say(found.bolt_force_high[s, b])}"]
    if found.yield_use is not None:
        top.append(f"{found.yield_use[s, b]:.0%} of yield")
    if found.bearing_pressure is not None:
        top.append(f"head {system.out(float(found.bearing_pressure[s, b]), 'pressure'):.0f} {system.pressure}")
    friction, faces = joint.interface.friction_low, joint.interface.parallel_faces
    product = f"{friction:g} x {faces} x {say(found.clamp_low[s, b])}"
    holds = f"{product} = {say(friction * faces * found.clamp_low[s, b])}"
    against = f"shear {say(assessment.slip.shear[s, b])}"
    if (patch := assessment.pressure.torque_patch) is not None:
        torque = system.out(abs(float(assessment.clamp.states.load[s, 2])), "moment")
        radius = system.out(patch.friction_radius, "length")
        against += f", torque {torque:.6g} {system.unit('moment')} at {radius:.3g} {system.length}"
    case = joint.cases[end.case].name
    bolt = f"Bolt {plain(joint.pattern.names[b], 14)} in {plain(case, 30)}"
    place = ", ".join([bolt, *end_of(assessment, case, end.end)])
    yield f"{place}, in {system.force}:"
    yield _cells("preload", f"{say(found.preload_low[s, b])} .. {say(a.high[b])}", f"low end: {a.low_from}")
    yield _cells("losses", ", ".join(losses))
    yield _cells("clamp", f"{say(found.clamp_low[s, b])} .. {say(found.clamp_high[s, b])}", ", ".join(top))
    yield _cells("friction", holds, against)


def _partial(assessment: Assessment, system: System, most: int) -> Sequence[str]:
    """Partial slip at the governing end, or of the first case where the governing check has none; of another where this tells nothing."""
    case, end = assessment.verdict.governing.case, assessment.verdict.governing.end
    names = [c.name for c in assessment.joint.cases]
    index = names.index(case) if case in names else 0
    return partial_lines(assessment, index, end or "given", system, WIDTH, most)


def _cells(name: str, value: str, remark: str = "") -> str:
    """A row of the ledger."""
    line = f"  {name:<9}{value}"
    return f"{line}   {plain(remark, max(WIDTH - columns(line) - 3, 8))}" if remark else line


def _notes(assessment: Assessment, title: str, notes: Sequence[Note], most: int) -> list[str]:
    """Notes in a few lines; what does not fit is counted."""
    for shown in range(len(notes), 0, -1):
        rest = f" (+{len(notes) - shown} more: slip explain)" if shown < len(notes) else ""
        said = f"{title} ({len(notes)}): " + "; ".join(plain(n.text, 160) for n in notes[:shown]) + rest
        lines = wrapped(said, WIDTH)
        if len(lines) <= most:
            return lines
    return [f"{title} ({len(notes)}): {plain(notes[0].text, WIDTH - 40)} (all: slip explain)"] if notes else []
