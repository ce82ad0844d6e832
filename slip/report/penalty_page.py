"""The page of a contact stiffness. Words and rows are made ready here, templates/penalty.html sets them; nothing is computed."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from slip.base.units import System
from slip.report.page import environment, noted, page_stamp
from slip.report.penalty_figure import window_picture
from slip.report.penalty_words import (
    AREA,
    PRESSURES,
    PURPOSES,
    against,
    between,
    cells,
    elastic,
    follow,
    known,
    no_value,
    number,
    other_units,
    pressures,
    reason,
    say,
    span,
    spans,
    titled,
)
from slip.report.rows import NAME, TEXT, Row, Table
from slip.report.run_figure import run_picture
from slip.report.run_lines import bins_text, examined_text
from slip.report.words import CAUTION, plain
from slip.stiffness.run_found import Examined
from slip.stiffness.run_points import over_pressure
from slip.stiffness.stage import Penalty
from slip.stiffness.window import LEVELS, QUANTITIES, Window

NOTHING = 1e-9  # of the larger motion: the smaller is none


def penalty_page(found: Penalty, units: System | None = None, ran: Examined | None = None) -> str:
    """The answer as one HTML page without script and without any reference outward; same input, same bytes.

    ran: what a run of the model found on its contact.
    """
    joint = found.joint
    system = units or joint.system
    return (
        environment()
        .get_template("penalty.html")
        .render(
            caution=CAUTION,
            title=plain(joint.title or Path(joint.file).name, 160),
            stamp=page_stamp(found.assessment, system),
            answers=[_answer(found, purpose, system) for purpose in found.recommended],
            face=_face_table(found, system),
            facts=_facts(found, system),
            model=found.model,
            picture=window_picture(found, system),
            forms=_form_table(found, system),
            remarks=_remarks(found),
            windows=[_window_table(found, w, system) for w in found.windows],
            upper=_upper_table(found, system),
            present=_present(found, system),
            run=None if ran is None else _run(found, ran, system),
            expected=_expected_table(found, system),
            tests=[_test(text) for text in found.card.tests],
            carries=plain(found.card.carries, NAME),
            rule=found.card.rule,
            log=plain(found.card.log, TEXT),
            assumptions=noted(joint.assumptions),
            warnings=noted((*joint.warnings, *found.notes)),
        )
    )


def _run(found: Penalty, ran: Examined, system: System) -> dict[str, Any]:
    """What a run found, in the terminal's words, with the map of its points."""
    bins = over_pressure(ran, found.subject.stiffness)
    lines = [*examined_text(ran, system), "", *bins_text(bins, system)]
    return {"picture": run_picture(ran, system), "text": "\n".join(lines)}


def _answer(found: Penalty, purpose: str, system: System) -> dict[str, Any]:
    """A recommended value with what stands behind it and what it does not serve."""
    why, own = [reason(purpose)], found.interface
    if purpose == "interface" and own is not None:
        why += [elastic(own, system), follow(own, system)]
    return {
        "value": say(found.recommended[purpose], AREA, system),
        "purpose": PURPOSES[purpose],
        "why": [text[:1].upper() + text[1:] + "." for text in (*why, no_value(found, purpose)) if text],
    }


def _face_table(found: Penalty, system: System) -> Table | None:
    """Stiffness of the real face at its pressures; None where it is not known, or not asked for."""
    if found.interface is None or "interface" not in found.recommended:
        return None
    heads = ("at", *(f"{name} [{system.unit(AREA)}]" for name in ("low", "typical", "high")))
    rows = [Row([at.removeprefix("at "), *shown]) for at, shown in pressures(found, found.interface, system)]
    return Table("The real face along itself, at its pressures", heads, rows)


def _facts(found: Penalty, system: System) -> list[tuple[str, str, str]]:
    """What the answer is judged on."""
    s = found.subject
    facts = [
        ("case", plain(s.case, NAME), ""),
        ("end", s.end, ""),
        ("shear", say(s.force, "force", system), ""),
        ("slips wholly at", say(s.gross * s.force, "force", system), ""),
        ("lowest friction", f"{s.friction:g}", plain(found.joint.interface.friction_source, 2 * NAME)),
    ]
    told = [(said, say(getattr(s.pressures, name), "pressure", system), "") for name, said in PRESSURES.items()]
    return [*facts, ("pressure", told[0][1], "")] if len({value for _, value, _ in told}) == 1 else facts + told


