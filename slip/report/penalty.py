"""The contact stiffness of a model for a person at a terminal: lines of at most 80 columns, the recommended values first."""

from __future__ import annotations

from collections.abc import Iterator

from slip.base.units import System
from slip.report.penalty_words import (
    AREA,
    CARD,
    PURPOSES,
    against,
    cells,
    elastic,
    follow,
    judged,
    known,
    no_value,
    noted,
    number,
    other_units,
    pressures,
    reason,
    say,
    span,
    spans,
    titled,
)
from slip.report.run_lines import bins_text, examined_text
from slip.report.words import CAUTION, columns, cut, plain, wrapped
from slip.stiffness.run_found import Examined
from slip.stiffness.run_points import over_pressure
from slip.stiffness.stage import Penalty
from slip.stiffness.upper import Upper
from slip.stiffness.window import LEVELS, Window

WIDTH = 80
NAME, CELL = 44, 16  # columns of a form's name and of its value


def penalty_text(found: Penalty, units: System | None = None, ran: Examined | None = None) -> str:
    """The answer as lines; below it what a run of the model found on its contact."""
    system = units or found.joint.system
    lines = list(_lines(found, system))
    if ran is not None:
        bins = over_pressure(ran, found.subject.stiffness)
        lines += ["-- The run ".ljust(WIDTH, "-"), *examined_text(ran, system), *bins_text(bins, system)]
    return "\n".join(cut(line.rstrip(), WIDTH) for line in lines) + "\n"


def _lines(found: Penalty, system: System) -> Iterator[str]:
    for purpose, k in found.recommended.items():
        yield from wrapped(f"{PURPOSES[purpose]}: {say(k, AREA, system)} along the face", WIDTH)
        yield from _why(found, purpose, system)
    title = plain(found.joint.title or found.joint.file, WIDTH - 8)
    yield f"-- {title} ".ljust(WIDTH - columns(title) + len(title), "-")
    yield from wrapped(f"Judged on {judged(found, system)}", WIDTH)
    yield from _forms(found, system)
    for w in found.windows:
        yield from _window(found, w, system)
    yield from _upper(found.upper, system)
    if found.audit is not None:
        yield from wrapped(f"Present value {say(found.audit.k, AREA, system)}:", WIDTH)
        for text in found.audit.advice:
            yield from _indented(text)
    yield from _card(found, system)
    for name, texts in noted(found):
        if texts:
            yield from wrapped(f"{name} ({len(texts)}): {'; '.join(texts)}", WIDTH)
    yield from wrapped(f"Caution: {CAUTION}", WIDTH)


def _indented(text: str) -> list[str]:
    return wrapped(text, WIDTH, first="  ", later="    ")


def _why(found: Penalty, purpose: str, system: System) -> Iterator[str]:
    """What stands behind a recommended value, and what it does not serve."""
    own = found.interface
    if purpose == "interface" and own is not None:
        for at, (low, typical, high) in pressures(found, own, system):
            yield f"  {at:<38}{typical:>10}" + (f"  ({low} .. {high})" if low != high else "")
        yield from _indented(elastic(own, system))
        if advice := follow(own, system):
            yield from _indented(advice)
    else:
        yield f"  {reason(purpose)}"
    if said := no_value(found, purpose):
        yield from _indented(said)


def _forms(found: Penalty, system: System) -> Iterator[str]:
    """Every form of each recommended value, side by side."""
    yield f"{'The value as':<{NAME}}" + "".join(f"{name:>{CELL}}" for name in found.forms)
    bulk = False
    for i, rows in enumerate(zip(*found.forms.values(), strict=True)):
        unit, shown = cells([row.value for row in rows], rows[0].kind, system)
        star = "*" if "bulk" in rows[0].remark else ""
        bulk = bulk or bool(star)
        yield _form(titled(rows[0].meaning + star, unit), shown)
        for unit, shown in () if i else other_units(found, system):
            yield _form(titled("the same", unit), shown)
    if bulk:
        yield "  * bulk of the plates included: never beside a mesh of them"


def _form(name: str, shown: list[str]) -> str:
    """A row of the forms; a long name takes from the room of the first value."""
    line = f"  {name:<{NAME - 2}}" + "".join(f"{cell:>{CELL}}" for cell in shown)
    spare = columns(line) - (NAME + CELL * len(shown))
    return line if spare <= 0 else f"  {name}" + "".join(f"{cell:>{CELL}}" for cell in shown)[spare:]


def _window(found: Penalty, w: Window, system: System) -> Iterator[str]:
    """Values that keep each quantity within 10, 5 and 1 %; quantities with the same answer at every level in one line."""
    yield from wrapped(f"Window for {w.purpose} [{system.unit(AREA)}], errors against {against(w.purpose)}:", WIDTH)
    yield f"  {'error of':<15}" + "".join(f"{'within ' + format(level, '.0%'):>21}" for level in LEVELS)
    alike: dict[str, list[str]] = {"any": [], "none": []}
    for name in known(w):
        shown = spans(w, name, system)
        if len(set(shown)) == 1 and shown[0] in alike:
            alike[shown[0]].append(name)
        else:
            yield f"  {name:<15}" + "".join(f"{cell:>21}" for cell in shown)
    both = found.serves_all[w.purpose]
    if both is not None:
        yield f"  {'all of them':<15}{span(*both, w, system):>21}"
    for word, names in alike.items():
        if names:
            yield from _indented(f"{word} within {LEVELS[-1 if word == 'any' else 0]:.0%}: {', '.join(names)}")


def _upper(bounds: tuple[Upper, ...], system: System) -> Iterator[str]:
    """Bounds from above."""
    yield f"Not above [{system.unit(AREA)}]:"
    for bound in bounds:
        value = "not told" if bound.value is None else number(system.out(bound.value, AREA))
        yield from _indented(f"{bound.name}: {value}, {bound.said}")


def _card(found: Penalty, system: System) -> Iterator[str]:
    """What the analyst's own run should show."""
    yield "Your own run should show:"
    for row in found.card.expected:
        unit, (low, typical, high) = cells([row.low, row.typical, row.high], row.kind, system)
        band = f"({low} .. {high})" if row.high > row.low else ""
        yield f"  {titled(row.name, unit):<28}{typical:>12}  {band}"
    yield from _indented(CARD)
    yield from _indented(f"Contact points on {plain(found.card.carries, 30)}: {found.card.rule}.")
    yield from _indented(f"For the log: {plain(found.card.log, 400)}")
