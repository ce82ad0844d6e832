"""Builders of the preload and what it loses: tightening, losses."""

from __future__ import annotations

import numpy as np

from slip.joint.bolt import Bolt
from slip.joint.pattern import Pattern
from slip.joint.plates import Plate
from slip.joint.tightening import Losses, Preload, Rises, Scatter, Torque
from slip.read import library
from slip.read.bolt_list import BoltList
from slip.read.forms import PreloadForm
from slip.read.hardware import need_springs
from slip.read.reader import Reader, Stop, nearest, show
from slip.read.sections import Section

SCATTERS = ("method", "scatter", "scatter_ratio", "scatter_sigma", "tool_accuracy")
Range = tuple[float, float] | None
Ends = tuple[np.ndarray, np.ndarray, np.ndarray | None, Scatter | None]
OF_TORQUE = ("head_friction", "nut_factor", "prevailing_torque")


def tightening(r: Reader, s: Section, bolts: BoltList | None, bolt: Bolt | None) -> Torque | Preload:
    """[tightening], or the preloads of the bolt list: exactly one statement of the preload."""
    if bolts is None:
        raise Stop
    listed = bolts.preload_low is not None and bolts.preload_high is not None
    given = [name for name in ("torque", "preload") if s.has(name)]
    said = given + ["the preloads of the bolt list"] * listed
    if len(said) > 1:
        raise s.stop(given[-1], "too-many-forms", " and ".join(said), "one statement of the preload", "keep one")
    if not said:
        write = 'add torque = "200 N m" or preload = [low, high]'
        raise s.stop("torque", "missing-key", "neither torque nor preload", "exactly one of them", write)
    if said == ["torque"]:
        return _torque(r, s, bolt)
    idle = [name for name in OF_TORQUE if s.has(name)]
    if idle:
        text = f"beside a preload {', '.join(idle)} take{'' if len(idle) > 1 else 's'} no part"
        r.warn("no-part", text, f"tightening.{idle[0]}")
    low, high, nominal, scatter = _preload(s, bolts, s.get("preload", PreloadForm({}, None)))
    return Preload(low, high, nominal, scatter, ranged(s, "thread_friction"), s.get("source", ""))


def _preload(s: Section, bolts: BoltList, form: PreloadForm) -> Ends:
    """Low, high and nominal preload per bolt with their scatter: from the list, from ranges, or from a nominal."""
    scatter = _scatter(s)
    if form.nominal is not None:
        if scatter is None:
            expected, write = (
                "[lowest, highest], or a nominal with its scatter",
                'add scatter = "25 %" or write a range',
            )
            raise s.stop_value("preload", "preload-without-scatter", expected, write)
        nominal = form.nominal * np.ones(bolts.pattern.count)
        return nominal * (1 - scatter.bound), nominal * (1 + scatter.bound), nominal, scatter
    if scatter is not None:
        key = next(name for name in SCATTERS if s.has(name))
        raise s.stop(key, "too-many-forms", "lowest and highest preload, and a scatter", "one of them", f"remove {key}")
    if bolts.preload_low is not None and bolts.preload_high is not None:
        return bolts.preload_low, bolts.preload_high, None, None
    return _ranges(s, bolts.pattern, form.ranges)


def _ranges(s: Section, pattern: Pattern, ranges: dict[str, tuple[float, float]]) -> Ends:
    """Preload from ranges by bolt name, '' for all others."""
    unknown = [name for name in ranges if name and name not in pattern.names]
    if unknown:
        close = nearest(unknown[0], pattern.names)
        remedy = f"did you mean {close}?" if close else f"the bolts are {', '.join(pattern.names[:8])}"
        path = (*s.path, "preload", unknown[0])
        raise s.reader.stop(path, "unknown-bolt", show(unknown[0]), "a bolt of the pattern", remedy)
    missing = [name for name in pattern.names if name not in ranges and "" not in ranges]
    if missing:
        found = f"nothing for {', '.join(missing[:8])}"
        raise s.stop("preload", "bolt-without-preload", found, "a preload for every bolt", "add others = [low, high]")
    each = np.array([ranges[name] if name in ranges else ranges[""] for name in pattern.names])
    return each[:, 0], each[:, 1], None, None


def _torque(r: Reader, s: Section, bolt: Bolt | None) -> Torque:
    """Tightening by torque, with friction or nut factor, and scatter or tool accuracy."""
    if bolt is None:
        raise Stop
    if bolt.thread is None:
        expected = "thread, to turn torque into preload"
        raise r.stop(("bolt", "thread"), "missing-key", "nothing", expected, 'add thread = "M16" in [bolt]')
    turning = r.attempt(lambda: _turning(r, s))
    frictions = r.attempt(lambda: _frictions(r, s, bolt))
    if frictions is not None and bolt.head == "countersunk" and not s.has("nut_factor"):
        found, expected = (
            "frictions under a countersunk head",
            "nut_factor, or a preload: a cone holds more torque than a flat face",
        )
        raise s.stop(
            "head_friction",
            "countersunk-torque",
            found,
            expected,
            "give nut_factor = [low, high] or a measured preload",
        )
    scatter = _scatter(s)
    if turning is None or frictions is None:
        raise Stop
    if scatter is None:
        scatter = library.worst_scatter()
        text = f"tightening scatter {scatter.bound:.0%}, the table's largest ({scatter.text})"
        r.assume("scatter-worst", text, "tightening.method")
    accuracy = s.get("tool_accuracy")
    return Torque(
        turning[0], *frictions, turning[1], None if accuracy is not None else scatter, accuracy, s.get("source", "")
    )