# the value in its forms


def _form_table(found: Penalty, system: System) -> Table:
    """Every form, a column for each purpose; the first one in the other units as well."""
    rows = []
    for forms in zip(*found.forms.values(), strict=True):
        unit, shown = cells([form.value for form in forms], forms[0].kind, system)
        rows.append(Row([titled(forms[0].meaning, unit), *shown, forms[0].remark]))
    name = found.forms[next(iter(found.forms))][0].meaning
    rows[1:1] = [Row([titled(name, unit), *shown, ""]) for unit, shown in other_units(found, system)]
    names = list(found.forms)
    caption = "The recommended values in every form that a model may ask for"
    return Table(caption, ("form", *names, "remark"), rows, numbers=range(1, 1 + len(names)))


def _remarks(found: Penalty) -> list[str]:
    """What holds for the forms that are shown."""
    return [
        "An elastic slip and a part of an element's edge hold for one pressure only; the latter for this mesh only."
        if found.elements.element_size
        else "An elastic slip holds for one pressure only."
    ]


# the window


def _window_table(found: Penalty, w: Window, system: System) -> Table:
    """The values that keep each quantity within each level."""
    rows = [Row([name, *spans(w, name, system)]) for name in known(w)]
    both = found.serves_all[w.purpose]
    every = "none" if both is None else span(*both, w, system)
    rows.append(Row(["all of them", every, *("" for _ in LEVELS[1:])]))
    heads = ("error of", *(f"within {level:.0%} [{system.unit(AREA)}]" for level in LEVELS))
    return Table(f"Window for {w.purpose}: errors against {against(w.purpose)}", heads, rows)


def _upper_table(found: Penalty, system: System) -> Table:
    """What bounds the value from above."""
    rows = [
        Row([u.name, "not told" if u.value is None else number(system.out(u.value, AREA)), u.said]) for u in found.upper
    ]
    return Table("Not above", ("set by", f"value [{system.unit(AREA)}]", "why"), rows, numbers=range(1, 2))


# the present value


def _present(found: Penalty, system: System) -> dict[str, Any] | None:
    """The present value with the motion it makes and its errors; None where there is none."""
    audit = found.audit
    if audit is None:
        return None
    motions = audit.response.motions
    both = [motions.elastic_slip, motions.true_slip]
    unit, shown = cells([v if v > NOTHING * max(both) else 0.0 for v in both], "length", system)
    rows = []
    for name in QUANTITIES:
        errors = [audit.errors[purpose].get(name, float("nan")) for purpose in audit.errors]
        if any(e == e for e in errors):
            rows.append(Row([name, *("-" if e != e else f"{number(100 * e)} %" for e in errors)]))
    return {
        "value": say(audit.k, AREA, system),
        "motion": f"Elastic slip {shown[0]} {unit}, true slip {shown[1]} {unit}, both where they are largest together.",
        "advice": [text[:1].upper() + text[1:] + "." for text in audit.advice],
        "errors": Table("Error of each quantity with the present value", ("error of", *audit.errors), rows),
    }


# the acceptance card


def _expected_table(found: Penalty, system: System) -> Table:
    """What the analyst's own run should show, with the band."""
    rows = []
    for row in found.card.expected:
        unit, (typical,) = _in_one(row.typical, (row.low, row.high), row.kind, system)
        rows.append(Row([titled(row.name, unit), typical, between(row.low, row.high, row.kind, system) or "-"]))
    return Table("Your own run should show", ("quantity", "typical", "band"), rows)


def _in_one(value: float, others: tuple[float, float], kind: str, system: System) -> tuple[str, list[str]]:
    """A value in the unit that its band has too."""
    unit, shown = cells([value, *others], kind, system)
    return unit, shown[:1]


def _test(text: str) -> tuple[str, str]:
    """Name and words of a test, which a colon parts; without a name where there is none."""
    name, colon, words = text.partition(":")
    return (name, words.strip()) if colon and len(name) < 20 else ("", text)
