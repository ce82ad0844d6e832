"""The result for a person at a terminal: 80 columns, the verdict first, at most 24 lines for an ordinary joint."""

from __future__ import annotations

import textwrap
from collections.abc import Iterable, Sequence

import numpy as np

from slip.assess import Assessment
from slip.base.formulas import citation
from slip.base.notes import Note
from slip.base.tables import columns, names, table
from slip.base.units import System
from slip.report.equations import Explanation
from slip.report.words import CAUTION, check_name, factor, plain
from slip.verdict.checks import Check, first_least
from slip.verdict.gross_slip import End

WIDTH = 80
CASES = 8  # rows of cases shown; the others are counted
RULE = "-" * WIDTH


def check_text(assessment: Assessment, units: System | None = None) -> str:
    """The assessment as lines of at most 80 columns."""
    system = units or assessment.joint.system
    ends, more = _shown_ends(assessment)
    lines = [
        *_verdict(assessment),
        RULE,
        *_cases(assessment, ends, more),
        *_others(assessment),
        RULE,
        *_ledger(assessment, system),
        *_notes("Assumed", assessment.assumptions, 4),
        *_notes("Warnings", assessment.warnings, 2),
        *textwrap.wrap("Caution: " + CAUTION, WIDTH),
    ]
    return "\n".join(line.rstrip() for line in lines) + "\n"


def _verdict(assessment: Assessment) -> list[str]:
    """One sentence: holds or not, what governs, against what."""
    joint, verdict = assessment.joint, assessment.verdict
    word = {0: "HOLDS", 1: "FAILS"}.get(verdict.exit_code, "NOT SOLVED")
    g = verdict.governing
    place = ", ".join(part for part in (plain(g.case, 30), f"{g.end} end" if g.end else "", plain(g.bolt, 12)) if part)
    grows = "all loads growing" if joint.required.grows == "all loads" else "clamp held"
    if g.required is not None and g.reserve_factor is not None and np.isfinite(g.reserve_factor):
        value = factor(g.factor(joint.required.grows), g.required)
        against = f"{check_name(g.check)} {value}, required {g.required:g}, {grows}"
        if g.check == "separation":
            against = f"separation {value}, required {g.required:g}"
    elif g.reserve_factor is not None and np.isfinite(g.reserve_factor):
        against = f"{check_name(g.check)} reserve {factor(g.reserve_factor, 1.0)}"
    else:
        against = check_name(g.check)
    said = f"{word}: {against} ({place})" if place else f"{word}: {against}"
    if g.reason:
        said += f"; {g.reason}"
    if joint.required.decides == "group":
        said += f"; the group decides: {plain(joint.required.decides_reason, 100)}"
    said += f"; lowest friction {joint.interface.friction_low:g}, lowest preload"
    title = plain(joint.title or joint.file, WIDTH)
    return [title, *textwrap.wrap(said, WIDTH)]


def _shown_ends(assessment: Assessment) -> tuple[list[End], int]:
    """For each case the end with the smaller reserve; of many cases the worst, and how many are left out."""
    worst: list[End] = []
    for i in range(len(assessment.joint.cases)):
        ends = [end for end in assessment.verdict.ends if end.case == i]
        worst.append(ends[first_least(np.array([_least(end) for end in ends]))])
    if len(worst) <= CASES:
        return worst, 0
    kept = sorted(worst, key=_least)[:CASES]
    return kept, len(worst) - len(kept)


def _least(end: End) -> float:
    """Smallest reserve of an end's deciding checks."""
    return min(
        (c.reserve_factor for c in end.checks if c.decides and c.reserve_factor is not None), default=float("inf")
    )


