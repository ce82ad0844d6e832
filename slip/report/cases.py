"""The result of a table of load cases: a summary for a person, in some ten lines, and one for programs."""

from __future__ import annotations

import json
import math
from collections.abc import Iterator, Sequence
from typing import Any

import slip
from slip.base.units import System
from slip.cases.hints import UNBALANCED
from slip.cases.run import TableResult
from slip.cases.summary import BINS, ENVELOPE, Summary, Worst
from slip.report.machine import FORMAT, UNITS, friction_entry
from slip.report.words import CAUTION, check_name, columns, cut, factor, plain, wrapped
from slip.verdict.stage import FAILS, HOLDS, NOT_SOLVED

WIDTH = 80
WORDS = {HOLDS: "HOLDS", FAILS: "FAILS", NOT_SOLVED: "NOT JUDGED"}
SHOWN = 5  # of the cases nearest to slip, where nobody asks for more
KINDS = {"clamp_low": "force", "clamp_high": "force", "shear": "force"}


def chosen(summary: Summary, cases: Sequence[str], bolts: Sequence[str]) -> list[Worst]:
    """The governing rows of these cases and bolts; those nearest to slip where no case is asked for."""
    listed = dict.fromkeys([*summary.asked, *summary.worst]) if cases else summary.worst
    return [w for w in listed if (not cases or w.case in cases) and (not bolts or w.bolt in bolts)]


def cases_text(
    found: TableResult,
    units: System | None = None,
    top: int | None = None,
    cases: Sequence[str] = (),
    bolts: Sequence[str] = (),
) -> str:
    """The summary as lines of at most 80 columns; with `top` a line for each of so many governing rows."""
    system = units or found.joint.system
    lines = list(_lines(found, system, cases, bolts, top))
    return "\n".join(cut(line.rstrip(), WIDTH) for line in lines) + "\n"


def _lines(
    found: TableResult, system: System, cases: Sequence[str], bolts: Sequence[str], top: int | None
) -> Iterator[str]:
    summary, joint = found.summary, found.joint
    yield from _verdict(found)
    title = plain(joint.title or joint.file, WIDTH - 8)
    yield f"-- {title} ".ljust(WIDTH - columns(title) + len(title), "-")
    counts = f"{summary.cases} cases: {summary.codes[HOLDS]} hold, {summary.codes[FAILS]} fail"
    if summary.codes[NOT_SOLVED]:
        counts += f", {summary.codes[NOT_SOLVED]} not judged"
    yield _part("table", f"{counts}; {summary.rows} rows" + (f", {summary.refused} refused" * bool(summary.refused)))
    yield _part("read", found.form.said)
    if summary.not_judged:
        yield _part("open", _listed([f"{plain(c, 20)}: {plain(r, 40)}" for c, r in summary.not_judged], "; "))
    if summary.refused:
        yield _part("refused", _listed([f"{plain(r, 50)} ({n})" for r, n in summary.reasons.items()], ", "))
    near = chosen(summary, cases, bolts)
    missing = [plain(c, 20) for c in cases if c not in {w.case for w in (*summary.asked, *summary.worst)}]
    if missing:
        yield _part("absent", _listed([f"{c}: not in the table, or not judged" for c in missing], "; "))
    if near and top is None:
        yield _part("nearest", _listed([_short(w) for w in near[: SHOWN + 1]], ", "))
    yield _part("reserves", spread_said(found))
    if summary.near_count:
        value, case, bolt = summary.near[0]
        count = f"{summary.near_count} near opening" + f", {summary.open_cases} with an open bolt" * bool(
            summary.open_cases
        )
        yield _part("apart", f"{count}; nearest {plain(case, 20)}, {bolt} at {factor(value, 1.0)}")
    yield from wrapped(_extremes(found, system, bolts), WIDTH, first=f"{'bolts':<9}", later=" " * 9)
    if summary.balanced and summary.balance[0] <= UNBALANCED:
        yield _part("balance", f"{summary.balanced} cases add up to the joint's load within {summary.balance[0]:.1%}")
    if found.out:
        yield _part("written", str(found.out))
    if found.refused:
        yield _part("", f"rows refused: {found.refused}")
    if top is not None:
        yield from _table(near[:top])
    yield from _notes("Assumed", [note.text for note in found.assumptions], 4)
    yield from _notes("Warnings", [note.text for note in found.warnings], 20)
    yield from wrapped(f"Caution: {CAUTION}", WIDTH)


