"""Numbers and sentences on a contact stiffness, as its lines and its page both say them."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

import numpy as np

from slip.base.units import SI, SYSTEMS, UNITS, System, parse_unit
from slip.report.words import once, plain
from slip.stiffness.interface import InterfaceValues
from slip.stiffness.stage import Penalty
from slip.stiffness.window import LEVELS, Window

AREA = "stiffness per area"
PURPOSES = {"stick": "a contact that only has to stick", "interface": "a contact that stands for the real faces"}
PRESSURES = {"mean": "mean pressure", "weighted": "clamp-weighted pressure", "peak": "peak pressure"}
SMALL = 0.1  # mm: lengths below are told in um or uin
ALIKE = 5e-3  # difference that is not told
PLAIN_FROM, PLAIN_TO = 1e-3, 1e7  # numbers outside are told with a power of ten
CARD = "the tests for elastic slip, true slip and creep stand in --report and --json"


def number(value: float) -> str:
    """Four digits; whole numbers from a thousand on with their thousands apart, a power of ten beyond 1e7 and below 0.001."""
    value = float(f"{value:.4g}")
    if value and not PLAIN_FROM <= abs(value) < PLAIN_TO:
        digits, _, power = f"{value:.3e}".partition("e")
        return f"{digits.rstrip('0').rstrip('.')}e{int(power)}"
    return f"{value:,.0f}".replace(",", " ") if abs(value) >= 1000 else f"{value:.4g}"


def scale(kind: str, values: Iterable[float], system: System) -> tuple[str, float]:
    """Unit, and its number in one inside unit, in which all of the values are told; lengths that are all small in um or uin."""
    if kind == "length" and max((abs(v) for v in values), default=SMALL) < SMALL:
        unit = "um" if system.length == "mm" else "uin"
        return unit, 1 / UNITS[unit][0]
    return (system.unit(kind), system.out(1.0, kind)) if kind else ("", 1.0)


def cells(values: Sequence[float], kind: str, system: System) -> tuple[str, list[str]]:
    """The unit, and each value in it."""
    unit, factor = scale(kind, values, system)
    return unit, [number(value * factor) for value in values]


def other_units(found: Penalty, system: System) -> list[tuple[str, list[str]]]:
    """The recommended values per area in the units that are not the reader's: unit, and a number for each purpose."""
    values = list(found.recommended.values())
    rows = [(one.unit(AREA), cells(values, AREA, one)[1]) for one in SYSTEMS.values() if one != system]
    metre = ("N/m^3", [number(value / parse_unit("N/m^3")[0]) for value in values])
    return [*rows, metre] if system == SI else rows


def say(value: float, kind: str, system: System) -> str:
    """A value with its unit."""
    unit, (shown,) = cells([value], kind, system)
    return f"{shown} {unit}".rstrip()


def between(low: float, high: float, kind: str, system: System) -> str:
    """Both ends of a band, without the unit; '' where they are one."""
    _, (first, last) = cells([low, high], kind, system)
    return f"{first} .. {last}" if high > low else ""


def titled(name: str, unit: str) -> str:
    """A name with its unit in brackets."""
    return f"{name} [{unit}]" if unit else name


# sentences


def judged(found: Penalty, system: System) -> str:
    """What the answer is judged on, and by which model."""
    s = found.subject
    place = f"{plain(s.case, 30)}, {s.end} end: shear {say(s.force, 'force', system)}"
    gross = f", slips wholly at {say(s.gross * s.force, 'force', system)}" if s.force else ""
    return f"{place}{gross}; {found.model}"


def reason(purpose: str) -> str:
    """By which rule a value was taken."""
    if purpose == "stick":
        return "the least value that keeps stiffness, true slip, energy and sharing within 5 %"
    return "the face's own value at the clamp-weighted pressure"


def pressures(found: Penalty, own: InterfaceValues, system: System) -> list[tuple[str, list[str]]]:
    """k_t of the real face low, typical and high, at each of its pressures; one row where they are all the same."""
    rows = []
    for name, said in PRESSURES.items():
        at = say(getattr(found.subject.pressures, name), "pressure", system)
        rows.append((f"{said} {at}", [_area(k, system) for k in own.k_t[name]]))
    same = len({tuple(shown) for _, shown in rows}) == 1
    return [(f"at {at}", rows[0][1])] if same else rows


def elastic(own: InterfaceValues, system: System) -> str:
    """The elastic slip of the real face at its limit traction, with its band, and how well it is known."""
    low, typical, high = own.elastic_slip  # at the low, typical and high stiffness: the first is the longest
    unit, shown = cells([typical, high, low], "length", system)
    band = f" ({shown[1]} .. {shown[2]})" if low > high else ""
    return f"elastic slip at the limit traction {shown[0]} {unit}{band}, basis {own.basis}"


def follow(own: InterfaceValues, system: System) -> str:
    """The advice to let the stiffness follow the pressure, and what a constant does on this joint; '' for a measured constant."""
    if own.slope is None:
        return ""
    a, b = own.own.motions, own.constant.motions
    slope = number(own.slope[1] / system.out(1.0, "length"))
    text = f"let it follow the pressure where the model can, {slope} /{system.length} times it"
    if abs(b.first_slip_factor / a.first_slip_factor - 1) < ALIKE:
        return f"{text}; on this face a constant starts to slip at the same load"
    wrong = f"a constant starts to slip at {number(b.first_slip_factor)} of the load instead of {number(a.first_slip_factor)}"
    if a.energy_per_cycle and b.energy_per_cycle is not None:
        wrong += f" and takes {b.energy_per_cycle / a.energy_per_cycle:.3g} times the energy of a cycle"
    return f"{text}: {wrong}"


def no_value(found: Penalty, purpose: str) -> str:
    """Said where no value serves every quantity; '' where one does."""
    if found.serves_all[purpose] is not None:
        return ""
    return f"no value keeps every quantity within {LEVELS[0]:.0%}: choose by the quantity that counts"


def against(purpose: str) -> str:
    """What the errors of a window are measured against."""
    own = "a contact that does not give" if purpose == "stick" else "the face's own stiffness"
    return f"{own}, the plates' shear in both"


def known(w: Window) -> list[str]:
    """The quantities that a window has errors of."""
    return [name for name, errors in w.errors.items() if not np.isnan(errors).all()]


def span(low: float | None, high: float | None, w: Window, system: System) -> str:
    """From where to where the values serve; 'none', 'any', an open or a closed range."""
    if low is None or high is None:
        return "none"
    first = low <= w.k[0] * (1 + 1e-9)
    if math.isinf(high):
        return "any" if first else f"from {_area(low, system)}"
    return f"to {_area(high, system)}" if first else f"{_area(low, system)} .. {_area(high, system)}"


def spans(w: Window, name: str, system: System) -> list[str]:
    """The values that keep a quantity within each level."""
    return [span(w.lowest[name][level], w.highest[name][level], w, system) for level in LEVELS]


def _area(value: float, system: System) -> str:
    return number(system.out(value, AREA))


def noted(found: Penalty) -> list[tuple[str, list[str]]]:
    """Assumptions and warnings under their headings."""
    heads = (("Assumed", found.joint.assumptions), ("Warnings", (*found.joint.warnings, *found.notes)))
    return [(name, once(plain(note.text, 300) for note in notes)) for name, notes in heads]