def _cases(assessment: Assessment, ends: Sequence[End], more: int) -> list[str]:
    """A row for each case: the three factors held / growing, separation, requirement, verdict."""
    lines = [
        "case, worse end       per bolt         group            force only    needs",
        "                      held/all loads   held/all loads   held/all",
    ]
    for end in ends:
        per_bolt, group, force = end.checks[:3]
        case = assessment.joint.cases[end.case]
        name = plain(case.name, 14) + f", {end.end}" if case.alternating else plain(case.name, 21)
        pairs = [_pair(check) for check in (per_bolt, group, force)]
        bad = [c for c in assessment.verdict.checks if c.case == case.name and c.decides and not c.holds]
        state = "holds" if not bad else "FAILS" if any(c.solved for c in bad) else "open"
        lines.append(f"{name:<22}{pairs[0]:<17}{pairs[1]:<17}{pairs[2]:<14}{per_bolt.required:<5g}{state:>5}")
    if more:
        lines.append(f"and {more} more cases with larger reserve; --json has them all")
    return lines


def _pair(check: Check) -> str:
    """Both factors of a check with its bolt."""
    if check.reason == "no shear":
        return "no shear"
    both = f"{factor(check.safety, check.required)}/{factor(check.load_factor, check.required)}"
    return f"{both} {plain(check.bolt, 6)}" if check.bolt else both


def _others(assessment: Assessment) -> list[str]:
    """Separation, standards and limits that were not judged: the worst of each, a line each."""
    lines = []
    grouped: dict[str, list[Check]] = {}
    for check in assessment.verdict.checks:
        if not check.check.startswith("gross_slip"):
            grouped.setdefault(check.check, []).append(check)
    for checks in grouped.values():
        reserves = np.array([-np.inf if c.reserve_factor is None else c.reserve_factor for c in checks])
        worst = checks[first_least(reserves)]
        state = "holds" if worst.holds else "FAILS" if worst.solved else "not solved"
        value = (
            ""
            if worst.reserve_factor is None or np.isinf(worst.reserve_factor)
            else f"reserve {factor(worst.reserve_factor, 1.0)}"
        )
        place = ", ".join(part for part in (plain(worst.case, 20), plain(worst.bolt, 8)) if part)
        said = "; ".join(part for part in (value, place, worst.reason) if part)
        lines += textwrap.wrap(
            f"{check_name(worst.check)}: {state}; {said}".rstrip("; "), WIDTH, subsequent_indent="  "
        )
    return lines


def _ledger(assessment: Assessment, system: System) -> list[str]:
    """The clamp of the governing bolt in five lines: from the assembly preload to the shear that it holds."""
    verdict, joint, a, found = assessment.verdict, assessment.joint, assessment.clamp.assembly, assessment.clamp.ledger
    g = verdict.governing
    own = [e for e in verdict.ends if joint.cases[e.case].name == g.case and e.end == g.end]
    end = (own or verdict.ends)[0]
    s, b = end.state, joint.pattern.names.index(g.bolt) if g.bolt else end.bolt

    def say(value: float) -> str:
        return f"{system.out(float(value), 'force'):,.0f}".replace(",", " ")

    gain = f" (gain {say(found.thermal_gain[s, b])} not credited)" if found.thermal_gain[s, b] else ""
    losses = [
        f"embedding {say(a.embedding[b])}",
        f"relaxation {say(a.relaxation[b])}",
        f"thermal {say(found.thermal_loss[s, b])}{gain}",
        f"axial {say(found.relief[s, b])}",
    ]
    top = [f"bolt up to {say(found.bolt_force_high[s, b])}"]
    if found.yield_use is not None:
        top.append(f"{found.yield_use[s, b]:.0%} of yield")
    if found.bearing_pressure is not None:
        top.append(f"head {system.out(float(found.bearing_pressure[s, b]), 'pressure'):.0f} {system.pressure}")
    friction, faces = joint.interface.friction_low, joint.interface.parallel_faces
    held = say(friction * faces * found.clamp_low[s, b])
    rows = (
        ("preload", f"{say(a.low[b])} .. {say(a.high[b])}", f"low end: {a.low_from}"),
        ("losses", ", ".join(losses), ""),
        ("clamp", f"{say(found.clamp_low[s, b])} .. {say(found.clamp_high[s, b])}", ", ".join(top)),
        ("friction", f"{friction:g} x {faces} x {say(found.clamp_low[s, b])} = {held}", f"shear {say(assessment.slip.shear[s, b])}"),
    )
    case = plain(joint.cases[end.case].name, 30)
    lines = [f"Bolt {plain(joint.pattern.names[b], 12)}, {case}, {end.end} end, in {system.force}"]
    return lines + [plain_cells(name, value, remark) for name, value, remark in rows]