def _notes(name: str, texts: Sequence[str], most: int) -> Iterator[str]:
    """The last of the notes, which are those of the table itself, and how many more there are."""
    said = list(dict.fromkeys(plain(text, 240) for text in texts))
    if said:
        more = f" (+{len(said) - most} more: --json)" if len(said) > most else ""
        yield from wrapped(f"{name} ({len(said)}): {'; '.join(said[-most:])}{more}", WIDTH)


def _part(name: str, text: str) -> str:
    return f"{name:<9}{text}"


def _listed(texts: Sequence[str], between: str) -> str:
    """As many of the texts as the line holds, with dots for the others."""
    room, kept = WIDTH - 9, ""
    for i, text in enumerate(texts):
        longer = kept + between + text if kept else text
        more = between + ".." if i < len(texts) - 1 else ""
        if kept and columns(longer + more) > room:
            return kept + between + ".."
        kept = longer
    return kept


def _verdict(found: TableResult) -> Iterator[str]:
    """What governs, in one line, and at which end of the inputs."""
    summary, required = found.summary, found.joint.required
    said = WORDS[found.exit_code]
    if not summary.worst:
        yield f"{said}: no case could be judged"
        return
    w = summary.worst[0]
    against = (
        f"{factor(w.factor, w.required)}, required {w.required:g}" if w.factor is not None else f"reserve {_reserve(w)}"
    )
    place = ", ".join([plain(w.case, 24), f"{w.end} end", *([f"bolt {w.bolt}"] if w.bolt else [])])
    if found.exit_code == NOT_SOLVED:
        yield f"{said}: {summary.codes[NOT_SOLVED]} of {summary.cases} cases; of the others the nearest to slip:"
        said = "  holds"
    yield from wrapped(f"{said}: {check_name(w.check)} {against} ({place})", WIDTH)
    grows = {"all loads": "all loads growing", "shear": "shear growing, clamp held"}[required.grows]
    friction = found.joint.interface.friction_low
    yield f"  at lowest friction {friction:g} and lowest preload, {grows}, reserve {_reserve(w)}"
    if required.decides == "group":
        yield from wrapped(f"the group decides: {plain(required.decides_reason, 200)}", WIDTH, first="  ")


def _reserve(w: Worst) -> str:
    return "not solved" if w.reserve is None else factor(w.reserve, 1.0)


def _short(w: Worst) -> str:
    return f"{plain(w.case, 20)} {_reserve(w)} ({w.bolt or check_name(w.check)})"


def spread_said(found: TableResult) -> str:
    """How many cases lie between which reserves, in few steps; JSON and the page have all."""
    edges, counts = (1.0, 1.1, 1.25, 1.5, 2.0), found.summary.spread
    said, first = [], 0
    for edge in edges:
        last = BINS.index(edge) + 1
        said.append(f"{'below' if not first else 'to'} {edge:g}: {sum(counts[first:last])}")
        first = last
    return "; ".join([*said, f"more: {sum(counts[first:])}"])


def _extremes(found: TableResult, system: System, bolts: Sequence[str]) -> str:
    """The bolt with the lowest clamp, and that with the largest shear."""
    summary = found.summary
    places = [i for i, name in enumerate(summary.bolts) if not bolts or name in bolts]
    said = []
    for name, words, pick in (("clamp_low", "lowest clamp", min), ("shear", "largest shear", max)):
        b = pick(places, key=lambda i: summary.envelope[name][i][0])
        value, case = summary.envelope[name][b]
        if math.isfinite(value):
            said.append(f"{words} {system.say(value, 'force')} at {summary.bolts[b]} ({plain(case, 20)})")
    return ", ".join(said)