def _turning(r: Reader, s: Section) -> tuple[float, tuple[float, float]]:
    """The tightening torque, and what of it the locking elements take."""
    torque, prevailing = s.get("torque"), ranged(s, "prevailing_torque") or (0.0, 0.0)
    if prevailing[1] >= torque:
        expected = f"a prevailing torque below the tightening torque of {r.system.say(torque, 'moment')}"
        raise s.stop_value("prevailing_torque", "prevailing-above-torque", expected, "correct one of them")
    return torque, prevailing


def _frictions(r: Reader, s: Section, bolt: Bolt) -> tuple[Range, Range, Range]:
    """Thread friction and head friction, or the nut factor in place of both."""
    thread, head, factor = (ranged(s, name) for name in ("thread_friction", "head_friction", "nut_factor"))
    if factor and (thread or head):
        found, expected = "nut_factor and frictions", "nut_factor, or the frictions of thread and head"
        raise s.stop("nut_factor", "too-many-forms", found, expected, "keep one")
    if factor:
        return None, None, factor
    missing = [name for name, value in (("thread_friction", thread), ("head_friction", head)) if not value]
    if missing:
        expected = "thread_friction and head_friction, or nut_factor"
        raise s.stop(missing[0], "missing-key", "nothing", expected, f"add {missing[0]} = [low, high]")
    for name in ("bearing_diameter", "hole_diameter"):
        if getattr(bolt, name) is None:
            expected = f"{name}, for the friction under the head; no table has it"
            raise r.stop(("bolt", name), "missing-key", "nothing", expected, f"add {name} in [bolt]")
    return thread, head, None


def _scatter(s: Section) -> Scatter | None:
    """The scatter that the file gives in one of its forms, or None."""
    given = [name for name in SCATTERS if s.has(name)]
    if len(given) > 1:
        raise s.stop(given[1], "too-many-forms", " and ".join(given), "one statement of the scatter", "keep one")
    if s.has("sigmas") != s.has("scatter_sigma"):
        missing, write = ("scatter_sigma", '"8 %"') if s.has("sigmas") else ("sigmas", "3")
        raise s.stop(
            missing, "missing-key", "nothing", "scatter_sigma together with sigmas", f"add {missing} = {write}"
        )
    if not given:
        return None
    form, value = given[0], s.get(given[0])
    if form == "method":
        return _method(s, value)
    bound = {
        "scatter_ratio": lambda: (value - 1) / (value + 1),
        "scatter_sigma": lambda: value * s.get("sigmas"),
    }.get(form, lambda: value)()
    if bound >= 1:
        expected = f"a scatter below 100 %, not {bound:.0%}"
        raise s.stop_value(form, "scatter-too-wide", expected, "correct the scatter, or give the lowest preload")
    return Scatter(bound, form.replace("_", " "), "file", "given", True)


def _method(s: Section, name: str) -> Scatter:
    found = library.scatter(name)
    if found is None:
        close = nearest(name, library.choices("tightening", "method"))
        remedy = f'did you mean "{close}"?' if close else "slip tables tightening lists them"
        raise s.stop_value("method", "unknown-method", "a tightening method of the table", remedy)
    return found


def ranged(s: Section, name: str) -> Range:
    """A key's range, or None when the file is silent."""
    value = s.get(name)
    return (float(value[0]), float(value[1])) if value is not None else None


def losses(r: Reader, s: Section, plates: tuple[Plate, ...] | None, bolt: Bolt | None) -> Losses:
    """[losses]; what is not given is taken from table and practice, and said."""
    for name, code, text in (
        ("embedding", "embedding-table", "embedding by the table"),
        ("relaxation", "relaxation-5", "relaxation 5 % of the preload"),
        ("thermal", "no-thermal", "no change of temperature since assembly"),
    ):
        if not s.has(name):
            r.assume(code, text, f"losses.{name}")
    kind, size = s.get("embedding", ("auto", 0.0))
    thermal, relaxation = s.get("thermal"), s.get("relaxation", 0.05)
    if plates is None or bolt is None:
        raise Stop
    if kind != "force":
        need_springs(r, plates, bolt, "embedding", 'write embedding = 0 or a force such as "4500 N"')
    if isinstance(thermal, Rises):
        thermal = _rises(r, s, thermal, plates, bolt)
    return Losses(
        embedding_force=size if kind == "force" else None,
        embedding_length=size if kind == "length" else None,
        relaxation=relaxation,
        thermal=thermal,
        washer_material=bolt.material,
    )


def _rises(r: Reader, s: Section, rises: Rises, plates: tuple[Plate, ...], bolt: Bolt) -> Rises:
    """Rises of bolt and plates, one for each plate."""
    need_springs(r, plates, bolt, "thermal", 'write thermal as a loss such as "3000 N"')
    without = [p.name for p in plates if p.material is not None and p.material.expansion is None]
    without += ["the bolt"] if bolt.material.expansion is None else []
    if without:
        found, write = f"no expansion of {', '.join(without)}", 'add expansion = "11.5e-6 1/K" to the material'
        raise s.stop("thermal", "missing-key", found, "the expansion of every part", write)
    if len(rises.plates) not in (1, len(plates)):
        expected = f"one rise for all plates, or {len(plates)}"
        raise s.stop_value("thermal", "wrong-count", expected, "give one for each plate")
    return rises if len(rises.plates) == len(plates) else Rises(rises.bolt, rises.plates * len(plates))
