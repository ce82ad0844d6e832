"""One self-contained page of an assessment. Words and rows are made ready here, templates/page.html sets them; nothing is computed."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Any

import numpy as np
from jinja2 import Environment, FileSystemLoader, StrictUndefined

import slip
from slip.assess import Assessment, FaceAssessment, PressedAssessment
from slip.base.formulas import citation
from slip.base.notes import Note
from slip.base.units import SI, System
from slip.report import inputs
from slip.report.equations import Explanation, Line, explain
from slip.report.partial_rows import partial_part
from slip.report.picture import picture
from slip.report.rows import NAME, TEXT, case_table, input_tables, ledger_tables, standard_table, state
from slip.report.words import CAUTION, NOT_ASSESSED, check_name, factor, once, plain
from slip.verdict.checks import Check
from slip.verdict.gross_slip import End

TEMPLATES = Path(__file__).resolve().parent / "templates"
ALIKE = 3  # notes of one code and key that all stand open
WORDS = {0: "holds", 1: "fails", 3: "not solved"}
MEANINGS = {
    0: "Every check that decides holds (exit code 0).",
    1: "At least one check that decides fails (exit code 1).",
    3: "No check that decides fails, but at least one could not be solved or compared: this is not a pass (exit code 3).",
}
GROWS = {"all loads": "the whole case grows, axial load included", "shear": "the shear grows, the clamp is held"}
KINDS = {"N": "force", "mm": "length", "MPa": "pressure", "N mm": "moment", "mm/N": "compliance", "N/mm": "stiffness"}


def page(assessment: Assessment, units: System | None = None) -> str:
    """The assessment as one HTML page without script and without any reference outward; same input, same bytes."""
    system = units or assessment.joint.system
    end = _governing_end(assessment)
    explanation = explain(assessment)
    template = environment().get_template("page.html")
    return template.render(
        caution=CAUTION,
        title=plain(assessment.joint.title or Path(assessment.joint.file).name, 160),
        stamp=page_stamp(assessment, system),
        verdict=_verdict(assessment, system),
        assumptions=noted(assessment.assumptions),
        warnings=noted(assessment.warnings),
        grows=assessment.joint.required.grows,
        decides=assessment.joint.required.decides,
        cases=case_table(assessment),
        unjudged=[f"{check_name(c.check)}: {c.reason}" for c in assessment.verdict.checks if not c.case],
        place=_place(assessment, end),
        ledger=ledger_tables(assessment, end, system),
        picture=picture(assessment, end, system),
        partial=partial_part(assessment, system),
        standards=list(_standards(assessment, system)),
        not_assessed=NOT_ASSESSED,
        inputs=inputs.groups(assessment.joint, system),
        input_tables=input_tables(assessment, system),
        explained=f"{plain(explanation.case, NAME)}, {explanation.end} end, bolt {plain(explanation.bolt, NAME)}",
        lines=line_groups(explanation, system),
        converted=system.name if system != SI else "",
        sources=sources_of(explanation),
    )


def environment() -> Environment:
    """The templates; what is put in is escaped."""
    loader = FileSystemLoader(TEMPLATES)
    return Environment(loader=loader, autoescape=True, undefined=StrictUndefined, trim_blocks=True, lstrip_blocks=True)


def _governing_end(assessment: Assessment) -> End:
    """The end that the verdict speaks of; where it speaks of none, the first."""
    g, cases = assessment.verdict.governing, assessment.joint.cases
    own = [e for e in assessment.verdict.ends if cases[e.case].name == g.case and e.end == g.end]
    return (own or assessment.verdict.ends)[0]


def _place(assessment: Assessment, end: End) -> str:
    return f"{plain(assessment.joint.cases[end.case].name, NAME)}, {end.end} end"


def page_stamp(assessment: Assessment | PressedAssessment | FaceAssessment, system: System) -> list[tuple[str, str]]:
    """Names and values of the page's head: file, digest, program, units."""
    own = assessment.joint.system
    units = ", ".join(dict.fromkeys(system.unit(kind) for kind in ("force", "length", "pressure", "moment")))
    return [
        ("file", plain(Path(assessment.joint.file).name, NAME)),
        ("input digest", assessment.joint.digest),
        ("program", f"slip {slip.__version__}"),
        ("units", units if system == own else f"{units}; in sentences those of the file, {own.name}"),
    ]