def plain_cells(name: str, value: str, remark: str) -> str:
    """A row of the ledger within 80 columns."""
    line = f"  {name:<9}{value}"
    return line + "   " + plain(remark, max(WIDTH - len(line) - 3, 8)) if remark else line


def _notes(title: str, notes: Iterable[Note], most: int) -> list[str]:
    """Notes in a few lines; what does not fit is counted."""
    notes = list(notes)
    if not notes:
        return []
    for shown in range(len(notes), 0, -1):
        rest = f" (+{len(notes) - shown} more in --json)" if shown < len(notes) else ""
        said = f"{title} ({len(notes)}): " + "; ".join(plain(n.text, 160) for n in notes[:shown]) + rest
        lines = textwrap.wrap(said, WIDTH, subsequent_indent="  ")
        if len(lines) <= most:
            return lines
    return lines[:most]


def explain_text(explanation: Explanation, system: System) -> str:
    """The lines of an explanation as blocks, each with formula, numbers put in, result, source key and basis; citations last."""
    place = f"{plain(explanation.case)}, {explanation.end} end, bolt {plain(explanation.bolt)}"
    lines = [f"Every number of {place}, in N, mm, MPa", ""]
    group = ""
    for line in explanation.lines:
        if line.group != group:
            group = line.group
            lines += [group.upper(), ""]
        lines.append(f"{line.name}  [{line.source}; {line.basis}]")
        if line.formula != "value":
            lines += _wrapped(f"{line.symbol} = {line.formula}")
            lines += _wrapped("= " + line.put_in)
            lines.append(f"    = {line.result:.8g} {line.unit}".rstrip())
        else:
            lines.append(f"    {line.symbol} = {line.result:.8g} {line.unit}".rstrip())
        if line.valid:
            lines.append(f"    holds for: {line.valid}")
        lines.append("")
    keys = dict.fromkeys(key for line in explanation.lines for key in line.source.split(";"))
    lines.append("SOURCES")
    for key in keys:
        if said := citation(key):
            lines += textwrap.wrap(f"{key}: {said}", WIDTH, subsequent_indent="    ")
    if system.name != "N mm":
        lines.append(f"The file is in {system.name}; 1 lbf = 4.4482216 N, 1 in = 25.4 mm, 1 psi = 0.0068947573 MPa.")
    return "\n".join(lines) + "\n"


def _wrapped(text: str) -> list[str]:
    return textwrap.wrap(text, WIDTH, initial_indent="    ", subsequent_indent="      ", break_long_words=False)


def tables_text(word: str = "") -> str:
    """Rows of the data tables whose name or any cell holds the word; without a word the list of tables."""
    wanted = word.casefold()
    lines: list[str] = []
    if not wanted:
        lines.append("slip tables WORD prints the rows that hold the word; tables and their rows:")
        return "\n".join([*lines, *(f"  {name:<22}{len(table(name)):>5}" for name in names())]) + "\n"
    for name in names():
        whole = wanted in name.casefold()
        rows = [row for row in table(name) if whole or any(wanted in cell.casefold() for cell in row.values())]
        if rows:
            heads = [c for c in columns(name) if any(row[c] for row in rows)]
            lines += [name.upper(), *_grid(heads, [[row[c] for c in heads] for row in rows]), ""]
    return "\n".join(line.rstrip() for line in lines) + "\n" if lines else ""


def _grid(heads: list[str], rows: list[list[str]]) -> list[str]:
    """Rows under their heads in aligned columns; long cells are cut."""
    cells = [heads, *([plain(cell, 48) for cell in row] for row in rows)]
    widths = [max(len(row[i]) for row in cells) for i in range(len(heads))]
    return ["  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)) for row in cells]