def _table(worst: Sequence[Worst]) -> Iterator[str]:
    """A line for each governing row."""
    yield "case                      end    check        bolt     factor  needs  reserve"
    for w in worst:
        value = factor(w.factor, w.required)
        cells = f"{plain(w.case, 25):<25} {w.end:<6} {cut(check_name(w.check), 12):<12} {cut(w.bolt, 7):<7}"
        yield f"{cells} {value:>7} {w.required:>6g}  {_reserve(w)}"


def cases_result(
    found: TableResult,
    units: System | None = None,
    top: int = 20,
    cases: Sequence[str] = (),
    bolts: Sequence[str] = (),
) -> dict[str, Any]:
    """The summary as plain dictionaries and lists; an infinite or missing value is absent."""
    joint, summary = found.joint, found.summary
    system = units or joint.system
    return {
        "format": FORMAT,
        "title": joint.title,
        "tool": {"name": "slip", "version": slip.__version__},
        "input_digest": joint.digest,
        "table_digest": found.digest,
        "units": {kind.replace(" ", "_"): system.unit(kind) for kind in UNITS},
        "holds": found.holds,
        "decides": joint.required.decides,
        "grows": joint.required.grows,
        "friction": friction_entry(joint.interface),
        "governing": _worst(summary.worst[0]) if summary.worst else None,
        "table": {"form": found.form.said, "rows": summary.rows, "refused": summary.refused},
        "cases": {
            "all": summary.cases,
            "hold": summary.codes[HOLDS],
            "fail": summary.codes[FAILS],
            "not_judged": summary.codes[NOT_SOLVED],
        },
        "nearest": [_worst(w) for w in chosen(summary, cases, bolts)[:top]],
        "not_judged": [{"case": case, "reason": reason} for case, reason in summary.not_judged],
        "refused_reasons": summary.reasons,
        "reserves": [
            _present({"from": low, "below": high, "cases": count})
            for low, high, count in zip((None, *BINS), (*BINS, None), summary.spread, strict=True)
        ],
        "near_separation": {
            "cases": summary.near_count,
            "open": summary.open_cases,
            "nearest": [{"case": case, "bolt": bolt, "reserve_factor": v} for v, case, bolt in summary.near[:top]],
        },
        "envelope": [_envelope(found, i, system) for i, name in enumerate(summary.bolts) if not bolts or name in bolts],
        "balance": {"cases": summary.balanced, "largest_miss": summary.balance[0]} if summary.balanced else None,
        "files": _present(
            {"result": str(found.out) if found.out else None, "refused": str(found.refused) if found.refused else None}
        ),
        "assumptions": [note.as_dict() for note in found.assumptions],
        "warnings": [note.as_dict() for note in found.warnings],
    }


def cases_json(found: TableResult, units: System | None, top: int, cases: Sequence[str], bolts: Sequence[str]) -> str:
    """The summary as JSON text."""
    return json.dumps(cases_result(found, units, top, cases, bolts), indent=2, ensure_ascii=False, allow_nan=False)


def _present(entry: dict[str, Any]) -> dict[str, Any]:
    """What says something: not None, not infinite."""
    return {k: v for k, v in entry.items() if v is not None and not (isinstance(v, float) and math.isinf(v))}


def _worst(w: Worst) -> dict[str, Any]:
    entry = {"case": w.case, "end": w.end, "check": w.check, "bolt": w.bolt or None, "factor": w.factor}
    return _present(entry | {"required": w.required, "reserve_factor": w.reserve})


def _envelope(found: TableResult, bolt: int, system: System) -> dict[str, Any]:
    """The extremes of one bolt with the cases they come from."""
    entry: dict[str, Any] = {"bolt": found.summary.bolts[bolt]}
    for name in ENVELOPE:
        value, case = found.summary.envelope[name][bolt]
        if math.isfinite(value):
            said = "reserve_factor" if name == "reserve" else name
            entry[said] = {"value": system.out(value, KINDS[name]) if name in KINDS else value, "case": case}
    return entry