def noted(notes: Sequence[Note]) -> list[tuple[str, str, list[str]]]:
    """Text, key, and the texts that fold: of many notes with one code and key the first stands for all."""
    groups: dict[tuple[str, str], list[str]] = {}
    for note in notes:
        groups.setdefault((note.code, note.key), []).append(plain(note.text, TEXT))
    found: list[tuple[str, str, list[str]]] = []
    for (_, key), texts in groups.items():
        open_texts = texts if len(texts) <= ALIKE else texts[:1]
        found += [(text, key, []) for text in open_texts[:-1]]
        found.append((open_texts[-1], key, texts[len(open_texts) :]))
    return found


# the verdict


def _verdict(assessment: Assessment, system: System) -> dict[str, Any]:
    joint, code = assessment.joint, assessment.verdict.exit_code
    rule = "The group factor decides" if joint.required.decides == "group" else "The factor per bolt decides"
    growing = GROWS[joint.required.grows]
    return {
        "state": WORDS[code],
        "sentence": _sentence(assessment),
        "because": plain(assessment.verdict.governing.reason, TEXT),
        "meaning": MEANINGS[code],
        "rule": f"{rule}; {growing}.",
        "reason": plain(joint.required.decides_reason, TEXT) if joint.required.decides == "group" else "",
        "facts": _facts(assessment, system),
        "unmet": unmet(assessment.verdict.checks),
    }


def _sentence(assessment: Assessment) -> str:
    """The governing check and what it is held against."""
    g, grows = assessment.verdict.governing, assessment.joint.required.grows
    name = check_name(g.check)
    if g.reserve_factor is None or math.isinf(g.reserve_factor):
        return f"{name}: nothing limits" if g.holds else name
    if g.required is None:
        said = f"reserve {factor(g.reserve_factor, 1.0)}"
        unmet_precondition = not g.holds and g.reason and g.check.startswith("standard.")
        return f"{name}: precondition not met, {said}" if unmet_precondition else f"{name}: {said}"
    growing = "" if g.check == "separation" else ", all loads growing" if grows == "all loads" else ", clamp held"
    return f"{name} {factor(g.factor(grows), g.required)}, required {g.required:g}{growing}"


def _facts(assessment: Assessment, system: System) -> list[tuple[str, str, str]]:
    """Name, value and remark of everything that the verdict rests on; what the governing check has not is left out."""
    g, joint = assessment.verdict.governing, assessment.joint
    lowest, bolt, remark = _lowest_preload(assessment)
    required = "" if g.required is None else f"{g.required:g}"
    facts = [
        ("governing case", plain(g.case, NAME), ""),
        ("end", g.end, ""),
        ("check", check_name(g.check), ""),
        ("bolt", plain(g.bolt, NAME), ""),
        ("factor", "" if g.required is None else factor(g.factor(joint.required.grows), g.required), ""),
        ("required", required, ""),
        ("reserve", "" if g.reserve_factor is None else factor(g.reserve_factor, 1.0), "1 or more holds"),
        *_by_standard(assessment),
        ("lowest friction", f"{joint.interface.friction_low:g}", plain(joint.interface.friction_source, 2 * NAME)),
        ("lowest preload", system.say(lowest, "force"), f"bolt {bolt}, {remark}"),
    ]
    return [fact for fact in facts if fact[1] not in ("", "-")]


def _by_standard(assessment: Assessment) -> list[tuple[str, str, str]]:
    """Where a standard governs: its basis and the level of its loads, since friction and preload are then its own."""
    listed = (entry for entries in assessment.verdict.standards.values() for entry in entries)
    entry = next((entry for entry in listed if entry.check is assessment.verdict.governing), None)
    if entry is None or entry.judgement is None:
        return []
    level = f"{entry.standard.to_standard_level:g} x those of the file"
    return [("basis", entry.judgement.basis, "friction and preload by the standard's own rules"), ("loads", level, "")]


