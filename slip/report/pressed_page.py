"""The page of a pressed contact. Words and rows are made ready here, templates/contact.html sets them; nothing is computed."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

from slip.assess import PressedAssessment
from slip.base.units import SI, System
from slip.friction.pressed.records import PressedSlip
from slip.report import figures
from slip.report.inputs import Group, Pair, interface_pairs, load_heads, load_rows, material_said
from slip.report.page import MEANINGS, WORDS, environment, line_groups, noted, page_stamp, sources_of, unmet
from slip.report.partial import short
from slip.report.pressed import KINDS, alike, band_said, pressure_word, sentence, values
from slip.report.pressed_figure import traction_figure
from slip.report.pressed_lines import explain_pressed
from slip.report.rows import NAME, SHOWN, TEXT, Row, Table, state, urgency
from slip.report.words import CAUTION, NOT_OF_PRESSED, check_name, factor, once, plain
from slip.verdict.checks import Check

TOLD = {
    "displacement": "motion of the bodies",
    "stiffness": "stiffness before slip",
    "stick_ratio": "stick size over contact size",
    "stick_shift": "shift of the stick zone",
    "true_slip": "largest true slip",
    "elastic_slip": "largest elastic slip",
    "edge_stress": "stress at the trailing edge",
    "energy_per_cycle": "energy of a cycle",
}
SMALL = 1e-4  # difference of the routes that is not told
SHEARS = (0, 1, 2, 5, 6)  # columns of a load's row that a contact has: case, end, kind, shear x and y


def pressed_page(assessment: PressedAssessment, units: System | None = None) -> str:
    """The assessment of a contact as one HTML page without script and without any reference outward; same input, same bytes."""
    contact = assessment.joint
    system = units or contact.system
    case, end, found = _governing(assessment)
    explanation = explain_pressed(assessment)
    return (
        environment()
        .get_template("contact.html")
        .render(
            caution=CAUTION,
            title=plain(contact.title or Path(contact.file).name, 160),
            stamp=page_stamp(assessment, system),
            verdict=_verdict(assessment, found, system),
            assumptions=noted(assessment.assumptions),
            warnings=noted(assessment.warnings),
            cases=_case_table(assessment, system),
            place=f"{plain(contact.cases[case].name, NAME)}, {end} end",
            reason=found.reason,
            beside=_beside(found, system),
            picture=_picture(assessment, found, system),
            routes=_route_table(assessment, system),
            notes=once(note for one in assessment.slips.values() for note in one.notes),
            not_assessed=NOT_OF_PRESSED,
            inputs=_groups(assessment, system),
            input_tables=[_loads(assessment, system)],
            explained=f"{plain(explanation.case, NAME)}, {explanation.end} end",
            lines=line_groups(explanation, system),
            converted=system.name if system != SI else "",
            sources=sources_of(explanation),
        )
    )


def _governing(assessment: PressedAssessment) -> tuple[int, str, PressedSlip]:
    """The case and end that the verdict speaks of."""
    g, cases = assessment.verdict.governing, assessment.joint.cases
    return next(
        (i, end, found) for (i, end), found in assessment.slips.items() if (cases[i].name, end) == (g.case, g.end)
    )


# the verdict


def _verdict(assessment: PressedAssessment, found: PressedSlip, system: System) -> dict[str, Any]:
    code, g = assessment.verdict.exit_code, assessment.verdict.governing
    face = assessment.joint.interface
    size = system.say(found.size, "length")
    facts = [
        ("governing case", plain(g.case, NAME), ""),
        ("end", g.end, ""),
        ("check", _check_said(g.check), ""),
        ("factor", "" if g.required is None else factor(g.load_factor, g.required), ""),
        ("required", "" if g.required is None else f"{g.required:g}", ""),
        ("reserve", "" if g.reserve_factor is None else factor(g.reserve_factor, 1.0), "1 or more holds"),
        ("lowest friction", f"{face.friction_low:g}", plain(face.friction_source, 2 * NAME)),
        ("normal force", system.say(assessment.joint.normal_force, "force"), ""),
        ("half size", size, ""),
        (pressure_word(assessment), system.say(found.peak_pressure, "pressure"), ""),
    ]
    return {
        "state": WORDS[code],
        "sentence": sentence(assessment),
        "meaning": MEANINGS[code],
        "facts": [fact for fact in facts if fact[1] not in ("", "-")],
        "unmet": [said.replace("group:", "gross slip:", 1) for said in unmet(assessment.verdict.checks)],
    }


def _check_said(check: str) -> str:
    """A contact has no bolts that could be a group."""
    return "gross slip" if check == "gross_slip.group" else check_name(check)


# the cases


def _case_table(assessment: PressedAssessment, system: System) -> Table:
    """A row for each end of each case; of many those with the least reserve stand open."""
    groups: dict[tuple[str, str], list[Check]] = {}
    for check in assessment.verdict.checks:
        groups.setdefault((check.case, check.end), []).append(check)
    places = {(assessment.joint.cases[i].name, end): found for (i, end), found in assessment.slips.items()}
    g = assessment.verdict.governing
    kinds = {c.name: "alternating" if c.alternating else "static" for c in assessment.joint.cases}
    rows = {
        place: _case_row(checks, kinds[place[0]], places[place], place == (g.case, g.end), system)
        for place, checks in groups.items()
    }
    force = f"[{system.force}]"
    heads: tuple[str, ...] = (
        "case",
        "end",
        "verdict",
        f"shear {force}",
        f"gross-slip load {force}",
        "factor",
        "required",
        "kind",
        "true slip",
        "not met",
    )
    worst = set(sorted(groups, key=lambda place: urgency(groups[place]))[:SHOWN])
    shown, rest = ([row for place, row in rows.items() if (place in worst) == open_] for open_ in (True, False))
    caption = "Factor of every case and end" if not rest else f"The {SHOWN} of {len(rows)} ends with the least reserve"
    for column in (9, 8):  # nothing is missed, no limit of true slip
        if not any(row.cells[column] for row in rows.values()):
            heads, shown, rest = _without(heads, column), _all_without(shown, column), _all_without(rest, column)
    return Table(caption, heads, shown, rest, range(3, 7), 2)


def _without(cells: Sequence[str], column: int) -> tuple[str, ...]:
    return (*cells[:column], *cells[column + 1 :])


def _all_without(rows: Sequence[Row], column: int) -> list[Row]:
    return [Row(_without(row.cells, column), row.state, row.governs) for row in rows]


def _case_row(checks: Sequence[Check], kind: str, found: PressedSlip, governs: bool, system: System) -> Row:
    named = {check.check: check for check in checks}
    held, limit = named["gross_slip.group"], named.get("true_slip")
    loads = [f"{system.out(x, 'force'):.6g}" for x in (found.shear, found.gross_slip_load)]
    safety = "no shear" if held.reason == "no shear" else factor(held.safety, held.required)
    missed = ", ".join(_check_said(c.check) for c in checks if c.decides and not c.holds)
    cells = [plain(held.case, NAME), held.end, state(checks), *loads, safety, f"{held.required:g}", kind]
    return Row([*cells, plain(limit.reason, TEXT) if limit else "", missed], state(checks), governs)


# both routes


def _beside(found: PressedSlip, system: System) -> Table | None:
    """Both routes side by side at the governing end, a row for each number."""
    if not found.routes:
        return None
    closed, stepped = (values(route, system) for route in found.routes)
    rows = []
    for key, name in TOLD.items():
        if key not in closed and key not in stepped:
            continue
        unit = "" if KINDS[key] == "number" else f" [{system.unit(KINDS[key])}]"
        shown = [short(told[key]) if key in told else "-" for told in (closed, stepped)]
        off = found.difference(key)
        cells = [name + unit, *shown, _apart(off)]
        if found.routes[1].band:
            cells.append(band_said(found.routes[1], key, system).strip("()") or "-")
        rows.append(Row(cells))
    heads = ["what", found.routes[0].name, found.routes[1].name, "step against closed form"]
    if found.routes[1].band:
        heads.append("step, over the band of the face's stiffness")
    return Table("Both routes at the governing end", heads, rows)


def _apart(off: float | None) -> str:
    """By how much the step differs, in per cent."""
    if off is None:
        return "-"
    return f"{100 * off:+.3g} %" if SMALL <= abs(off) < 10 else f"below {100 * SMALL:g} %" if abs(off) < SMALL else "-"


def _route_table(assessment: PressedAssessment, system: System) -> Table | None:
    """A row for each route of each end; ends of a case that are the same share theirs. None where there is one end alone."""
    if len(alike(assessment)) == 1:
        return None
    used = [
        key for key in TOLD if any(getattr(r, key) is not None for f in assessment.slips.values() for r in f.routes)
    ]
    heads = ["case", "end", "route"]
    heads += [TOLD[key] + ("" if KINDS[key] == "number" else f" [{system.unit(KINDS[key])}]") for key in used]
    rows = []
    for i, end, found in alike(assessment):
        name = plain(assessment.joint.cases[i].name, NAME)
        for route in found.routes:
            told = values(route, system)
            rows.append(Row([name, end, route.name, *(_cell(told, route, key, system) for key in used)]))
        if found.reason:
            rows.append(Row([name, end, plain(found.reason, TEXT), *("-" for _ in used)]))
    return Table("Both routes at every end", heads, rows[:SHOWN], rows[SHOWN:], range(3, 99))


def _cell(told: dict[str, float], route: Any, key: str, system: System) -> str:
    if key not in told:
        return "-"
    band = band_said(route, key, system)
    return f"{short(told[key])} {band}".rstrip()


def _picture(assessment: PressedAssessment, found: PressedSlip, system: System) -> dict[str, Any]:
    """The picture for light and dark, with the words beside it and the words in its place."""
    light, dark = (figures.image(traction_figure(found, system, ink), ink) for ink in (figures.LIGHT, figures.DARK))
    said = [
        ("shear", system.say(found.shear, "force")),
        ("gross-slip load", system.say(found.gross_slip_load, "force")),
        ("half size of the contact", system.say(found.size, "length")),
        (pressure_word(assessment), system.say(found.peak_pressure, "pressure")),
    ]
    if found.routes:
        said.append(("stick size over contact size", short(found.routes[0].stick_ratio)))
    alt = (
        "Friction times pressure along the contact, and below it the traction of both routes. "
        "Where the traction lies on the bound the contact slips; in the middle it sticks."
    )
    return {"light": light, "dark": dark, "alt": alt, "said": said}


# the inputs


def _groups(assessment: PressedAssessment, system: System) -> list[Group]:
    c = assessment.joint
    contact: list[Pair] = [
        ("shape", c.shape),
        ("radius of the edge" if c.flat_width else "radius", _said(c.radius, "length", system)),
        ("width of the flat part", _said(c.flat_width, "length", system)),
        ("length", _said(c.length, "length", system)),
        ("normal force", system.say(c.normal_force, "force")),
        ("bulk stress in the first body", _said(c.bulk_stress or None, "pressure", system)),
    ]
    bodies: list[Pair] = []
    for which, m in zip(("first", "second"), c.bodies, strict=True):
        named = system.say(m.youngs_modulus, "pressure") if m.source == "file" else material_said(m, system)
        bodies += [(f"modulus of the {which} body", named), ("its Poisson's ratio", f"{m.poissons_ratio:g}")]
    face = [pair for pair in interface_pairs(c.interface, system) if not pair[0].startswith("faces that share")]
    required: list[Pair] = [
        ("factor of static cases", f"{c.required.static:g}"),
        ("factor of alternating cases", f"{c.required.alternating:g}"),
        ("limit of true slip", _said(c.required.true_slip, "length", system)),
    ]
    found = (("Contact", contact), ("Bodies", bodies), ("Sliding face", face), ("Required", required))
    return [Group(title, tuple(pair for pair in pairs if pair[1])) for title, pairs in found]


def _said(value: float | None, kind: str, system: System) -> str:
    return "" if value is None else system.say(value, kind)


def _loads(assessment: PressedAssessment, system: System) -> Table:
    heads = [load_heads(system)[i] for i in SHEARS]
    rows = [Row([row[i] for i in SHEARS]) for case in assessment.joint.cases for row in load_rows(case, system)]
    return Table("Load cases", heads, rows[:SHOWN], rows[SHOWN:], range(3, 5))
