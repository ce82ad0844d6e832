"""One self-contained page of a table of load cases. Words and rows are made ready here, templates/cases.html sets them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import polars as pl

import slip
from slip.base.units import System
from slip.cases.run import TableResult
from slip.cases.summary import ENVELOPE, KEPT, LISTED, NEAR, Worst
from slip.cases.write import style
from slip.report.cases import KINDS, chosen, spread_said
from slip.report.cases_figure import bolts_picture, spread_names, spread_picture
from slip.report.cases_ledger import worst_bolts
from slip.report.cases_rows import result_rows
from slip.report.page import GROWS, environment, noted
from slip.report.rows import NAME, TEXT, Row, Table
from slip.report.words import CAUTION, NOT_ASSESSED, check_name, factor, plain
from slip.verdict.stage import FAILS, HOLDS, NOT_SOLVED

LEDGERS_SHOWN = 20  # cases whose worst bolt is written out
OPEN_ROWS = 20  # rows of a table that stand open
WORDS = {HOLDS: "holds", FAILS: "fails", NOT_SOLVED: "not judged"}
STATES = {HOLDS: "holds", FAILS: "fails", NOT_SOLVED: "not solved"}
MEANINGS = {
    HOLDS: "Every case of the table was judged and holds (exit code 0).",
    FAILS: "At least one case fails (exit code 1).",
    NOT_SOLVED: "No case fails, but at least one could not be judged: this is not a pass (exit code 3).",
}
GROWING = {"all loads": ", all loads growing", "shear": ", clamp held"}
ENVELOPE_HEADS = {
    "clamp_low": "lowest clamp",
    "clamp_high": "highest clamp",
    "shear": "largest shear",
    "safety": "least factor, clamp held",
    "load_factor": "least factor, all loads growing",
    "reserve": "least reserve",
}


def cases_page(
    found: TableResult, table: str, units: System | None, top: int, cases: Sequence[str], bolts: Sequence[str]
) -> str:
    """The result of a table as one HTML page without script and without any reference outward; same input, same bytes.

    table: path of the table; units: of the page, None for those of the joint file; top: governing rows that are listed, of these
    cases and bolts, of all where a list is empty.
    """
    system = units or found.joint.system
    near = chosen(found.summary, cases, bolts)[:top]
    rows, reason = _rows(found)
    judged = bool(found.summary.worst)
    return (
        environment()
        .get_template("cases.html")
        .render(
            caution=CAUTION,
            title=plain(found.joint.title or Path(found.joint.file).name, 160),
            stamp=_stamp(found, table, system),
            verdict=_verdict(found),
            filtered=_filtered(cases, bolts),
            explain=_explain(found, table),
            assumptions=noted(found.assumptions),
            warnings=noted(found.warnings),
            nearest=_nearest(found, near),
            none_near=_none_near(judged),
            ledgers=worst_bolts(found, table, near[:LEDGERS_SHOWN], system),
            not_judged=_not_judged(found),
            refused=_refused(found),
            spread=_spread(found),
            spread_said=spread_said(found),
            spread_picture=spread_picture(found) if judged else None,
            bolts_picture=bolts_picture(found, system) if judged else None,
            envelope=_envelope(found, system, bolts),
            separation=_separation(found, top),
            balance=_balance(found),
            not_assessed=NOT_ASSESSED,
            rows=rows,
            no_rows=reason,
        )
    )


def _stamp(found: TableResult, table: str, system: System) -> list[tuple[str, str]]:
    kinds = ("force", "length", "pressure", "moment")
    own = found.joint.system
    units = ", ".join(dict.fromkeys(system.unit(kind) for kind in kinds))
    return [
        ("joint file", plain(Path(found.joint.file).name, NAME)),
        ("its digest", found.joint.digest),
        ("table", plain(Path(table).name, NAME)),
        ("its digest", found.digest),
        ("program", f"slip {slip.__version__}"),
        ("units", units if system == own else f"{units}; in sentences those of the file, {own.name}"),
    ]


def _verdict(found: TableResult) -> dict[str, Any]:
    """The word, what governs, and what it rests on; it is of all cases, whatever is shown below."""
    summary, required, face = found.summary, found.joint.required, found.joint.interface
    facts = [
        ("cases", str(summary.cases), ""),
        ("hold", str(summary.codes[HOLDS]), ""),
        ("fail", str(summary.codes[FAILS]), ""),
        ("not judged", str(summary.codes[NOT_SOLVED]), ""),
        ("rows", str(summary.rows), f"{summary.refused} refused"),
        ("lowest friction", f"{face.friction_low:g}", plain(face.friction_source, 2 * NAME)),
    ]
    sentence = "no case could be judged"
    if summary.worst:
        w = summary.worst[0]
        growing = "" if w.check == "separation" else GROWING[required.grows]
        against = f"{factor(w.factor, w.required)}, required {w.required:g}{growing}"
        sentence = f"{check_name(w.check)} {against if w.factor is not None else 'reserve ' + _reserve(w)}"
        where = [("governing case", plain(w.case, NAME), ""), ("end", w.end, ""), ("bolt", plain(w.bolt, NAME), "")]
        facts = [fact for fact in where if fact[1]] + [("reserve", _reserve(w), "1 or more holds")] + facts
    rule = "The group factor decides" if required.decides == "group" else "The factor per bolt decides"
    return {
        "state": WORDS[found.exit_code],
        "style": STATES[found.exit_code].replace(" ", "-"),
        "sentence": sentence,
        "facts": facts,
        "meaning": MEANINGS[found.exit_code],
        "rule": f"{rule}; {GROWS[required.grows]}. Lowest friction and lowest preload.",
        "reason": plain(required.decides_reason, TEXT) if required.decides == "group" else "",
        "form": plain(found.form.said, TEXT),
    }


def _filtered(cases: Sequence[str], bolts: Sequence[str]) -> str:
    """What is shown, where not all is."""
    of = [
        f"{word} {', '.join(plain(name, NAME) for name in names)}"
        for word, names in (("case", cases), ("bolt", bolts))
        if names
    ]
    return " and ".join(of)


def _explain(found: TableResult, table: str) -> str:
    """The command that prints every number of the governing case."""
    if not found.summary.worst:
        return ""
    w = found.summary.worst[0]
    words = [Path(found.joint.file).name, plain(w.case, NAME), *([plain(w.bolt, NAME)] if w.bolt else [])]
    quoted = " ".join(f'"{word}"' if " " in word else word for word in words)
    return f"slip explain {quoted} --table {plain(Path(table).name, NAME)}"


def _none_near(judged: bool) -> str:
    """Why no governing row is listed."""
    if not judged:
        return "no case could be judged"
    return f"none of these cases and bolts governs among the {KEPT} cases nearest to slip, which are kept"


def _reserve(w: Worst) -> str:
    return "not solved" if w.reserve is None else factor(w.reserve, 1.0)


def _nearest(found: TableResult, near: Sequence[Worst]) -> Table | None:
    """The governing rows."""
    if not near:
        return None
    rows = []
    for w in near:
        numbers = [factor(w.factor, w.required), f"{w.required:g}", _reserve(w)]
        cells = [plain(w.case, NAME), w.end, check_name(w.check), plain(w.bolt, NAME), *numbers, ""]
        rows.append(Row(cells, STATES[w.code], w is found.summary.worst[0]))
    heads = ("case", "end", "check", "bolt", "factor", "required", "reserve", "verdict")
    caption = f"The {len(rows)} cases nearest to slip or opening, what fails first" if len(rows) > 1 else "The case"
    return Table(caption, heads, rows[:OPEN_ROWS], rows[OPEN_ROWS:], range(4, 7), 7)


def _not_judged(found: TableResult) -> Table | None:
    """Cases that could not be judged, with the reason of each."""
    listed, count = found.summary.not_judged, found.summary.codes[NOT_SOLVED]
    if not listed:
        return None
    rows = [Row([plain(case, NAME), plain(reason, TEXT)]) for case, reason in listed]
    caption = "Cases that could not be judged" + (f": the first {len(rows)} of {count}" if count > len(rows) else "")
    return Table(caption, ("case", "reason"), rows[:OPEN_ROWS], rows[OPEN_ROWS:], range(0))


def _refused(found: TableResult) -> dict[str, Any] | None:
    """How many rows were refused, where they are, and why they and their cases are not judged."""
    if not found.summary.refused:
        return None
    reasons = [Row([plain(reason, TEXT), str(count)]) for reason, count in found.summary.reasons.items()]
    where = plain(found.refused.name, NAME) if found.refused else ""
    table = Table("Reasons, of rows and of cases", ("reason", "count"), reasons[:OPEN_ROWS], reasons[OPEN_ROWS:])
    return {"count": found.summary.refused, "where": where, "table": table}


def _spread(found: TableResult) -> Table:
    counts = zip(spread_names(), found.summary.spread, strict=True)
    rows = [Row([name, str(count)]) for name, count in counts if count]
    return Table("Cases by reserve factor", ("reserve factor", "cases"), rows)


def _envelope(found: TableResult, system: System, bolts: Sequence[str]) -> Table:
    """Extremes of each bolt with the cases that they come from."""
    heads = ["bolt"]
    for name, said in ENVELOPE_HEADS.items():
        heads += [f"{said} [{system.unit(KINDS[name])}]" if name in KINDS else said, "case"]
    rows = []
    for i, bolt in enumerate(found.summary.bolts):
        if bolts and bolt not in bolts:
            continue
        cells = [plain(bolt, NAME)]
        for name in ENVELOPE:
            value, case = found.summary.envelope[name][i]
            cells += [_extreme(value, name, system), plain(case, NAME)]
        rows.append(Row(cells))
    return Table("Extremes of each bolt over all cases", heads, rows[:OPEN_ROWS], rows[OPEN_ROWS:], range(1, 12, 2))


def _extreme(value: float, name: str, system: System) -> str:
    if not math.isfinite(value):
        return "-"
    return (
        f"{system.out(value, KINDS[name]):.6g}" if name in KINDS else factor(value, 1.0 if name == "reserve" else None)
    )


def _separation(found: TableResult, top: int) -> dict[str, Any]:
    """Cases that are near to opening."""
    summary = found.summary
    rows = [Row([plain(c, NAME), plain(bolt, NAME), factor(v, 1.0)]) for v, c, bolt in summary.near[: min(top, LISTED)]]
    caption = f"The {len(rows)} nearest to opening" if len(rows) < summary.near_count else "Cases near to opening"
    heads = ("case", "bolt", "reserve against separation")
    table = Table(caption, heads, rows[:OPEN_ROWS], rows[OPEN_ROWS:], range(2, 3))
    said = f"Within {NEAR:g} of opening: {_cases(summary.near_count)}. With an open bolt: {_cases(summary.open_cases)}."
    return {"said": said, "table": table if rows else None}


def _cases(count: int) -> str:
    return f"{count} case" if count == 1 else f"{count} cases"


def _balance(found: TableResult) -> str:
    """Whether the bolt forces add up to the load of the joint, where both are given."""
    count, (share, case) = found.summary.balanced, found.summary.balance
    if not count:
        return ""
    where = f" (the worst, {plain(case, NAME)})" if case else ""
    return f"With both: {_cases(count)}. The bolt forces add up to the joint's load within {share:.1%}{where}."


def _rows(found: TableResult) -> tuple[Table | None, str]:
    """The rows of the result as they were written, or why they are not here."""
    if found.out is None:
        return None, "The rows were not written. With --out RESULT.csv they are, and this page shows them."
    how = style(found.out, found.form.separator, found.form.comma)
    try:
        return result_rows(found.out, how)[0], ""
    except (OSError, pl.exceptions.PolarsError):
        return None, f"{plain(found.out.name, NAME)} could not be read again. Run the command once more."