def _lowest_preload(assessment: Assessment) -> tuple[float, str, str]:
    """Lowest assembly preload [N] of the governing bolt, else of the least tightened one; its name; what set it."""
    names, low = assessment.joint.pattern.names, assessment.clamp.assembly.low
    bolt = assessment.verdict.governing.bolt
    i = names.index(bolt) if bolt in names else int(np.argmin(low))
    return float(low[i]), plain(names[i], NAME), plain(assessment.clamp.assembly.low_from, TEXT)


def unmet(checks: Sequence[Check]) -> list[str]:
    """What decides and is not met: a sentence for each check and reason, with the number of cases and ends."""
    groups: dict[tuple[str, str], list[Check]] = {}
    for check in checks:
        if check.decides and not check.holds:
            groups.setdefault((check.check, check.reason), []).append(check)
    return [_unmet_said(group) for group in groups.values()]


def _unmet_said(group: Sequence[Check]) -> str:
    first, reserves = group[0], [c.reserve_factor for c in group if c.reserve_factor is not None]
    least = min(reserves, default=math.inf)
    where = f"{len(group)} cases and ends" if len(group) > 1 else _where(first)
    reserve = f"least reserve {factor(least, 1.0)}" if math.isfinite(least) else ""
    said = "; ".join(part for part in (where, reserve, plain(first.reason, TEXT)) if part)
    return f"{check_name(first.check)}: {said}"


def _where(check: Check) -> str:
    """Case and end of a check, where it speaks of one."""
    return ", ".join(part for part in (plain(check.case, NAME), f"{check.end} end" if check.end else "") if part)


# the standards


def _standards(assessment: Assessment, system: System) -> Iterator[dict[str, Any]]:
    """Each listed standard with its entries for all cases and ends."""
    for i, standard in enumerate(assessment.joint.standards):
        entries = [listed[i] for listed in assessment.verdict.standards.values()]
        judged = [entry.judgement for entry in entries if entry.judgement]
        options = [f"{key.replace('_', ' ')} {value}" for key, value in standard.options.items()]
        if standard.to_standard_level is not None:
            options.append(f"loads multiplied by {standard.to_standard_level:g} to reach its level")
        yield {
            "label": standard.label,
            "state": state([entry.check for entry in entries]),
            "said": once(f"Edition {j.edition}, {j.clause}. Basis: {j.basis}." for j in judged),
            "options": plain("; ".join(options), TEXT),
            "presumes": once(system.say(j.presumed_preload, "force") for j in judged if j.presumed_preload is not None),
            "notes": once(plain(note, TEXT) for j in judged for note in j.notes),
            "reasons": once(plain(entry.check.reason, TEXT) for entry in entries if entry.judgement is None),
            "table": standard_table(assessment, entries, system) if judged else None,
        }


# every number's own line


def line_groups(explanation: Explanation, system: System) -> list[tuple[str, list[dict[str, Any]]]]:
    """The lines under their headings, in the order of the calculation."""
    groups: dict[str, list[dict[str, Any]]] = {}
    for line in explanation.lines:
        groups.setdefault(line.group, []).append(_line(line, system))
    return [(group[:1].upper() + group[1:], lines) for group, lines in groups.items()]


def _line(line: Line, system: System) -> dict[str, Any]:
    unit = "" if line.unit == "1" else line.unit
    known = line.source.split(";") if citation(line.source) else []
    return {
        "name": plain(line.name, TEXT),
        "symbol": line.symbol,
        "formula": "" if line.formula == "value" else line.formula,
        "put_in": line.put_in,
        "result": f"{line.result:.8g} {unit}".rstrip(),
        "own": system.say(line.result, KINDS[unit]) if system != SI and unit in KINDS else "",
        "keys": [key for key in known if citation(key)],
        "said": "" if known else plain(line.source, TEXT),
        "basis": line.basis,
        "valid": line.valid,
    }


def sources_of(explanation: Explanation) -> list[tuple[str, str]]:
    """Citations of the keys that the lines name, in the order of their first use."""
    keys = dict.fromkeys(key for line in explanation.lines for key in line.source.split(";"))
    return [(key, said) for key in keys if (said := citation(key))]
